package acoustics

import "math"

// span is what a crossed layer adds to a ray: run is to be multiplied by p, and time by
// atanhRatio(gradient time).
type span struct{ run, time float64 }

// crossing returns the span of a layer of thickness z whose speeds and absolute cosines are
// c0, k0 and c1, k1 at its ends; p2 is the squared ray parameter. The formulas stand at Trace.
func crossing(z, c0, c1, k0, k1, p2 float64) span {
	sum, a, b := z*(c0+c1), c0*c0, c1*c1
	d := a + b - p2*a*b
	inverse := 1 / ((k0 + k1) * d)
	return span{sum * d * inverse, sum * (1 + k0*k1) * inverse}
}

// atanhRatio returns atanh(x) / x, for |x| below 1: by its series where what is left out is below
// 1e-16.
func atanhRatio(x float64) float64 {
	if y := x * x; y < 1e-8 {
		return 1 + y*(1./3)
	}
	return wideAtanhRatio(x)
}

func wideAtanhRatio(x float64) float64 {
	if y := x * x; y < 1e-3 {
		return 1 + y*(1./3+y*(1./5+y*(1./7+y*(1./9))))
	}
	return math.Atanh(x) / x
}

// within returns how far a ray runs, and how much deeper it goes, in the time t inside one
// layer, through its vertex if it comes to it: c and k are the speed and the cosine (up is
// negative) where it begins, p the ray parameter, g the gradient.
//
// It is tan(th1/2) = tan(th0/2) E with E = exp(g t), in cosines. The factor (E - 1) / g tends
// to t with the gradient, and nothing else is divided by it.
func within(t, c, k, p, g float64) (run, z float64) {
	m, e := t, 0.0
	if x := g * t; x != 0 {
		e = math.Expm1(x)
		m = t * (e / x)
	}
	scale := c * m / (2 + (1-k)*e*(e+2))
	return c * p * scale * (2 + e), scale * (2*k - (1-k)*e)
}
