package pipeline

import (
	"math"
	"slices"

	"bentray/correct"
	"bentray/geo"
	"bentray/io/cloud"
	"bentray/pipeline/job"
)

// workspace holds what correcting a chunk needs beyond the chunk itself. It goes
// with the chunk from file to file, so that nothing is allocated a point.
type workspace struct {
	out         []correct.Outcome
	raw, origin correct.XYZ
	planes      correct.Planes
	light       correct.Light
	result      correct.Result
	polygon     []int32

	spare [8][]float64 // for results that have no column in the chunk
}

// correctChunk corrects the decoded rows of a chunk: it fills Class, XYZ and
// Added, and adds to the tally. The stages come in the order of the outcomes'
// precedence.
func (s *survey) correctChunk(c *cloud.Chunk, r *reading, l *layout, w *workspace, t *tally) {
	c.Resize(c.Rows, l.Layout)
	w.prepare(c, l)
	w.takeRaw(c, s)

	correct.MarkInvalid(w.out, w.raw)
	r.markNotSelected(w.out, c)
	s.markOutside(w, c)
	s.fillPlanes(w, c, r)
	correct.MarkNoSurface(w.out, w.planes)
	correct.MarkDry(w.out, &w.result, w.raw, w.planes)
	s.bend(w, c, r)

	t.add(w)
	s.toUnits(c, w)
}

// prepare makes room for a chunk's rows. Results are written straight into the
// chunk's columns, or to spare memory where it has no such column.
func (w *workspace) prepare(c *cloud.Chunk, l *layout) {
	w.out = cloud.Grow(w.out, c.Rows)
	clear(w.out)
	w.polygon = cloud.Grow(w.polygon, c.Rows)
	for _, column := range []*[]float64{
		&w.raw.X, &w.raw.Y, &w.raw.Z, &w.planes.Level, &w.planes.SlopeX, &w.planes.SlopeY, &w.light.Water, &w.light.WaterGroup,
	} {
		*column = cloud.Grow(*column, c.Rows)
	}
	w.result.XYZ = correct.XYZ{X: c.XYZ[0], Y: c.XYZ[1], Z: c.XYZ[2]}
	for i, into := range []struct {
		column int
		result *[]float64
	}{
		{l.depth, &w.result.Depth},
		{l.waterLevel, &w.result.WaterLevel},
		{l.entryLevel, &w.result.EntryLevel},
		{l.incidence, &w.result.IncidenceRad},
		{l.refraction, &w.result.RefractionRad},
		{l.origin[0], &w.origin.X},
		{l.origin[1], &w.origin.Y},
		{l.origin[2], &w.origin.Z},
	} {
		if into.column >= 0 {
			*into.result = c.Added[into.column]
			continue
		}
		w.spare[i] = cloud.Grow(w.spare[i], c.Rows)
		*into.result = w.spare[i]
	}
}

// takeRaw brings the raw coordinates to metres.
func (w *workspace) takeRaw(c *cloud.Chunk, s *survey) {
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
	s.extent.Find(w.polygon, c.Numbers[0], c.Numbers[1])
	for i, polygon := range w.polygon {
		if w.out[i] == correct.Corrected && polygon < 0 {
			w.out[i] = correct.Outside
		}
	}
}

// fillPlanes asks the water surface for its plane at each point.
func (s *survey) fillPlanes(w *workspace, c *cloud.Chunk, r *reading) {
	p, surface := &w.planes, s.job.Surface
	switch {
	case surface.Level != nil:
		geo.FillLevel(p.Level, p.SlopeX, p.SlopeY, *surface.Level*s.height)
	case surface.Plane != nil:
		s.plane().Fill(p.Level, p.SlopeX, p.SlopeY, w.raw.X, w.raw.Y)
	default:
		copy(p.Level, c.Numbers[r.level])
		scale(p.Level, s.height)
		clear(p.SlopeX)
		clear(p.SlopeY)
	}
}

func (s *survey) plane() geo.Plane {
	p := s.job.Surface.Plane
	return geo.Plane{Level: p.Level * s.height, AtX: p.At[0] * s.plan, AtY: p.At[1] * s.plan, SlopeX: p.SlopeX, SlopeY: p.SlopeY}
}

// bend runs the ray model.
func (s *survey) bend(w *workspace, c *cloud.Chunk, r *reading) {
	fill(w.light.Water, s.optics.waterPhase)
	fill(w.light.WaterGroup, s.optics.waterGroup)
	w.light.Air, w.light.RangeIndex = s.optics.airPhase, s.optics.ranges
	if s.job.Rays.Model == job.Vertical {
		correct.Vertical(&w.result, w.out, w.raw, w.planes, w.light)
		return
	}
	if r.originByTime() {
		s.trajectory.At(w.origin.X, w.origin.Y, w.origin.Z, c.Numbers[r.time])
	} else {
		copy(w.origin.X, c.Numbers[r.origin[0]])
		copy(w.origin.Y, c.Numbers[r.origin[1]])
		copy(w.origin.Z, c.Numbers[r.origin[2]])
		s.scaleXYZ(w.origin, s.plan, s.height)
	}
	correct.Pulse(&w.result, w.out, w.raw, w.origin, w.planes, w.light, s.job.Limits.MaxIncidence*radiansPerDegree)
}

const radiansPerDegree = math.Pi / 180

// toUnits brings the results to the file's units and gives each row its class.
// Origins stay only where a ray was traced from them.
func (s *survey) toUnits(c *cloud.Chunk, w *workspace) {
	for i, o := range w.out {
		c.Class[i] = uint8(o)
		if o != correct.Corrected {
			c.XYZ[0][i], c.XYZ[1][i], c.XYZ[2][i] = c.Numbers[0][i], c.Numbers[1][i], c.Numbers[2][i]
		} else if s.plan != 1 || s.height != 1 {
			c.XYZ[0][i] /= s.plan
			c.XYZ[1][i] /= s.plan
			c.XYZ[2][i] /= s.height
		}
		if !traced(o) {
			w.origin.X[i], w.origin.Y[i], w.origin.Z[i] = math.NaN(), math.NaN(), math.NaN()
		}
	}
	s.scaleXYZ(w.origin, 1/s.plan, 1/s.height)
	for _, heights := range [][]float64{w.result.Depth, w.result.WaterLevel, w.result.EntryLevel} {
		scale(heights, 1/s.height)
	}
	scale(w.result.IncidenceRad, 1/radiansPerDegree)
	scale(w.result.RefractionRad, 1/radiansPerDegree)
}

func fill(column []float64, value float64) {
	for i := range column {
		column[i] = value
	}
}
