package geo

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/interp"
)

// levelFit is a monotone regression of level points along a line: of sign times
// their level, falling.
type levelFit struct {
	sign                        float64
	chainage, z, r, weight, tmp []float64
	sigma                       float64
	blocks                      []block
}

// newLevelFit returns a fit of level points sorted along the line, sign 1 for levels
// that fall along it, -1 for levels that rise.
func newLevelFit(points []levelPoint, sign float64) *levelFit {
	n := len(points)
	f := &levelFit{sign: sign, chainage: make([]float64, n), z: make([]float64, n)}
	f.r, f.weight, f.tmp = make([]float64, n), make([]float64, n), make([]float64, n)
	for i, p := range points {
		f.chainage[i], f.z[i] = p.chainage, sign*p.z
	}
	return f
}

// run makes the reweighted regressions, the first with weights by the differences to
// the regression of medians. The others take the residuals from the curve, so that a
// point that had no weight can come back.
func (f *levelFit) run() {
	medianDown(f.r, f.z)
	for range profileRounds {
		f.sigma = robustSigma(f.r, f.tmp, 0)
		cut := biweightCut * max(f.sigma, profileFloor)
		for i, r := range f.r {
			f.weight[i] = biweight(r, cut)
		}
		f.blocks = poolDown(f.blocks[:0], f.chainage, f.z, f.weight, f.sigma)
		level, _ := f.curves()
		for i, s := range f.chainage {
			f.r[i] = f.z[i] - f.sign*level.Predict(s)
		}
	}
}

// misfit returns the sum of absolute residuals.
func (f *levelFit) misfit() float64 {
	sum := 0.0
	for _, r := range f.r {
		sum += math.Abs(r)
	}
	return sum
}

// knot is a level at a chainage, with its 1-sigma (m).
type knot struct{ chainage, level, sigma float64 }

// knots returns the mean levels of the blocks. The first and the last lie amid their
// blocks, so two more carry the level on to the first and last point that
// has weight, along the line through the nearest two knots.
func (f *levelFit) knots() []knot {
	knots := make([]knot, 0, len(f.blocks)+2)
	for _, b := range f.blocks {
		knots = append(knots, knot{b.chainage, f.sign * b.level, f.sigma / math.Sqrt(b.weight)})
	}
	if len(knots) == 1 { // two, since curves need them
		return append(knots, knot{knots[0].chainage + 1, knots[0].level, knots[0].sigma})
	}
	first, last := f.ends()
	n := len(knots)
	if first < knots[0].chainage {
		knots = slices.Insert(knots, 0, knots[0].carried(knots[1], first))
		n++
	}
	if last > knots[n-1].chainage {
		knots = append(knots, knots[n-1].carried(knots[n-2], last))
	}
	return knots
}

// carried returns the knot at a chainage on the line through k and another one.
func (k knot) carried(other knot, chainage float64) knot {
	share := (chainage - k.chainage) / (k.chainage - other.chainage)
	return knot{chainage, k.level + share*(k.level-other.level), math.Hypot((1+share)*k.sigma, share*other.sigma)}
}

// ends returns the chainages of the first and last point with weight.
func (f *levelFit) ends() (first, last float64) {
	low, high := 0, len(f.weight)-1
	for f.weight[low] == 0 {
		low++
	}
	for f.weight[high] == 0 {
		high--
	}
	return f.chainage[low], f.chainage[high]
}

// curves returns level and sigma over chainage.
func (f *levelFit) curves() (interp.FritschButland, interp.PiecewiseLinear) {
	var at, level, sigma []float64
	for _, k := range f.knots() {
		at, level, sigma = append(at, k.chainage), append(level, k.level), append(sigma, k.sigma)
	}
	var curve interp.FritschButland
	var line interp.PiecewiseLinear
	// Both fail only where chainages do not rise, and those of blocks do.
	if curve.Fit(at, level) != nil || line.Fit(at, sigma) != nil {
		panic("geo: blocks of a profile out of order")
	}
	return curve, line
}
