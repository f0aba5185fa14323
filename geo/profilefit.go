package geo

import "math"

// ProfileFit describes how the level points of a Profile agree with it.
type ProfileFit struct {
	Chainage    []float64 // of each point as given, from the line's first vertex, m; NaN beyond reach
	Residuals   []float64 // z minus the profile, m; NaN beyond reach
	Sigma       float64   // 1-sigma of one point about its straight reach, m; NaN without redundancy
	Redundancy  int       // points with weight beyond those that levels and slopes of the reaches take
	Spread      float64   // rms of the residuals of points with weight, m
	Scatter     float64   // 1-sigma of one point against the next, m; NaN with one point that has weight
	Beyond      int       // points beyond reach, not used
	SetAside    int       // points so far off that they have no weight
	IsAside     []bool    // which these are; false beyond reach
	Knots       int       // levels between which the profile interpolates
	First, Last float64   // chainage of the first and last point with weight, m
	Gap         Drop      // the longest way between two points with weight
	Steps       []Drop    // where the level falls at once, as at a weir: by 0.1 m and 5 Sigma more than beside
	Unplaced    []Drop    // gaps of more than 10 m where it falls by so much: where in them is not known
	Falling     bool      // the level falls along the line as given, or is constant
}

// unevenRatio is how many times Scatter the Spread of an uneven fit is. It is 1 for
// errors that know nothing of each other. Chosen by simulation (TestProfileUneven).
const unevenRatio = 3

// IsUneven tells whether neighbouring points agree far better with each other than
// with the profile (compare von Neumann 1941): their levels do something that no
// profile does, such as rise and fall. Differences below 1 cm are none.
func (f *ProfileFit) IsUneven() bool {
	return f.Spread > max(unevenRatio*f.Scatter, profileFloor)
}

// judge takes the residuals of the points, and from those that count, in their order
// along the line, how they spread.
func (p *Profile) judge(f *levelFit) {
	var steps []float64
	square, used, before := 0.0, 0, math.NaN()
	for i, pt := range f.points {
		level, _, _ := p.level.at(pt.chainage)
		r := pt.z - level
		p.fit.Residuals[pt.number] = r
		if f.weight[i] == 0 {
			p.fit.SetAside++
			p.fit.IsAside[pt.number] = true
			continue
		}
		if used > 0 {
			steps = append(steps, (r-before)/math.Sqrt2)
		}
		square, used, before = square+r*r, used+1, r
	}
	p.fit.Spread, p.fit.Scatter = math.Sqrt(square/float64(used)), math.NaN()
	if len(steps) > 0 {
		p.fit.Scatter = robustSigma(steps, f.tmp, 0)
	}
}
