package geo

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"
)

const (
	// profileRounds is the number of reweighted regressions.
	profileRounds = 20

	// profileFloor (m) is the least sigma that a reweighting uses: waterlines are
	// not surveyed better, and so a difference of centimetres is averaged, not set
	// aside.
	profileFloor = 0.01
)

// Profile is a water surface whose level follows a centreline. It does not change
// once made, so goroutines may share it.
type Profile struct {
	line  *polyline
	reach float64
	level levelLine // between the first and last level point with weight
	fit   ProfileFit
}

// Fit returns how the level points agree with the profile. The caller must not
// change its slices.
func (p *Profile) Fit() ProfileFit { return p.fit }

// NewProfile returns the surface with levels along a centreline, from the vertices
// lineX, lineY of the line and level points x, y, z (all m). Vertices and level
// points have slices of one length each (otherwise it panics), which are not kept.
//
// Each level point counts at the chainage of the nearest point of the line. The
// levels are fitted by a monotone regression, pooling adjacent violators (Ayer and
// others 1955). Its blocks are joined to straight reaches, level or falling, as long as
// the Bayesian information criterion (Schwarz 1978) falls. Points are reweighted with
// Tukey's biweight by the spread about the reaches, so a blunder has no weight. Reaches
// whose lines meet within 5 sigma have a bend there; else, as at a weir, the
// level drops from the last point of the one to the first point of the next. The
// data choose whether the level falls or rises along the line as drawn: that with the
// lesser sum of absolute residuals, falling where both are equal.
//
// A blunder right at a step, between the levels above and below it, can pass for a
// part of the step, and one above all others at the upper end for a step there. 10 000
// level points take about half a second.
//
// Level points further than reach (m) from the line are counted and not used.
//
// Errors: reach not above 0 or not finite; a line with less than two different
// vertices, or one that is not finite; as *RecordError, a level point that is not
// finite; fewer than 2 level points within reach.
func NewProfile(lineX, lineY, x, y, z []float64, reach float64) (*Profile, error) {
	if len(lineY) != len(lineX) || len(y) != len(x) || len(z) != len(x) {
		panic(errLengths)
	}
	if !(reach > 0) || math.IsInf(reach, 0) {
		return nil, fmt.Errorf("reach is %v m, want a length above 0", reach)
	}
	line, err := newPolyline(lineX, lineY)
	if err != nil {
		return nil, err
	}
	p := &Profile{line: line, reach: reach}
	points, err := p.project(x, y, z)
	if err != nil {
		return nil, err
	}
	if len(points) < 2 {
		return nil, fmt.Errorf("%d of %d level points lie within %v m of the centreline, want at least 2", len(points), len(x), reach)
	}
	p.regress(points)
	return p, nil
}

// levelPoint is a level point within reach; number is its place as given.
type levelPoint struct {
	chainage, z float64
	number      int
}

// project returns the level points within reach, sorted along the line.
func (p *Profile) project(x, y, z []float64) ([]levelPoint, error) {
	p.fit.Chainage, p.fit.Residuals = make([]float64, len(x)), make([]float64, len(x))
	p.fit.IsAside = make([]bool, len(x))
	var points []levelPoint
	for i := range x {
		if !isFinite(x[i], y[i], z[i]) {
			return nil, &RecordError{Index: i, Err: errors.New("a coordinate is not finite, want x, y and z")}
		}
		p.fit.Chainage[i], p.fit.Residuals[i] = math.NaN(), math.NaN()
		if f := p.line.nearest(x[i], y[i], p.reach, 0); f.segment >= 0 {
			p.fit.Chainage[i] = p.line.chainageOf(f)
			points = append(points, levelPoint{p.fit.Chainage[i], z[i], i})
		}
	}
	p.fit.Beyond = len(x) - len(points)
	slices.SortFunc(points, func(a, b levelPoint) int {
		return cmp.Or(cmp.Compare(a.chainage, b.chainage), cmp.Compare(a.z, b.z))
	})
	return points, nil
}

// regress fits the levels falling and rising, and keeps the better.
func (p *Profile) regress(points []levelPoint) {
	down, up := newLevelFit(points, 1), newLevelFit(points, -1)
	down.run()
	up.run()
	best := down
	if up.misfit() < down.misfit() {
		best = up
	}
	knots := knotsOf(best.blocks, best.sigma)
	p.fit.Sigma, p.fit.Redundancy = best.sigma, best.redundancy()
	if p.fit.Redundancy == 0 {
		p.fit.Sigma = math.NaN()
	}
	p.level = newLevelLine(knots, best.sign, p.fit.Sigma)
	p.fit.First, p.fit.Last = knots[0].chainage, knots[len(knots)-1].chainage
	p.fit.Falling, p.fit.Knots = best == down, len(knots)
	p.judge(best)
	p.findDrops(best)
}

// Fill fills a chunk with the surface: level (m) and slopes at the positions x, y (m),
// five slices of one length, otherwise it panics. A destination may be x or y.
//
// The level is that at the nearest point of the centreline, the slope is along the
// line there and 0 across it. Of points equally near, as inside a bend, the one
// nearer to the line's start counts; outside of a bend, where the nearest point is
// the vertex, the slope points along the segment before it. Before the first and after
// the last level point with weight the level holds, with slope 0; between them the
// slope is constant from knot to knot. Level and slopes are NaN farther than reach from
// the line or, along it, from these points, and where x or y is NaN.
//
// It takes some 200 ns a position where they come in order, half as much again where
// they do not.
func (p *Profile) Fill(level, slopeX, slopeY, x, y []float64) {
	n := len(level)
	if len(slopeX) != n || len(slopeY) != n || len(x) != n || len(y) != n {
		panic(errLengths)
	}
	hint := 0
	for i := range level {
		f, s := p.at(x[i], y[i], hint)
		if f.segment < 0 {
			level[i], slopeX[i], slopeY[i] = math.NaN(), math.NaN(), math.NaN()
			continue
		}
		hint = f.segment
		length := p.line.chainage[hint+1] - p.line.chainage[hint]
		at, slope, _ := p.level.at(s)
		level[i] = at
		slopeX[i] = slope * (p.line.x[hint+1] - p.line.x[hint]) / length
		slopeY[i] = slope * (p.line.y[hint+1] - p.line.y[hint]) / length
	}
}

// FillSigma fills a chunk with the 1-sigma (m) of the level that Fill gives: that of
// the straight reaches' lines at the knots, linear between them. It tells nothing of
// what the level does between two points. Lengths, aliasing and NaN are those of Fill;
// NaN, too, where the points leave no redundancy.
func (p *Profile) FillSigma(sigma, x, y []float64) {
	if len(x) != len(sigma) || len(y) != len(sigma) {
		panic(errLengths)
	}
	hint := 0
	for i := range sigma {
		f, s := p.at(x[i], y[i], hint)
		if f.segment < 0 {
			sigma[i] = math.NaN()
			continue
		}
		hint = f.segment
		_, _, sigma[i] = p.level.at(s)
	}
}

// Steepest returns the greatest slope along the line, 0 or above.
func (p *Profile) Steepest() float64 {
	steepest := 0.0
	for k := 1; k < len(p.level.level); k++ {
		steepest = max(steepest, math.Abs(p.level.level[k]-p.level.level[k-1])/(p.level.chainage[k]-p.level.chainage[k-1]))
	}
	return steepest
}

// at returns the nearest point of the line and its chainage; its segment is -1 where
// there is no surface.
func (p *Profile) at(x, y float64, hint int) (foot, float64) {
	f := p.line.nearest(x, y, p.reach, hint)
	if f.segment < 0 {
		return f, 0
	}
	s := p.line.chainageOf(f)
	if s < p.fit.First-p.reach || s > p.fit.Last+p.reach {
		f.segment = -1
	}
	return f, s
}
