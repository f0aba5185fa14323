package quality

import "math"

// muchScatter is the scatter about local planes, as a share of the standard deviation of
// the depths, that counts as large. Check points that scatter so make a slope of its
// square by themselves, here 1 %, since their height is in the residual and in the
// depth (the attenuation of regression with errors in the variable: Fuller 1987,
// Measurement error models, section 1.1).
const muchScatter = 0.1

// scatterOf returns the median scatter about the local planes; NaN where there are none.
func scatterOf(points []CheckPoint) float64 {
	var list []float64
	for _, p := range points {
		if !math.IsNaN(p.Scatter) {
			list = append(list, p.Scatter)
		}
	}
	if len(list) == 0 {
		return math.NaN()
	}
	return percentile(list, 0.5)
}

// isNoisy tells whether a scatter is large beside the spread of the depths.
func isNoisy(scatter float64, points []CheckPoint) bool {
	var mean, squares float64
	for _, p := range points {
		mean += p.Depth / float64(len(points))
	}
	for _, p := range points {
		squares += (p.Depth - mean) * (p.Depth - mean)
	}
	return scatter > muchScatter*math.Sqrt(squares/float64(len(points)-1))
}
