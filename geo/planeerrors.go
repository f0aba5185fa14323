package geo

import (
	"fmt"
	"math"
)

// spread holds the second moments of points in the plan about their mean place.
type spread struct{ n, u, v, uu, uv, vv float64 }

// axes returns the root mean square spread along the points' longest direction and
// across it (m).
func (s *spread) axes() (along, across float64) {
	great := (s.uu + s.vv + math.Hypot(s.uu-s.vv, 2*s.uv)) / 2
	if great == 0 {
		return 0, 0
	}
	small := max((s.uu*s.vv-s.uv*s.uv)/great, 0)
	return math.Sqrt(great / s.n), math.Sqrt(small / s.n)
}

// finish judges the last plane and returns it with its errors.
func (f *planeFitter) finish() (PlaneFit, error) {
	cut := f.cut()
	s := f.kept(cut)
	along, across := s.axes()
	unit := f.unitVariance(cut, s.n)
	far := math.Sqrt(unit/s.n) * along / across // NaN for 3 points, whose errors are not known
	if !(across > minAcross*along) || far > maxBankSigma {
		return PlaneFit{}, fmt.Errorf("waterline points spread %.3g m along one bank and %.3g m across, too little for the slope across it: want points on both banks, or give the plane by level and slopes",
			along, across)
	}
	fit := PlaneFit{
		Plane:     Plane{Level: f.atZ + f.level + f.sx*s.u + f.sy*s.v, AtX: f.atX + s.u, AtY: f.atY + s.v, SlopeX: f.sx, SlopeY: f.sy},
		Residuals: f.r,
		Sigma:     robustSigma(f.r, f.tmp, 3),
		SetAside:  len(f.r) - int(s.n),
		IsAside:   make([]bool, len(f.r)),
	}
	for i, r := range f.r {
		fit.IsAside[i] = !(math.Abs(r) < cut)
	}
	det := s.uu*s.vv - s.uv*s.uv
	fit.LevelSigma = math.Sqrt(unit / s.n)
	fit.SlopeXSigma, fit.SlopeYSigma = math.Sqrt(unit*s.vv/det), math.Sqrt(unit*s.uu/det)
	fit.slopeCovariance = -unit * s.uv / det
	return fit, nil
}

// kept returns the spread of the points with weight; u and v are their mean place.
func (f *planeFitter) kept(cut float64) spread {
	var s spread
	for i, r := range f.r {
		if math.Abs(r) < cut {
			s.n++
			s.u += f.u[i]
			s.v += f.v[i]
		}
	}
	s.u /= s.n
	s.v /= s.n
	for i, r := range f.r {
		if math.Abs(r) < cut {
			u, v := f.u[i]-s.u, f.v[i]-s.v
			s.uu += u * u
			s.uv += u * v
			s.vv += v * v
		}
	}
	return s
}

// unitVariance returns the variance that n points with weight, each with it, would
// give the coefficients by least squares: the mean square of w r over the square of
// the mean of its derivative (Huber 1981, equation 7.6.12, without its factor
// near 1). NaN for 3 points.
func (f *planeFitter) unitVariance(cut, n float64) float64 {
	square, derivative := 0.0, 0.0
	for _, r := range f.r {
		w := biweight(r, cut) * r
		square += w * w
		if q := r * r / (cut * cut); q < 1 {
			derivative += (1 - q) * (1 - 5*q)
		}
	}
	if n <= 3 {
		return math.NaN()
	}
	derivative /= n
	return square / (n - 3) / (derivative * derivative)
}
