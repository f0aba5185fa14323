package pipeline

import (
	"math"
	"slices"

	"bentray/correct"
	"bentray/io/cloud"
)

// correctChunk corrects the decoded rows of a chunk: it fills Class, XYZ and
// Added, and adds to the tally. The stages come in the order of the outcomes'
// precedence. It fails where a point names a camera of another sensor.
func (s *survey) correctChunk(c *cloud.Chunk, r *reading, l *layout, w *workspace, t *tally) error {
	c.Resize(c.Rows, l.Layout)
	w.prepare(c, l, s)
	s.toScale(c, r)
	s.takeRaw(w, c)
	s.takeTimes(w, c, r)

	correct.MarkInvalid(w.out, w.raw)
	r.markNotSelected(w.out, c)
	r.markNoRule(w, c)
	s.markOutside(w, c)
	s.fillZones(w.zone, c.Numbers[0], c.Numbers[1])
	s.surface.fill(w.planes, w.raw.X, w.raw.Y, w.moments, w.zone, s.ownLevels(w, c, r))
	correct.MarkNoSurface(w.out, w.planes)
	s.markDry(w)
	fill(w.rayCount, math.NaN())
	s.bendSensors(w, c, r)
	if w.fault != nil {
		return w.fault
	}

	t.add(w, c, r, s)
	s.toUnits(c, l, w)
	return nil
}

// markDry sets Dry where a raw point lies on its sensor's own side of the surface.
func (s *survey) markDry(w *workspace) {
	if !slices.ContainsFunc(s.sensors, (*sensor).looksUp) {
		correct.MarkDry(w.out, &w.result, w.raw, w.planes)
		return
	}
	w.side = cloud.Grow(w.side, len(w.out))
	for _, up := range []bool{false, true} {
		for i, o := range w.out {
			w.side[i] = o
			if o == correct.Corrected && s.sensors[w.sensor[i]].looksUp() != up {
				w.side[i] = correct.NoRule
			}
		}
		mark := correct.MarkDry
		if up {
			mark = correct.MarkWet
		}
		mark(w.side, &w.result, w.raw, w.planes)
		for i, o := range w.side {
			if o == correct.Dry {
				w.out[i] = o
			}
		}
	}
}

// toScale brings times that are dates to the scale of the job's numbers.
func (s *survey) toScale(c *cloud.Chunk, r *reading) {
	if r.timestamps {
		s.fromUTC(c.Numbers[r.time])
	}
}

// takeRaw brings the raw coordinates to metres.
func (s *survey) takeRaw(w *workspace, c *cloud.Chunk) {
	copy(w.raw.X, c.Numbers[0])
	copy(w.raw.Y, c.Numbers[1])
	copy(w.raw.Z, c.Numbers[2])
	s.scaleXYZ(w.raw, s.plan, s.height)
}

func (s *survey) scaleXYZ(p correct.XYZ, plan, height float64) {
	scale(p.X, plan)
	scale(p.Y, plan)
	scale(p.Z, height)
}

// takeTimes gives each row its UTC: of its own time or, in a cloud without times,
// the one that the job names.
func (s *survey) takeTimes(w *workspace, c *cloud.Chunk, r *reading) {
	switch {
	case !s.needsUTC():
		return
	case r.time >= 0:
		for i, t := range c.Numbers[r.time] {
			w.own[i] = s.times.UTC(t)
		}
	default:
		fill(w.own, math.NaN())
	}
	if r.time < 0 && s.surface.at != nil {
		fill(w.utc, *s.surface.at)
		return
	}
	copy(w.utc, w.own)
}

func (s *survey) needsUTC() bool {
	return s.surface.timed || s.surface.grid != nil || s.water.stations != nil && s.water.stations.HasTimes()
}

// ownLevels returns the cloud's own water levels in metres, where it has them.
func (s *survey) ownLevels(w *workspace, c *cloud.Chunk, r *reading) []float64 {
	if r.level < 0 {
		return nil
	}
	copy(w.column, c.Numbers[r.level])
	scale(w.column, s.height)
	return w.column
}

// markNotSelected sets NotSelected where a condition does not hold.
func (r *reading) markNotSelected(out []correct.Outcome, c *cloud.Chunk) {
	for _, w := range r.where {
		for i := range out {
			if out[i] == correct.Corrected && !w.holds(c, i) {
				out[i] = correct.NotSelected
			}
		}
	}
}

// markNoRule finds the first sensor whose conditions hold, and sets NoRule where
// there is none.
func (r *reading) markNoRule(w *workspace, c *cloud.Chunk) {
	for i := range w.out {
		w.sensor[i] = 0
		if w.out[i] != correct.Corrected {
			continue
		}
		k := slices.IndexFunc(r.sensors, func(where []condition) bool {
			return !slices.ContainsFunc(where, func(w condition) bool { return !w.holds(c, i) })
		})
		if k < 0 {
			w.out[i] = correct.NoRule
			continue
		}
		w.sensor[i] = uint8(k)
	}
}

func (w *condition) holds(c *cloud.Chunk, row int) bool {
	if w.texts != nil {
		return w.texts[string(c.Texts[w.column].At(row))]
	}
	return slices.Contains(w.numbers, c.Numbers[w.column][row])
}

// markOutside sets Outside where the extent does not hold the raw point.
func (s *survey) markOutside(w *workspace, c *cloud.Chunk) {
	if s.extent == nil {
		return
	}
	s.extent.Find(w.zone, c.Numbers[0], c.Numbers[1])
	for i, polygon := range w.zone {
		if w.out[i] == correct.Corrected && polygon < 0 {
			w.out[i] = correct.Outside
		}
	}
}

const radiansPerDegree = math.Pi / 180

// toUnits brings the results to the file's units, gives each row its class, and
// leaves empty what a row did not get to.
func (s *survey) toUnits(c *cloud.Chunk, l *layout, w *workspace) {
	for i, o := range w.out {
		c.Class[i] = w.sensor[i]*uint8(correct.NumOutcomes) + uint8(o)
		if o != correct.Corrected {
			c.XYZ[0][i], c.XYZ[1][i], c.XYZ[2][i] = c.Numbers[0][i], c.Numbers[1][i], c.Numbers[2][i]
		} else if s.plan != 1 || s.height != 1 {
			c.XYZ[0][i] /= s.plan
			c.XYZ[1][i] /= s.plan
			c.XYZ[2][i] /= s.height
		}
	}
	s.scaleXYZ(w.origin, 1/s.plan, 1/s.height)
	for _, heights := range [][]float64{w.result.Depth, w.result.WaterLevel, w.result.EntryLevel} {
		scale(heights, 1/s.height)
	}
	scale(w.result.IncidenceRad, 1/radiansPerDegree)
	scale(w.result.RefractionRad, 1/radiansPerDegree)
	clearUnless(rayed, l.rayedOnly, c, w.out)
	clearUnless(traced, l.tracedOnly, c, w.out)
	clearUnless(watered, l.wateredOnly, c, w.out)
	s.clearGroups(c, l, w)
	s.countPulses(l, w)
}

// countPulses notes the one ray of each traced pulse in a cloud that images made points of
// too.
func (s *survey) countPulses(l *layout, w *workspace) {
	if l.rayCount < 0 {
		return
	}
	for i, k := range w.sensor {
		if s.sensors[k].isPulse() && traced(w.out[i]) {
			w.rayCount[i] = 1
		}
	}
}

// clearGroups empties the group index of points that no pulse made.
func (s *survey) clearGroups(c *cloud.Chunk, l *layout, w *workspace) {
	if l.waterGroup < 0 || len(s.sensors) == 1 {
		return
	}
	for i, k := range w.sensor {
		if !s.sensors[k].isPulse() {
			c.Added[l.waterGroup][i] = math.NaN()
		}
	}
}

// clearUnless empties columns by row where an outcome has no value in them.
func clearUnless(has outcomes, columns []int, c *cloud.Chunk, out []correct.Outcome) {
	for _, column := range columns {
		values := c.Added[column]
		for i, o := range out {
			if !has(o) {
				values[i] = math.NaN()
			}
		}
	}
}

func fill(column []float64, value float64) {
	for i := range column {
		column[i] = value
	}
}
