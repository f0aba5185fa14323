package pipeline

import (
	"slices"

	"bentray/correct"
	"bentray/io/cloud"
)

// workspace holds what correcting a chunk needs beyond the chunk itself. It goes
// with the chunk from file to file, so that nothing is allocated a point. Lengths
// are in metres.
type workspace struct {
	out    []correct.Outcome
	sensor []uint8 // which one; 0 where none
	zone   []int32 // which one; -1 for none
	moments

	raw, origin correct.XYZ
	planes      correct.Planes
	column      []float64 // the cloud's own water levels
	light       correct.Light
	result      correct.Result

	temperature, salinity, source []float64 // source: position among waters.sources
	fromStations                  [2][]float64
	rows                          []int32 // that take their water from stations

	part part
	meet meeting

	side     []correct.Outcome // as seen by some of the sensors
	rays     rays
	rayCount []float64
	fault    error // of a point's views

	spare [17][]float64 // for results that have no column in the chunk
}

// moments are the times of points, UTC seconds since 1970, NaN for none.
type moments struct {
	own []float64 // the cloud's
	utc []float64 // the same or, in a cloud without times, the one that the job names
}

// part is a chunk's points for one sensor: those of the others are not Corrected
// in it.
type part struct {
	out    []correct.Outcome
	origin correct.XYZ
	planes correct.Planes
	result correct.Result
}

// prepare makes room for a chunk's rows. Results are written straight into the
// chunk's columns, or to spare memory where it has no such column.
func (w *workspace) prepare(c *cloud.Chunk, l *layout, s *survey) {
	n := c.Rows
	w.out = cloud.Grow(w.out, n)
	clear(w.out)
	w.fault, w.rays.widest, w.rays.images = nil, 0, imageCheck{}
	w.sensor, w.zone = cloud.Grow(w.sensor, n), cloud.Grow(w.zone, n)
	growAll(n, &w.own, &w.utc, &w.raw.X, &w.raw.Y, &w.raw.Z, &w.planes.Level, &w.column)
	if !s.isConstantWater() {
		growAll(n, &w.fromStations[0], &w.fromStations[1])
	}
	if s.surface.curved || s.hasCasts() || slices.ContainsFunc(s.sensors, s.hasOwnTimes) {
		w.meet.prepare(n)
	}
	if len(s.sensors) > 1 {
		w.part.prepare(n)
	}
	w.result.XYZ = correct.XYZ{X: c.XYZ[0], Y: c.XYZ[1], Z: c.XYZ[2]}
	for i, into := range []struct {
		column int
		result *[]float64
	}{
		{l.depth, &w.result.Depth},
		{l.waterLevel, &w.result.WaterLevel},
		{l.entryLevel, &w.result.EntryLevel},
		{l.slope[0], &w.planes.SlopeX},
		{l.slope[1], &w.planes.SlopeY},
		{l.incidence, &w.result.IncidenceRad},
		{l.refraction, &w.result.RefractionRad},
		{l.origin[0], &w.origin.X},
		{l.origin[1], &w.origin.Y},
		{l.origin[2], &w.origin.Z},
		{l.temperature, &w.temperature},
		{l.salinity, &w.salinity},
		{l.source, &w.source},
		{l.rayCount, &w.rayCount},
		{l.water, &w.light.Water},
		{l.waterGroup, &w.light.WaterGroup},
	} {
		if into.column >= 0 {
			*into.result = c.Added[into.column]
			continue
		}
		w.spare[i] = cloud.Grow(w.spare[i], n)
		*into.result = w.spare[i]
	}
}

func (p *part) prepare(n int) {
	p.out = cloud.Grow(p.out, n)
	r := &p.result
	growAll(n, &p.origin.X, &p.origin.Y, &p.origin.Z, &p.planes.Level, &p.planes.SlopeX, &p.planes.SlopeY,
		&r.X, &r.Y, &r.Z, &r.Depth, &r.WaterLevel, &r.EntryLevel, &r.IncidenceRad, &r.RefractionRad)
}

func (m *meeting) prepare(n int) {
	m.unmet, m.before = cloud.Grow(m.unmet, n), cloud.Grow(m.before, n)
	growAll(n, &m.x, &m.y, &m.lastX, &m.lastY, &m.there.Level, &m.there.SlopeX, &m.there.SlopeY, &m.clear, &m.gain, &m.depth)
}

func growAll(n int, columns ...*[]float64) {
	for _, column := range columns {
		*column = cloud.Grow(*column, n)
	}
}
