package medium

import "math"

// Coefficients of IAPWS R9-97 (1997), for density over 1000 kg/m3,
// temperature over 273.15 K and wavelength over 589 nm; luv and lir are the
// resonances in the ultraviolet and infrared in the same unit of wavelength.
const (
	r9a0  = 0.244257733
	r9a1  = 9.74634476e-3
	r9a2  = -3.73234996e-3
	r9a3  = 2.68678472e-4
	r9a4  = 1.58920570e-3
	r9a5  = 2.45934259e-3
	r9a6  = 0.900704920
	r9a7  = -1.66626219e-2
	r9luv = 0.2292020
	r9lir = 5.432937
)

// iapws returns the index of water or steam relative to vacuum, and its slope
// lambda dn/dlambda, for a temperature in degrees C, a density in kg/m3 and a
// vacuum wavelength in nm.
//
// R9-97 gives the Lorentz-Lorenz quotient q = (n^2-1)/(n^2+2), so that
// n^2 = (1+2q)/(1-q) and dn = 3 dq / (2n (1-q)^2).
func iapws(temperatureC, density, wavelengthNM float64) (n, slope float64) {
	d := density / 1000
	a, aSlope := molarRefraction(d, (temperatureC+273.15)/273.15, wavelengthNM/589)
	q, qSlope := a*d, aSlope*d
	n = math.Sqrt((1 + 2*q) / (1 - q))
	return n, 3 * qSlope / (2 * n * (1 - q) * (1 - q))
}

// molarRefraction returns q/d, the right side of R9-97, and its slope
// l da/dl, for reduced density d, temperature th and wavelength l.
func molarRefraction(d, th, l float64) (a, slope float64) {
	l2 := l * l
	uv, ir := l2-r9luv*r9luv, l2-r9lir*r9lir
	a = r9a0 + r9a1*d + r9a2*th + r9a3*l2*th + r9a4/l2 + r9a5/uv + r9a6/ir + r9a7*d*d
	slope = 2 * l2 * (r9a3*th - r9a4/(l2*l2) - r9a5/(uv*uv) - r9a6/(ir*ir))
	return a, slope
}
