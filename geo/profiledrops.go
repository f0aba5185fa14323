package geo

import (
	"cmp"
	"math"
	"slices"
)

const (
	// stepLength (m) is the length up to which a drop between two level points is a step
	// whose place is known well enough. Chosen: water falls over a weir within less.
	stepLength = 10

	// leastStep (m) is the least fall that counts as a step. Chosen: a level wrong by it
	// moves the bottom by some 3 cm, a quarter of it (the index is 4/3).
	leastStep = 0.1

	// stepSigmas is how many sigmas of a level point a step is at least.
	stepSigmas = 5

	// besideSpans is how many spans on either side say how steep the river is there.
	besideSpans = 3
)

// Drop is the way between two neighbouring level points with weight, or a row of them:
// chainages, and by how much the level differs between them, 0 or above; all in m.
type Drop struct{ From, To, Fall float64 }

func (d Drop) length() float64 { return d.To - d.From }

func (d Drop) slope() float64 { return d.Fall / d.length() }

// findDrops looks between neighbouring points for the longest way without one, and for
// falls that the slopes beside them do not explain: steps where the way is short, else
// unplaced.
func (p *Profile) findDrops(f *levelFit) {
	spans := p.spans(f)
	least := max(leastStep, stepSigmas*f.sigma)
	for i, d := range spans {
		if d.length() > p.fit.Gap.length() {
			p.fit.Gap = d
		}
		slope, isKnown := slopeBeside(spans, i)
		switch steps := p.fit.Steps; {
		case !isKnown || d.Fall-slope*d.length() <= least:
		case d.length() > stepLength:
			p.fit.Unplaced = append(p.fit.Unplaced, d)
		case len(steps) > 0 && steps[len(steps)-1].To == d.From:
			last := &steps[len(steps)-1]
			last.To, last.Fall = d.To, last.Fall+d.Fall
		default:
			p.fit.Steps = append(steps, d)
		}
	}
}

// spans returns the ways between neighbouring points with weight.
func (p *Profile) spans(f *levelFit) []Drop {
	var spans []Drop
	before, levelBefore := math.NaN(), 0.0
	for i, s := range f.chainage {
		if f.weight[i] == 0 || s == before {
			continue
		}
		level, _, _ := p.level.at(s)
		if before < s {
			spans = append(spans, Drop{before, s, math.Abs(level - levelBefore)})
		}
		before, levelBefore = s, level
	}
	return spans
}

// slopeBeside returns how steep the level is beside a span, and whether there is one
// beside it: the median of the next few spans, on the side where that is greater.
func slopeBeside(spans []Drop, i int) (slope float64, isKnown bool) {
	for _, side := range [][]Drop{spans[max(i-besideSpans, 0):i], spans[i+1 : min(i+1+besideSpans, len(spans))]} {
		if len(side) > 0 {
			slope, isKnown = max(slope, medianSlope(side)), true
		}
	}
	return slope, isKnown
}

// medianSlope returns the median slope of spans, of two the greater.
func medianSlope(spans []Drop) float64 {
	ordered := slices.SortedFunc(slices.Values(spans), func(a, b Drop) int { return cmp.Compare(a.slope(), b.slope()) })
	return ordered[len(ordered)/2].slope()
}
