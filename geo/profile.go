package geo

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/interp"
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
	line        *polyline
	reach       float64
	level       interp.FritschButland
	sigma       interp.PiecewiseLinear
	first, last float64 // chainage of the first and last level point, m
	fit         ProfileFit
}

// ProfileFit describes how the level points of a Profile agree with it.
type ProfileFit struct {
	Chainage  []float64 // of each point as given, from the line's first vertex, m; NaN beyond reach
	Residuals []float64 // z minus the profile, m; NaN beyond reach
	Sigma     float64   // 1-sigma of one point, m
	Beyond    int       // points beyond reach, not used
	SetAside  int       // points so far off that they have no weight
	IsAside   []bool    // which these are; false beyond reach
	Knots     int       // levels between which the profile interpolates
	Falling   bool      // the level falls along the line as given, or is constant
}

// Fit returns how the level points agree with the profile. The caller must not
// change its slices.
func (p *Profile) Fit() ProfileFit { return p.fit }

// NewProfile returns the surface with levels along a centreline, from the vertices
// lineX, lineY of the line and level points x, y, z (all m). Vertices and level
// points have slices of one length each (otherwise it panics), which are not kept.
//
// Each level point counts at the chainage of the nearest point of the line. The
// levels are fitted by a monotone regression, pooling adjacent violators, and
// reweighted with Tukey's biweight about the median absolute error, so a blunder has
// no weight. Neighbouring blocks of points stay apart where their levels differ by
// more than 3 sigma. Between the mean places of the blocks the level is the
// monotone cubic of Fritsch and Butland (1984). The data choose whether the level
// falls or rises along the line as drawn: that with the lesser sum of absolute
// residuals, falling where both are equal. Where a river falls evenly, errors of one
// point are averaged over the reach in which it falls by some sigmas.
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
	p.level, p.sigma = best.curves()
	p.first, p.last = points[0].chainage, points[len(points)-1].chainage
	p.fit.Falling, p.fit.Knots = best == down, len(best.blocks)
	p.fit.Sigma = best.sigma
	for i, pt := range points {
		p.fit.Residuals[pt.number] = best.sign * best.r[i]
		if best.weight[i] == 0 {
			p.fit.SetAside++
			p.fit.IsAside[pt.number] = true
		}
	}
}

// Fill fills a chunk with the surface: level (m) and slopes at the positions x, y (m),
// five slices of one length, otherwise it panics. A destination may be x or y.
//
// The level is that at the nearest point of the centreline, the slope is along the
// line there and 0 across it. Of points equally near, as inside a bend, the one
// nearer to the line's start counts; outside of a bend, where the nearest point is
// the vertex, the slope points along the segment before it. Beyond the ends of the
// line, and before the first and after the last level point, the last level holds,
// with its slope. Level and slopes are NaN farther than reach from the line or, along
// it, from the level points, and where x or y is NaN.
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
		slope := p.level.PredictDerivative(s) / length
		level[i] = p.level.Predict(s)
		slopeX[i] = slope * (p.line.x[hint+1] - p.line.x[hint])
		slopeY[i] = slope * (p.line.y[hint+1] - p.line.y[hint])
	}
}

// FillSigma fills a chunk with the 1-sigma (m) of the level that Fill gives: that of
// the blocks' mean levels, linear between them. Lengths, aliasing and NaN are those
// of Fill.
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
		sigma[i] = p.sigma.Predict(s)
	}
}

// at returns the nearest point of the line and its chainage; its segment is -1 where
// there is no surface.
func (p *Profile) at(x, y float64, hint int) (foot, float64) {
	f := p.line.nearest(x, y, p.reach, hint)
	if f.segment < 0 {
		return f, 0
	}
	s := p.line.chainageOf(f)
	if s < p.first-p.reach || s > p.last+p.reach {
		f.segment = -1
	}
	return f, s
}
