package pipeline

import (
	"math"

	"bentray/correct"
	"bentray/io/cloud"
	"bentray/pipeline/job"
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
	switch sn.Rays.Model {
	case job.Multiview:
		fillXYZ(p.origin, math.NaN())
		s.throughCameras(p, sn, w, c, r)
	case job.Vertical:
		fillXYZ(p.origin, math.NaN())
		s.throughWater(p, sn, w, func() { correct.Vertical(&p.result, p.out, w.raw, p.planes, w.light) })
	case job.Pulse:
		s.takeOrigins(p.origin, sn, c, r)
		s.bendPulses(p, sn, w)
	}
}

func (s *survey) bendPulses(p *part, sn *sensor, w *workspace) {
	limit := s.job.Limits.MaxIncidence * radiansPerDegree
	if !s.surface.curved {
		correct.MarkNoOrigin(p.out, w.raw, p.origin, p.planes)
		s.throughWater(p, sn, w, func() { correct.Pulse(&p.result, p.out, w.raw, p.origin, p.planes, w.light, limit) })
		return
	}
	s.meetSurface(p, w)
	s.throughWater(p, sn, w, func() {
		correct.Pulse(&p.result, p.out, w.raw, p.origin, p.planes, w.light, limit)
		s.takeTrueLevels(p, w)
	})
	p.markUnmet(w)
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

// fail takes back the results of a point.
func (p *part) fail(i int, o correct.Outcome) {
	r, nan := &p.result, math.NaN()
	p.out[i] = o
	r.Depth[i], r.WaterLevel[i], r.EntryLevel[i], r.IncidenceRad[i], r.RefractionRad[i] = nan, nan, nan, nan, nan
}
