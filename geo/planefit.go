package geo

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
)

const (
	// planeTrials is the number of planes through three points that a fit starts
	// from. With 15 % of the points wrong and 15 % on one bank, about 117 of them go
	// through right points on both.
	planeTrials = 500

	// planeSample is how many points at most judge these planes.
	planeSample = 2000

	// planeRounds is the number of reweighted fits; what they change falls by half or
	// more from one to the next.
	planeRounds = 40

	// minAcross is the least spread across a bank, over the spread along it: a
	// condition number of the slopes of 1e6.
	minAcross = 1e-3

	// maxBankSigma (m) is the greatest 1-sigma of the level as far off the bank as the
	// points spread along it.
	maxBankSigma = 0.05
)

// PlaneFit is a plane fitted to waterline points, with what is known of its errors.
// AtX and AtY are the mean place of the points that have weight; there the errors of
// the level and of the slopes are independent.
type PlaneFit struct {
	Plane
	Residuals []float64 // z minus the plane, for each point as given, m
	Sigma     float64   // 1-sigma of one point, m
	SetAside  int       // points so far off that they have no weight
	IsAside   []bool    // which these are

	// 1-sigma of Level (m) and of the slopes; NaN for fewer than 4 points.
	LevelSigma, SlopeXSigma, SlopeYSigma float64

	slopeCovariance float64
}

// FitPlane fits a plane to waterline points x, y, z (m), three slices of one length
// (otherwise it panics). It holds with a third of the points wrong, all to one side
// too.
//
// The start is the best of 500 planes through three points, drawn with a fixed seed:
// the least median of their absolute errors (Rousseeuw 1984) gives the scale, and the
// plane is that with the least sum of squares, each bounded at 4.685 sigma (Torr and
// Zisserman 2000). From there least squares are reweighted with Tukey's biweight
// about the median absolute error. The standard
// errors are those of an M-estimate (Huber 1981, section 7.6), and take the points'
// errors as independent.
//
// Errors: fewer than 3 points; as *RecordError, a coordinate that is not finite; and
// points along one straight bank, which do not give the slope across it. They are
// refused where their spread (root mean square) across the bank is below 0.001 of
// that along it, or where the 1-sigma of the level, as far off the bank as the points
// spread along it, is above 5 cm.
func FitPlane(x, y, z []float64) (PlaneFit, error) {
	if len(y) != len(x) || len(z) != len(x) {
		panic(errLengths)
	}
	if len(x) < 3 {
		return PlaneFit{}, fmt.Errorf("plane has %d waterline points, want at least 3", len(x))
	}
	for i := range x {
		if !isFinite(x[i], y[i], z[i]) {
			return PlaneFit{}, &RecordError{Index: i, Err: errors.New("a coordinate is not finite, want x, y and z")}
		}
	}
	f := newPlaneFitter(x, y, z)
	if !f.start() {
		return PlaneFit{}, errors.New("waterline points lie on one line, want points on both banks, or give the plane by level and slopes")
	}
	for range planeRounds {
		f.step()
	}
	return f.finish()
}

// FillSigma fills a chunk with the 1-sigma (m) of the plane's level at the positions
// x, y (m), three slices of one length (otherwise it panics); sigma may be x or y.
func (f *PlaneFit) FillSigma(sigma, x, y []float64) {
	if len(x) != len(sigma) || len(y) != len(sigma) {
		panic(errLengths)
	}
	level, sx, sy := f.LevelSigma*f.LevelSigma, f.SlopeXSigma*f.SlopeXSigma, f.SlopeYSigma*f.SlopeYSigma
	for i := range sigma {
		u, v := x[i]-f.AtX, y[i]-f.AtY
		sigma[i] = math.Sqrt(level + u*u*sx + v*v*sy + 2*u*v*f.slopeCovariance)
	}
}

// planeFitter fits one plane z = level + sx u + sy v, with u and v (m) from a point
// amid the waterline.
type planeFitter struct {
	atX, atY, atZ           float64
	u, v, z, r, weight, tmp []float64
	sx, sy, level           float64
	equations               normal
}

// newPlaneFitter returns a fitter of differences to the mean point.
func newPlaneFitter(x, y, z []float64) *planeFitter {
	n := len(x)
	f := &planeFitter{atX: x[0], atY: y[0], atZ: z[0]}
	f.u, f.v, f.z = make([]float64, n), make([]float64, n), make([]float64, n)
	f.r, f.weight, f.tmp = make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range x {
		f.atX += (x[i] - x[0]) / float64(n)
		f.atY += (y[i] - y[0]) / float64(n)
	}
	for i := range x {
		f.u[i], f.v[i], f.z[i] = x[i]-f.atX, y[i]-f.atY, z[i]-f.atZ
	}
	return f
}

// trial is a plane through three points.
type trial struct{ sx, sy, level float64 }

// start takes the best of the planes through three points; false where no three
// points give a plane. The least median of them gives the scale only: with few points,
// or most of them on one bank, planes that turn about that bank come close to it. The
// plane is the one with the least sum of squares bounded at the cut, which counts all
// points.
func (f *planeFitter) start() bool {
	rng := rand.New(rand.NewPCG(1984, 871))
	judges := rng.Perm(len(f.u))[:min(len(f.u), planeSample)]
	trials := f.trials(rng)
	scale := math.Inf(1)
	for _, p := range trials {
		scale = min(scale, median(f.errorsOf(p, judges)))
	}
	cut := biweightCut * max(madToSigma*scale, scaleFloor)
	best := math.Inf(1)
	for _, p := range trials {
		loss := 0.0
		for _, r := range f.errorsOf(p, judges) {
			loss += min(r*r, cut*cut)
		}
		if loss < best {
			best, f.sx, f.sy, f.level = loss, p.sx, p.sy, p.level
		}
	}
	f.difference()
	return len(trials) > 0
}

// trials returns planes through three points drawn by chance.
func (f *planeFitter) trials(rng *rand.Rand) []trial {
	n := len(f.u)
	var trials []trial
	for range planeTrials {
		i, k := rng.IntN(n), rng.IntN(n)
		j := (i + 1 + rng.IntN(n-1)) % n
		if sx, sy, ok := f.slopesThrough(i, j, k); ok {
			trials = append(trials, trial{sx, sy, f.z[i] - sx*f.u[i] - sy*f.v[i]})
		}
	}
	return trials
}

// errorsOf returns the absolute errors of some points, in memory that the next call
// uses again.
func (f *planeFitter) errorsOf(p trial, points []int) []float64 {
	for m, i := range points {
		f.tmp[m] = math.Abs(f.z[i] - p.level - p.sx*f.u[i] - p.sy*f.v[i])
	}
	return f.tmp[:len(points)]
}

// slopesThrough returns the slopes of the plane through three points; false where
// they lie on one line.
func (f *planeFitter) slopesThrough(i, j, k int) (sx, sy float64, ok bool) {
	u1, v1, z1 := f.u[j]-f.u[i], f.v[j]-f.v[i], f.z[j]-f.z[i]
	u2, v2, z2 := f.u[k]-f.u[i], f.v[k]-f.v[i], f.z[k]-f.z[i]
	det := u1*v2 - u2*v1
	if !(math.Abs(det) > 1e-6*math.Hypot(u1, v1)*math.Hypot(u2, v2)) {
		return 0, 0, false
	}
	return (z1*v2 - z2*v1) / det, (u1*z2 - u2*z1) / det, true
}

// difference takes the residuals of the plane.
func (f *planeFitter) difference() {
	for i := range f.r {
		f.r[i] = f.z[i] - (f.level + f.sx*f.u[i] + f.sy*f.v[i])
	}
}

// cut returns the residual from which on a point has no weight.
func (f *planeFitter) cut() float64 {
	return biweightCut * max(robustSigma(f.r, f.tmp, 3), scaleFloor)
}

// step makes one reweighted fit; where the points that are left do not give one, the
// plane stays as it is.
func (f *planeFitter) step() {
	cut, m := f.cut(), &f.equations
	m.reset(3)
	for i := range f.r {
		row := [3]float64{f.u[i], f.v[i], 1}
		m.add(row[:], f.z[i], biweight(f.r[i], cut))
	}
	if m.factor() {
		m.solve(&m.b)
		f.sx, f.sy, f.level = m.b[0], m.b[1], m.b[2]
		f.difference()
	}
}
