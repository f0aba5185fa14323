package geo

import (
	"math"
	"slices"
)

// bendSigmas is how many sigmas the lines of two neighbouring blocks may differ by
// where they meet and count as one line with a bend. More than the 3 of a test of chance:
// straight reaches are off a curve that they follow where they end, and a step there would be
// steeper than the river (TestProfileSlope).
const bendSigmas = 5

// knot is a level at a chainage (m), falling along the line, with its variance, where
// that of a point is 1.
type knot struct{ chainage, level, variance float64 }

// knotAt returns the knot at a chainage of a block.
func knotAt(b *block, chainage float64) knot {
	return knot{chainage, b.at(chainage), b.variance(chainage)}
}

// knotsOf returns the knots of blocks along the line: where the first begins, where
// the last ends, the mean of each, and what lies between two of them. It holds at
// least one.
func knotsOf(blocks []block, sigma float64) []knot {
	var knots []knot
	add := func(more ...knot) {
		for _, k := range more {
			if n := len(knots); n == 0 || k.chainage > knots[n-1].chainage {
				knots = append(knots, k)
			}
		}
	}
	last := &blocks[len(blocks)-1]
	add(knotAt(&blocks[0], blocks[0].first))
	for i := range blocks {
		if i > 0 {
			add(between(&blocks[i-1], &blocks[i], sigma)...)
		}
		add(knotAt(&blocks[i], blocks[i].chainage))
	}
	add(knotAt(last, last.last))
	return fallingKnots(knots)
}

// between returns the knots between two neighbouring blocks. Where their lines meet
// halfway, within errors of sigma (m), and neither is shorter than the way, they share
// a knot there; else there is a step from the end of the one to the start of the other.
func between(a, b *block, sigma float64) []knot {
	middle, way := a.last+(b.first-a.last)/2, b.first-a.last
	p, q := knotAt(a, middle), knotAt(b, middle)
	apart := math.Abs(p.level-q.level) > bendSigmas*sigma*math.Sqrt(p.variance+q.variance)
	if apart || way > min(a.last-a.first, b.last-b.first) {
		return []knot{knotAt(a, a.last), knotAt(b, b.first)}
	}
	share := p.variance / (p.variance + q.variance)
	return []knot{{middle, p.level + share*(q.level-p.level), share * q.variance}}
}

// fallingKnots pools the levels of knots that rise along the line.
func fallingKnots(knots []knot) []knot {
	n := len(knots)
	at, level, weight := make([]float64, n), make([]float64, n), make([]float64, n)
	for i, k := range knots {
		at[i], level[i], weight[i] = k.chainage, k.level, 1/k.variance
	}
	pools := poolDown(nil, at, level, weight)
	for i := range knots {
		if knots[i].chainage > pools[0].last {
			pools = pools[1:]
		}
		knots[i].level = pools[0].level
	}
	return knots
}

// levelLine is a level over the chainage, straight between knots and constant beyond
// them; all in m.
type levelLine struct{ chainage, level, sigma []float64 }

// newLevelLine returns the levelLine through knots that fall or, with sign -1, rise,
// where a point has that sigma (m).
func newLevelLine(knots []knot, sign, sigma float64) levelLine {
	var p levelLine
	for _, k := range knots {
		p.chainage, p.level, p.sigma = append(p.chainage, k.chainage), append(p.level, sign*k.level), append(p.sigma, sigma*math.Sqrt(k.variance))
	}
	return p
}

// at returns level (m), slope and sigma (m) at a chainage. At a knot the slope is that
// before it, at the first and last knot and beyond them it is 0.
func (p *levelLine) at(chainage float64) (level, slope, sigma float64) {
	k, _ := slices.BinarySearch(p.chainage, chainage)
	if k == 0 {
		return p.level[0], 0, p.sigma[0]
	}
	if last := len(p.chainage) - 1; k > last || chainage == p.chainage[last] {
		return p.level[last], 0, p.sigma[last]
	}
	long, rise := p.chainage[k]-p.chainage[k-1], p.level[k]-p.level[k-1]
	share := (chainage - p.chainage[k-1]) / long
	return p.level[k-1] + share*rise, rise / long, p.sigma[k-1] + share*(p.sigma[k]-p.sigma[k-1])
}
