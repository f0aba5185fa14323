package geo

import (
	"math"
	"slices"
)

const (
	// patchRadius, in cells, is how far from its centre a patch uses points.
	patchRadius = 2

	// patchRounds is the greatest number of reweighted fits. They end before where
	// sigma changes by less than the share settled; more change little
	// (TestPatchRounds).
	patchRounds = 8
	settled     = 0.02

	// The fewest points of a patch: twice its coefficients.
	minQuadratic, minPlane = 12, 6

	// The greatest leverage of a patch: the variance of its level at its centre over
	// that of the mean of its points. Points all round give 2.7 and 1, a straight shore
	// through the centre 7.2 and 3.1, one half a cell off it 101 and 10.5.
	maxQuadraticLeverage, maxPlaneLeverage = 16, 8
)

// sample is a surface point near a cell: its plan offset from the cell's centre
// (m), its height (m) and time (s, NaN where it has none).
type sample struct{ u, v, z, t float64 }

// patch is the water surface about the centre of a cell,
// z = level + sx u + sy v + xx u^2 + xy u v + yy v^2 at an offset u, v (m).
type patch struct {
	level, sx, sy, xx, xy, yy float64
	sigma                     float64 // of level, m
	from, to                  float64 // times of the first and last point, s; +Inf and -Inf without times
}

// at returns the level and the slopes at an offset from the centre.
func (p *patch) at(u, v float64) (level, sx, sy float64) {
	level = p.level + u*(p.sx+p.xx*u+p.xy*v) + v*(p.sy+p.yy*v)
	return level, p.sx + 2*p.xx*u + p.xy*v, p.sy + 2*p.yy*v + p.xy*u
}

// patchFitter fits patches, one after the other, in memory of its own.
type patchFitter struct {
	radius    float64  // of the samples about the centre, m
	samples   []sample // of the patch in work
	rows      [][maxTerms]float64
	middle    float64   // their median height, m
	z         []float64 // above it
	r         []float64
	kernel    []float64 // weight by distance
	weight    []float64 // times the weight by error
	total     float64   // sum of weight
	scratch   []float64
	equations normal
}

// fit fits a patch to samples that lie within the radius: a quadratic where the
// points determine it, else a plane; false where they determine neither.
func (f *patchFitter) fit(samples []sample) (patch, bool) {
	if len(samples) < minPlane {
		return patch{}, false
	}
	f.load(samples)
	if len(samples) >= minQuadratic && f.reweight(maxTerms) && f.leverage() <= maxQuadraticLeverage {
		return f.result(), true
	}
	if f.reweight(3) && f.leverage() <= maxPlaneLeverage {
		return f.result(), true
	}
	return patch{}, false
}

// load takes the samples and their weights by distance, (1 - d^2/radius^2)^2. The
// coefficients are in units of the radius.
func (f *patchFitter) load(samples []sample) {
	n := len(samples)
	f.samples, f.rows = samples, slices.Grow(f.rows[:0], n)[:n]
	f.z, f.r, f.scratch = resize(f.z, n), resize(f.r, n), resize(f.scratch, n)
	f.kernel, f.weight = resize(f.kernel, n), resize(f.weight, n)
	for i := range samples {
		s := &samples[i]
		u, v := s.u/f.radius, s.v/f.radius
		f.rows[i] = [maxTerms]float64{u * u, u * v, v * v, u, v, 1}
		f.kernel[i] = biweight(math.Sqrt(u*u+v*v), 1)
		f.scratch[i] = s.z
	}
	f.middle = median(f.scratch)
	for i := range samples {
		f.z[i] = samples[i].z - f.middle
	}
}

// resize returns a slice of n numbers, v itself where it is large enough.
func resize(v []float64, n int) []float64 { return slices.Grow(v[:0], n)[:n] }

// reweight fits n coefficients by least squares, reweighted with the biweight; the
// first weights come from the differences to the median height.
func (f *patchFitter) reweight(n int) bool {
	copy(f.r, f.z)
	last := math.Inf(1)
	for range patchRounds {
		sigma := max(robustSigma(f.r, f.scratch, n), scaleFloor)
		if !f.step(n, biweightCut*sigma) {
			return false
		}
		if math.Abs(last-sigma) <= settled*sigma {
			break
		}
		last = sigma
	}
	return true
}

// step makes one fit of n coefficients, with weights by the last differences and
// their cut, and takes the differences to it.
func (f *patchFitter) step(n int, cut float64) bool {
	m := &f.equations
	m.reset(n)
	f.total = 0
	for i, r := range f.r {
		f.weight[i] = f.kernel[i] * biweight(r, cut)
		f.total += f.weight[i]
		m.add(f.rows[i][maxTerms-n:], f.z[i], f.weight[i])
	}
	if !m.factor() {
		return false
	}
	m.solve(&m.b)
	for i := range f.r {
		f.r[i] = f.z[i] - m.value(f.rows[i][maxTerms-n:], &m.b)
	}
	return true
}

// leverage returns the variance of the level at the centre over that of the
// weighted mean of the points.
func (f *patchFitter) leverage() float64 { return f.total * f.equations.constantVariance() }

// result returns the last fit as a patch.
func (f *patchFitter) result() patch {
	p := patch{sigma: f.levelSigma(), from: math.Inf(1), to: math.Inf(-1)}
	n, b := f.equations.n, &f.equations.b
	p.level, p.sx, p.sy = f.middle+b[n-1], b[n-3]/f.radius, b[n-2]/f.radius
	if n == maxTerms {
		square := f.radius * f.radius
		p.xx, p.xy, p.yy = b[0]/square, b[1]/square, b[2]/square
	}
	for i := range f.samples {
		if t := f.samples[i].t; !math.IsNaN(t) {
			p.from, p.to = min(p.from, t), max(p.to, t)
		}
	}
	return p
}

// levelSigma returns the 1-sigma of the level at the centre: that level is a sum of
// the heights times factors, which are squared and summed.
func (f *patchFitter) levelSigma() float64 {
	n := f.equations.n
	var q [maxTerms]float64
	q[n-1] = 1
	f.equations.solve(&q)
	sum := 0.0
	for i := range f.samples {
		factor := f.weight[i] * f.equations.value(f.rows[i][maxTerms-n:], &q)
		sum += factor * factor
	}
	return robustSigma(f.r, f.scratch, n) * math.Sqrt(sum)
}
