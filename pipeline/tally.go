package pipeline

import (
	"math"

	"bentray/correct"
	"bentray/correct/medium"
	"bentray/io/cloud"
)

// tally counts what became of points. Its results do not depend on the order in
// which chunks are added.
type tally struct {
	outcomes         [correct.NumOutcomes]int64
	wet              int64   // of the dry points, those that are wet: on the side of cameras under water
	noPosition       int64   // of the points without origin, those that have none at all
	bounds           [3]span // raw x, y, z in the file's units
	times            span    // gps_time on the job's scale
	depth, incidence span
	water, group     span // indices
	images           viewTally
	extended         int64   // corrected points whose water is outside the formula's published range
	sensors          []int64 // points of each sensor; nil before the first chunk
	gauge            gaugeTally
}

// span is the least and the greatest of some numbers.
type span struct{ low, high float64 }

func emptySpan() span { return span{math.Inf(1), math.Inf(-1)} }

func newTally() *tally {
	e := emptySpan()
	return &tally{bounds: [3]span{e, e, e}, times: e, depth: e, incidence: e, water: e, group: e, images: newViewTally()}
}

func (s *span) add(v float64) {
	if v < s.low {
		s.low = v
	}
	if v > s.high {
		s.high = v
	}
}

// addFinite widens the span by those values that are finite.
func (s *span) addFinite(values []float64) {
	for _, v := range values {
		if v-v == 0 {
			s.add(v)
		}
	}
}

// beyond returns how far a number lies outside the span.
func (s *span) beyond(v float64) float64 { return max(s.low-v, v-s.high, 0) }

func (s *span) isEmpty() bool { return s.low > s.high }

func (s *span) join(o span) {
	s.low, s.high = min(s.low, o.low), max(s.high, o.high)
}

// add counts the points of a corrected chunk, whose results are in metres and
// radians.
func (t *tally) add(w *workspace, c *cloud.Chunk, r *reading, s *survey) {
	if t.sensors == nil {
		t.sensors = make([]int64, len(s.sensors))
	}
	for i, o := range w.out {
		t.outcomes[o]++
		if s.surface.gauges != nil {
			t.gauge.add(s, o, w.utc[i])
		}
		if ruled(o) {
			t.sensors[w.sensor[i]]++
		}
		switch {
		case o == correct.Corrected:
			t.depth.add(w.result.Depth[i])
			t.incidence.add(w.result.IncidenceRad[i])
			t.water.add(w.light.Water[i])
			if s.sensors[w.sensor[i]].isPulse() {
				t.group.add(w.light.WaterGroup[i])
			}
			if !s.isConstantWater() && !s.isPublished(w, i) {
				t.extended++
			}
		case o == correct.Dry && s.sensors[w.sensor[i]].looksUp():
			t.wet++
		case o == correct.NoOrigin && s.sensors[w.sensor[i]].isPulse() && math.IsNaN(w.origin.X[i]+w.origin.Y[i]+w.origin.Z[i]):
			t.noPosition++
		}
	}
	if s.hasMultiview() {
		t.images.widest = max(t.images.widest, w.rays.widest)
		t.images.images.join(w.rays.images)
		for i, k := range w.sensor {
			if s.sensors[k].isMultiview() {
				t.images.add(w, i, r.views >= 0)
			}
		}
	}
	for k := range t.bounds {
		t.bounds[k].addFinite(c.Numbers[k])
	}
	if r.time >= 0 {
		t.times.addFinite(c.Numbers[r.time])
	}
}

// isPublished tells whether a point's water is one that its formula was published for.
func (s *survey) isPublished(w *workspace, i int) bool {
	water := medium.Water{TemperatureC: w.temperature[i], Salinity: w.salinity[i], PressureDbar: s.water.pressure}
	return s.water.formula.Published(water, s.sensors[w.sensor[i]].wavelength)
}

func (t *tally) join(o *tally) {
	for i, n := range o.outcomes {
		t.outcomes[i] += n
	}
	for k := range t.bounds {
		t.bounds[k].join(o.bounds[k])
	}
	if t.sensors == nil {
		t.sensors = make([]int64, len(o.sensors))
	}
	for k, n := range o.sensors {
		t.sensors[k] += n
	}
	t.gauge.join(o.gauge)
	t.wet += o.wet
	t.noPosition += o.noPosition
	t.images.join(&o.images)
	t.times.join(o.times)
	t.extended += o.extended
	t.water.join(o.water)
	t.group.join(o.group)
	t.depth.join(o.depth)
	t.incidence.join(o.incidence)
}

func (t *tally) points() (n int64) {
	for _, c := range t.outcomes {
		n += c
	}
	return n
}

// bySensor returns how many points each sensor made, by name; nil where the job does
// not name its one sensor.
func (t *tally) bySensor(s *survey) map[string]int64 {
	counts := map[string]int64{}
	for k, sn := range s.sensors {
		if sn.Name == "" {
			return nil
		}
		counts[sn.Name] = 0
		if t.sensors != nil {
			counts[sn.Name] = t.sensors[k]
		}
	}
	return counts
}

// counts returns the outcomes that occur, by name.
func (t *tally) counts() map[string]int64 {
	counts := map[string]int64{}
	for o, n := range t.outcomes {
		if correct.Outcome(o) == correct.Dry {
			n -= t.wet
		}
		if n > 0 {
			counts[correct.Outcome(o).String()] = n
		}
	}
	if t.wet > 0 {
		counts[wetName] = t.wet
	}
	return counts
}

// ranges returns the spans over corrected points, in the units of the columns.
func (t *tally) ranges(s *survey) map[string][2]float64 {
	ranges := map[string][2]float64{}
	if t.outcomes[correct.Corrected] == 0 {
		return ranges
	}
	ranges["depth"] = [2]float64{t.depth.low / s.height, t.depth.high / s.height}
	ranges["n_water"] = [2]float64{t.water.low, t.water.high}
	if !t.group.isEmpty() {
		ranges["ng_water"] = [2]float64{t.group.low, t.group.high}
	}
	if !t.incidence.isEmpty() {
		ranges["incidence_deg"] = [2]float64{t.incidence.low / radiansPerDegree, t.incidence.high / radiansPerDegree}
	}
	return ranges
}
