package geo

import "math"

const (
	// biweightCut, in sigmas, is where the biweight of Beaton and Tukey (1974) falls
	// to 0. With it a fit of normal errors has 95 % of the efficiency of least
	// squares (Holland and Welsch 1977, table 1).
	biweightCut = 4.685

	// madToSigma turns the median absolute error of normal errors into their
	// sigma: 1 over the 0.75 quantile, 0.67449, of the standard normal distribution.
	madToSigma = 1.4826

	// scaleFloor (m) is the least sigma that a reweighting uses, so that heights
	// written in steps, or without any noise, keep all their points.
	scaleFloor = 1e-3
)

// biweight returns the weight, 1 to 0, of an error r with the given cut.
func biweight(r, cut float64) float64 {
	u := r / cut
	if !(math.Abs(u) < 1) {
		return 0
	}
	u = 1 - u*u
	return u * u
}

// median returns the median of v, the mean of the middle two where their number is
// even. It reorders v, which holds at least one number and no NaN.
func median(v []float64) float64 {
	k := len(v) / 2
	selectNth(v, k)
	if len(v)%2 == 1 {
		return v[k]
	}
	below := v[0]
	for _, w := range v[1:k] {
		below = max(below, w)
	}
	return below + (v[k]-below)/2
}

// selectNth reorders v so that v[k] is what it would be if v were sorted, with
// nothing greater below it (Hoare 1961, algorithm 65).
func selectNth(v []float64, k int) {
	for low, high := 0, len(v)-1; low < high; {
		pivot, i, j := v[low+(high-low)/2], low, high
		for i <= j {
			for v[i] < pivot {
				i++
			}
			for v[j] > pivot {
				j--
			}
			if i <= j {
				v[i], v[j] = v[j], v[i]
				i++
				j--
			}
		}
		switch {
		case k <= j:
			high = j
		case k >= i:
			low = i
		default:
			return
		}
	}
}

// robustSigma returns the sigma of errors r about a fit of p coefficients, from
// their median absolute value; scratch holds at least as many numbers.
func robustSigma(r, scratch []float64, p int) float64 {
	scratch = scratch[:len(r)]
	for i, v := range r {
		scratch[i] = math.Abs(v)
	}
	n := float64(len(r))
	return madToSigma * median(scratch) * math.Sqrt(n/max(n-float64(p), 1))
}

// isFinite tells whether every number is finite.
func isFinite(values ...float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}
