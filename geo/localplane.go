package geo

// LocalPlane fits planes to the points about one place after another, in memory of
// its own. The zero value is ready to use, by one goroutine at a time.
type LocalPlane struct {
	fitter  patchFitter
	samples []sample
}

// Fit returns the level (m) and the slopes, at the place that offsets count from, of
// the plane through points with plan offsets u, v and heights z (m), three slices of
// one length (otherwise it panics). The points lie within the radius (m) of the place;
// they weigh (1 - d^2/radius^2)^2 by their distance d from it, and are reweighted with
// the biweight (Beaton and Tukey 1974), so that it holds with single points wrong.
//
// It returns false where the points do not determine the level: fewer than 6, points on
// a line, or so far to one side that the level's variance exceeds 8 times that of
// their mean.
func (l *LocalPlane) Fit(u, v, z []float64, radius float64) (level, slopeX, slopeY float64, ok bool) {
	if len(v) != len(u) || len(z) != len(u) {
		panic(errLengths)
	}
	if len(u) < minPlane {
		return 0, 0, 0, false
	}
	l.samples = l.samples[:0]
	for i := range u {
		l.samples = append(l.samples, sample{u: u[i], v: v[i], z: z[i]})
	}
	f := &l.fitter
	f.radius = radius
	f.load(l.samples)
	if !f.reweight(3) || !(f.leverage() <= maxPlaneLeverage) {
		return 0, 0, 0, false
	}
	b := &f.equations.b
	return f.middle + b[2], b[0] / radius, b[1] / radius, true
}
