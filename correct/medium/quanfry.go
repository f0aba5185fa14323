package medium

// Coefficients of the index of sea water relative to air, wavelength in nm
// (Quan & Fry 1995, Applied Optics 34(18), 3477-3480).
const (
	qf0 = 1.31405
	qf1 = 1.779e-4
	qf2 = -1.05e-6
	qf3 = 1.6e-8
	qf4 = -2.02e-6
	qf5 = 15.868
	qf6 = 0.01155
	qf7 = -0.00423
	qf8 = -4382
	qf9 = 1.1455e6
)

// quanFry returns the index of sea water at atmospheric pressure relative to
// air, and its slope lambda dn/dlambda, for a temperature in degrees C, a
// practical salinity and a vacuum wavelength in nm.
//
// It is a polynomial in 1/lambda, so each term's slope is the term times minus
// its power.
func quanFry(temperatureC, salinity, wavelengthNM float64) (n, slope float64) {
	t, s, u := temperatureC, salinity, 1/wavelengthNM
	c0, c1 := quanFryCoefficients(t, s)
	first, second, third := c1*u, qf8*u*u, qf9*u*u*u
	return c0 + first + second + third, -first - 2*second - 3*third
}

// quanFryCoefficients returns the coefficients of lambda^0 and of lambda^-1
// (nm), the two that depend on temperature and salinity.
func quanFryCoefficients(t, s float64) (c0, c1 float64) {
	return qf0 + (qf1+(qf2+qf3*t)*t)*s + qf4*t*t, qf5 + qf6*s + qf7*t
}
