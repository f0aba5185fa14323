package pipeline

import (
	"math"

	"bentray/correct"
	"bentray/io/cloud"
)

// How a ray meets a curved surface, and how casts are averaged to the true depth:
// tries at most, and metres that the last one may still move.
const (
	meetTries = 20
	meetM     = 1e-6
)

// bendSensors runs each sensor's ray model over its points.
func (s *survey) bendSensors(w *workspace, c *cloud.Chunk, r *reading) {
	if len(s.sensors) == 1 {
		whole := part{w.out, w.origin, w.planes, w.result}
		s.bend(&whole, s.sensors[0], w, c, r)
		return
	}
	correct.Keep(&w.result, w.out, w.raw)
	for k, sn := range s.sensors {
		p := &w.part
		for i, o := range w.out {
			p.out[i] = correct.NoRule
			if o == correct.Corrected && int(w.sensor[i]) == k {
				p.out[i] = correct.Corrected
			}
		}
		copy(p.planes.Level, w.planes.Level)
		copy(p.planes.SlopeX, w.planes.SlopeX)
		copy(p.planes.SlopeY, w.planes.SlopeY)
		s.bend(p, sn, w, c, r)
		p.scatter(w, k)
	}
}

// scatter takes the results of one sensor's points over.
func (p *part) scatter(w *workspace, sensor int) {
	to, from := w.columns(), p.columns()
	for i, o := range w.out {
		if o != correct.Corrected || int(w.sensor[i]) != sensor {
			continue
		}
		for k := range to {
			to[k][i] = from[k][i]
		}
	}
	for i := range w.out {
		if w.out[i] == correct.Corrected && int(w.sensor[i]) == sensor {
			w.out[i] = p.out[i]
		}
	}
}

// columns lists what a ray model writes.
func (p *part) columns() [14][]float64 {
	r := &p.result
	return [14][]float64{
		r.X, r.Y, r.Z, r.Depth, r.WaterLevel, r.EntryLevel, r.IncidenceRad, r.RefractionRad,
		p.origin.X, p.origin.Y, p.origin.Z, p.planes.Level, p.planes.SlopeX, p.planes.SlopeY,
	}
}

func (w *workspace) columns() [14][]float64 {
	whole := part{w.out, w.origin, w.planes, w.result}
	return whole.columns()
}

// bend runs one sensor's ray model over a part.
func (s *survey) bend(p *part, sn *sensor, w *workspace, c *cloud.Chunk, r *reading) {
	switch {
	case sn.isMultiview():
		fillXYZ(p.origin, math.NaN())
		s.throughCameras(p, sn, w, c, r)
		if s.surface.curved || s.hasOwnTimes(sn) {
			s.takeTrueLevels(p, w)
		}
		return
	case !sn.isPulse():
		fillXYZ(p.origin, math.NaN())
		s.throughWater(p, sn, w, func() { correct.Vertical(&p.result, p.out, w.raw, p.planes, w.light) })
		return
	}
	s.takeOrigins(p.origin, sn, c, r)
	correct.MarkNoOrigin(p.out, w.raw, p.origin, p.planes)
	if s.surface.curved {
		s.meetSurface(p, w)
	}
	limit := s.job.Limits.MaxIncidence * radiansPerDegree
	s.throughWater(p, sn, w, func() { correct.Pulse(&p.result, p.out, w.raw, p.origin, p.planes, w.light, limit) })
	if s.surface.curved {
		s.takeTrueLevels(p, w)
	}
}

// takeOrigins gives each point its ray origin in metres.
func (s *survey) takeOrigins(origin correct.XYZ, sn *sensor, c *cloud.Chunk, r *reading) {
	if sn.trajectory != nil {
		sn.trajectory.At(origin.X, origin.Y, origin.Z, c.Numbers[r.time])
		return
	}
	copy(origin.X, c.Numbers[r.origin[0]])
	copy(origin.Y, c.Numbers[r.origin[1]])
	copy(origin.Z, c.Numbers[r.origin[2]])
	s.scaleXYZ(origin, s.plan, s.height)
}

func fillXYZ(p correct.XYZ, value float64) {
	fill(p.X, value)
	fill(p.Y, value)
	fill(p.Z, value)
}

// meetSurface takes the plane of each point anew at its ray's entry, until the
// entries no longer move. The planes end up at the raw positions. An entry that
// has come to rest stays, so a point's result does not depend on its neighbours.
func (s *survey) meetSurface(p *part, w *workspace) {
	m := &w.meet
	copy(m.lastX, w.raw.X)
	copy(m.lastY, w.raw.Y)
	for try := range meetTries {
		correct.EntryPlan(m.x, m.y, p.out, w.raw, p.origin, p.planes)
		moving := false
		for i, o := range p.out {
			if o != correct.Corrected || math.Hypot(m.x[i]-m.lastX[i], m.y[i]-m.lastY[i]) < meetM {
				continue
			}
			moving = true
			m.lastX[i], m.lastY[i] = m.x[i], m.y[i]
			if try == meetTries-1 {
				p.out[i] = correct.Unsolved
			}
		}
		if !moving {
			return
		}
		s.surface.fill(p.planes, m.lastX, m.lastY, w.moments, w.zone, w.column)
		p.planes.CarryToRaw(w.raw, m.lastX, m.lastY)
		correct.MarkNoSurface(p.out, p.planes)
	}
}

// takeTrueLevels asks a curved surface for its level over each true point.
func (s *survey) takeTrueLevels(p *part, w *workspace) {
	m, r := &w.meet, &p.result
	flat := correct.Planes{Level: m.depth, SlopeX: m.lastX, SlopeY: m.lastY}
	s.surface.fill(flat, r.X, r.Y, w.moments, w.zone, w.column)
	for i, o := range p.out {
		switch {
		case o != correct.Corrected:
		case flat.Level[i] != flat.Level[i]:
			p.fail(i, correct.NoSurface)
		default:
			r.WaterLevel[i] = flat.Level[i]
			r.Depth[i] = flat.Level[i] - r.Z[i]
		}
	}
}

// fail takes back the results of a point.
func (p *part) fail(i int, o correct.Outcome) {
	r, nan := &p.result, math.NaN()
	p.out[i] = o
	r.Depth[i], r.WaterLevel[i], r.EntryLevel[i], r.IncidenceRad[i], r.RefractionRad[i] = nan, nan, nan, nan, nan
}

// throughWater gives each point its indices and runs the model; with casts it
// does so again with the water down to the depth found, until that stays.
func (s *survey) throughWater(p *part, sn *sensor, w *workspace, model func()) {
	w.light.Air, w.light.RangeIndex = sn.airPhase, sn.ranges
	if s.isConstantWater() {
		phase, group := s.constantIndex(sn)
		for i, o := range p.out {
			if o != correct.NoRule {
				w.light.Water[i], w.light.WaterGroup[i] = phase, group
			}
		}
		model()
		return
	}
	if !s.hasCasts() {
		s.fillWater(w, p.out, nil)
		s.markWater(w, p.out, sn)
		model()
		return
	}
	s.throughCasts(p, sn, w, model)
}

func (s *survey) hasCasts() bool { return s.water.stations != nil && s.water.stations.HasDepths() }

// throughCasts begins with the water down to the apparent depth. A depth that has
// come to rest stays, and every try begins anew with what was grazing.
func (s *survey) throughCasts(p *part, sn *sensor, w *workspace, model func()) {
	depth := w.meet.depth
	for i := range depth {
		depth[i] = p.planes.Level[i] - w.raw.Z[i]
	}
	for try := range meetTries {
		s.fillWater(w, p.out, depth)
		s.markWater(w, p.out, sn)
		model()
		moving := false
		for i, o := range p.out {
			if o != correct.Corrected || math.Abs(p.result.Depth[i]-depth[i]) < meetM {
				continue
			}
			moving = true
			depth[i] = p.result.Depth[i]
			if try == meetTries-1 {
				p.fail(i, correct.Unsolved)
			}
		}
		if !moving || try == meetTries-1 {
			return
		}
		for i, o := range p.out {
			if o == correct.Grazing {
				p.out[i] = correct.Corrected
			}
		}
	}
}
