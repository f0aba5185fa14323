package geo

import "math"

// GridMisfit says how surface points agree with their grid; lengths are in metres.
type GridMisfit struct {
	Used     int     // points that agree, within 4.685 sigmas
	FarOff   int     // points farther off, which have next to no weight in the grid
	RMS      float64 // of the differences of those that agree
	Largest  float64 // magnitude of those
	Farthest float64 // magnitude, of those far off; 0 without
	Sigma    float64 // of one point, from the median of all differences
}

// Misfit compares points with the surface, for each its own time, offset left out.
// Points where there is no surface, near the rim of the grid, do not count. It takes
// 8 bytes a point and the time of Fill.
func (g *Grid) Misfit(points *SurfacePoints) GridMisfit {
	off := make([]float64, 0, points.held)
	points.each(func(_ uint32, p *surfacePoint) {
		if d := math.Abs(p.z - (g.at(p.x, p.y, p.t, false).level - g.options.Offset)); d == d {
			off = append(off, d)
		}
	})
	var m GridMisfit
	if len(off) == 0 {
		return m
	}
	m.Sigma = madToSigma * median(off)
	cut := biweightCut * max(m.Sigma, scaleFloor)
	square := 0.0
	for _, d := range off {
		if d >= cut {
			m.FarOff++
			m.Farthest = max(m.Farthest, d)
			continue
		}
		m.Used++
		square += d * d
		m.Largest = max(m.Largest, d)
	}
	m.RMS = math.Sqrt(square / float64(m.Used))
	return m
}
