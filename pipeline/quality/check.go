package quality

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"

	"bentray/io/cloud"
)

// readCheck reads the check points of a file: columns x, y, z, projected as the cloud.
// Points with a coordinate that is not finite, or beyond maxValue as values are that
// stand for none, are counted as ignored.
func readCheck(path string) (x, y, z []float64, ignored int, err error) {
	t, err := openTable(path, textOptions{})
	if err != nil {
		return nil, nil, nil, 0, err
	}
	defer t.Close()
	xyz, err := cloud.Coordinates(t.Columns(), nil)
	if err != nil {
		return nil, nil, nil, 0, fmt.Errorf("%s: check points: %w", path, err)
	}
	numbers, _, err := cloud.ReadAll(t, cloud.Request{Numbers: xyz[:]})
	if err != nil {
		return nil, nil, nil, 0, err
	}
	for i := range numbers[0] {
		if !isBinned(numbers[0][i]) || !isBinned(numbers[1][i]) || !isBinned(numbers[2][i]) {
			ignored++
			continue
		}
		x, y, z = append(x, numbers[0][i]), append(y, numbers[1][i]), append(z, numbers[2][i])
	}
	if len(x) == 0 {
		return nil, nil, nil, 0, fmt.Errorf("%s: has no check point with finite coordinates, want columns x, y, z", path)
	}
	if len(x) > maxChecks {
		return nil, nil, nil, 0, fmt.Errorf("%s: has %d check points, want %d at most: thin them", path, len(x), maxChecks)
	}
	return x, y, z, ignored, nil
}

// reportCheck makes the report of matched points. Depth is that of the cloud's
// corrected points.
func reportCheck(r *CheckReport, m *matcher, depth *bins, plan, height float64) {
	r.Points = m.points(r.Match, plan, height)
	r.Given = len(r.Points)
	matched, deep := r.matched(m)
	r.Count, r.Unmatched = len(matched), r.Given-r.OnLand-len(matched)
	r.Residuals = residualsOf(matched)
	slope, sigma := regression(deep)
	r.Slope, r.SlopeSigma = Number(slope), Number(sigma)
	r.Scatter = Number(scatterOf(matched))
	r.Meaning = meaning(slope, isTold(slope, sigma, deep), isNoisy(float64(r.Scatter), deep))
	r.ByDepth = checkBands(deep)
	r.S44 = shares(deep, height)
	r.Warnings = r.warnings(deep, depth)
}

// matched returns the points whose residuals count, and those of them with a depth. It
// takes the residuals of points on land away.
func (r *CheckReport) matched(m *matcher) (matched, deep []CheckPoint) {
	for i := range r.Points {
		p := &r.Points[i]
		if p.Depth <= 0 || math.IsNaN(p.Residual) && m.isDry[i] {
			r.OnLand++
			p.Residual = math.NaN()
		}
		if math.IsNaN(p.Residual) {
			continue
		}
		matched = append(matched, *p)
		if isBinned(p.Depth) {
			deep = append(deep, *p)
		}
	}
	return matched, deep
}

// residualsOf sums up the residuals of matched points.
func residualsOf(points []CheckPoint) Residuals {
	n := float64(len(points))
	if n == 0 {
		nan := Number(math.NaN())
		return Residuals{nan, nan, nan, nan}
	}
	var sum, squares, about float64
	magnitudes := make([]float64, len(points))
	for i, p := range points {
		sum += p.Residual
		squares += p.Residual * p.Residual
		magnitudes[i] = math.Abs(p.Residual)
	}
	bias := sum / n
	for _, p := range points {
		about += (p.Residual - bias) * (p.Residual - bias)
	}
	return Residuals{Number(bias), Number(math.Sqrt(squares / n)), Number(math.Sqrt(about / (n - 1))), Number(percentile(magnitudes, 0.95))}
}

// percentile returns a quantile of values, linear between the order statistics at
// (n-1) p (Hyndman and Fan 1996, Sample quantiles in statistical packages, definition
// 7). It sorts the values; there is at least one.
func percentile(values []float64, p float64) float64 {
	slices.Sort(values)
	at := p * float64(len(values)-1)
	k := int(at)
	if k+1 == len(values) {
		return values[k]
	}
	return values[k] + (at-float64(k))*(values[k+1]-values[k])
}

// regression returns the least-squares slope of the residual against depth, and its
// standard error; NaN where the points do not give them.
func regression(points []CheckPoint) (slope, sigma float64) {
	n := float64(len(points))
	var depth, residual float64
	for _, p := range points {
		depth += p.Depth / n
		residual += p.Residual / n
	}
	var dd, dr, rest float64
	for _, p := range points {
		dd += (p.Depth - depth) * (p.Depth - depth)
		dr += (p.Depth - depth) * (p.Residual - residual)
	}
	if len(points) < 3 || !(dd > 0) {
		return math.NaN(), math.NaN()
	}
	slope = dr / dd
	for _, p := range points {
		e := p.Residual - residual - slope*(p.Depth-depth)
		rest += e * e
	}
	return slope, math.Sqrt(rest / (n - 2) / dd)
}

// leastRise is what a slope makes, in the unit of heights, over the depths of the
// points, below which it is that of rounding alone.
const leastRise = 1e-6

// isTold tells whether a slope differs from none: at 95 % by Student's t, since the
// standard error comes from the points themselves, and by more than rounding.
func isTold(slope, sigma float64, points []CheckPoint) bool {
	if math.IsNaN(slope) {
		return false
	}
	low, high := depths(points)
	t := distuv.StudentsT{Sigma: 1, Nu: float64(len(points) - 2)}.Quantile(0.975)
	return math.Abs(slope) > t*sigma && math.Abs(slope)*(high-low) > leastRise
}

// depths returns the least and the greatest of them; there is a point.
func depths(points []CheckPoint) (low, high float64) {
	byDepth := func(a, b CheckPoint) int { return cmp.Compare(a.Depth, b.Depth) }
	return slices.MinFunc(points, byDepth).Depth, slices.MaxFunc(points, byDepth).Depth
}

// meaning says what a slope of the residual against depth stands for, where it is told
// from none. Noise comes before index and rays where it is large.
func meaning(slope float64, isTold, isNoisy bool) string {
	switch {
	case math.IsNaN(slope):
		return "the check points do not give a slope of the error against depth"
	case !isTold:
		return "no slope of the error against depth beyond its uncertainty at 95 %: nothing speaks against the index and the angles; a bias that is the same at all depths points to the water level, or to different vertical references"
	}
	where := "too shallow"
	if slope < 0 {
		where = "too deep"
	}
	if isNoisy {
		return fmt.Sprintf("the deeper, the more the corrected bed is %s, by %.2f %% of the depth: the corrected points scatter much about the local planes (noise, plants, fish, steep rock, a wide --reach), which does this by itself; clean the cloud before index or rays are blamed", where, 100*math.Abs(slope))
	}
	return fmt.Sprintf("the deeper, the more the corrected bed is %s, by %.2f %% of the depth: an index that is off in proportion does this (temperature, salinity, phase or group index), so does the geometry of the rays (angles, calibration, origins, waves); a wrong water level moves all depths alike and shows in the bias", where, 100*math.Abs(slope))
}

// checkBands sums up the residuals by depth, in round bands.
func checkBands(points []CheckPoint) []CheckBand {
	list := []CheckBand{}
	if len(points) == 0 {
		return list
	}
	low, high := depths(points)
	w := chooseWidth(low, high, maxBands, step{-2})
	groups := make([][]CheckPoint, w.count(low, high))
	first := w.band(low)
	for _, p := range points {
		groups[w.band(p.Depth)-first] = append(groups[w.band(p.Depth)-first], p)
	}
	for i, g := range groups {
		list = append(list, CheckBand{Number(w.from(first + i)), Number(w.to(first + i)), len(g), residualsOf(g)})
	}
	return list
}

// shares returns, by order, which share of the points is within its limit; heights
// have so many metres a unit.
func shares(points []CheckPoint, height float64) map[string]Number {
	list := map[string]Number{}
	for _, o := range orders {
		within := 0
		for _, p := range points {
			if math.Abs(p.Residual)*height <= o.limit(p.Depth*height) {
				within++
			}
		}
		list[o.name] = Number(float64(within) / float64(len(points)))
	}
	return list
}
