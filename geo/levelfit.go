package geo

import (
	"cmp"
	"math"
	"slices"
)

// levelFit is a regression of level points along a line by straight blocks: of sign
// times their level, falling.
type levelFit struct {
	sign                   float64
	points                 []levelPoint // in the order of the slices
	chainage, z, r, weight []float64    // z is sign times the level; r, residuals of it; all but weight in m
	tmp                    []float64
	sigma                  float64 // of a point about the line of its block, m
	blocks                 []block
}

// newLevelFit returns a fit of level points along the line, sign 1 for levels that
// fall along it, -1 for levels that rise.
func newLevelFit(points []levelPoint, sign float64) *levelFit {
	n := len(points)
	f := &levelFit{sign: sign, points: slices.Clone(points), chainage: make([]float64, n), z: make([]float64, n)}
	slices.SortStableFunc(f.points, func(a, b levelPoint) int { // at one chainage rising, so that they are pooled
		return cmp.Or(cmp.Compare(a.chainage, b.chainage), cmp.Compare(sign*a.z, sign*b.z))
	})
	f.r, f.weight, f.tmp = make([]float64, n), make([]float64, n), make([]float64, n)
	for i, p := range f.points {
		f.chainage[i], f.z[i] = p.chainage, sign*p.z
	}
	return f
}

// run makes the reweighted regressions, the first with weights by the differences to
// the regression of medians. Sigma is that of the points about the lines of their
// blocks, so that a step between two of them does not widen it. In the second half
// of the rounds no point comes back, or some would for ever come and go.
func (f *levelFit) run() {
	medianDown(f.r, f.z)
	f.sigma = robustSigma(f.r, f.tmp, 0)
	for round := range profileRounds {
		cut := biweightCut * max(f.sigma, profileFloor)
		for i, r := range f.r {
			if round <= profileRounds/2 || f.weight[i] > 0 {
				f.weight[i] = biweight(r, cut)
			}
		}
		f.blocks = joinBlocks(poolDown(f.blocks[:0], f.chainage, f.z, f.weight))
		f.resid()
		f.sigma = f.scatter()
	}
}

// scatter returns the sigma of the points with weight about the lines of their blocks.
// Half of them lie within it, so the next round does not leave all without weight.
func (f *levelFit) scatter() float64 {
	var used []float64
	for i, r := range f.r {
		if f.weight[i] > 0 {
			used = append(used, r)
		}
	}
	return robustSigma(used, f.tmp, 2*len(f.blocks))
}

// resid takes the residuals, from the line of a point's block; between two blocks from
// that line which is nearer, so that a point that had no weight can come back.
func (f *levelFit) resid() {
	k, last := 0, len(f.blocks)-1
	for i, s := range f.chainage {
		for k < last && s >= f.blocks[k+1].first {
			k++
		}
		f.r[i] = f.z[i] - f.blocks[k].at(s)
		if k < last && s > f.blocks[k].last {
			if r := f.z[i] - f.blocks[k+1].at(s); math.Abs(r) < math.Abs(f.r[i]) {
				f.r[i] = r
			}
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

// redundancy returns how many points with weight there are beyond those that determine
// the lines of the blocks.
func (f *levelFit) redundancy() int {
	n := 0
	for i := range f.blocks {
		n += f.blocks[i].count - f.blocks[i].parameters()
	}
	return n
}
