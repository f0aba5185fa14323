package medium

// millardSeaver returns the index of sea water relative to air, and its slope
// lambda dn/dlambda, at a vacuum wavelength in nm.
//
// The 27 terms of Millard & Seaver 1990 (Deep-Sea Research 37(12), 1909-1926)
// are gathered by their power of the wavelength l in micrometres; each power's
// slope is the term times the power.
//
// The last digits of the coefficients of p (1.5868383e-6) and t^4
// (-2.0883178e-10) are not certain; the variants in print differ by less than
// 1e-7 of the index.
func millardSeaver(w Water, wavelengthNM float64) (n, slope float64) {
	l := wavelengthNM / 1000
	u := 1 / (l * l)
	free := millardSeaverFree(w.TemperatureC, w.Salinity, w.PressureDbar)
	linear := l * millardSeaverLinear(w.TemperatureC, w.Salinity)
	square := -4.5536802e-3 * l * l
	inverse2 := u * (2.5471707e-3 + 2.4239607e-6*w.Salinity + 1.0712063e-8*w.PressureDbar)
	inverse4 := 7.501966e-6 * u * u
	inverse6 := 2.802632e-6 * u * u * u
	n = free + linear + square + inverse2 + inverse4 + inverse6
	slope = linear + 2*square - 2*inverse2 - 4*inverse4 - 6*inverse6
	return n, slope
}

// millardSeaverFree sums the terms without the wavelength: pure water, salt and
// pressure, for t in degrees C, practical salinity s and p in dbar gauge.
func millardSeaverFree(t, s, p float64) float64 {
	water := 1.3280657 + t*(-5.2883907e-6+t*(-3.0738272e-6+t*(3.0124687e-8-2.0883178e-10*t)))
	salt := 1.9029121e-4 + t*(-7.3960297e-7+t*(8.9818478e-9+1.2078804e-10*t))
	pressure := 1.5868383e-6 + t*(-9.4834486e-9+1.0100326e-10*t) + p*(-1.574074e-11+5.8085198e-15*t*t)
	pressureSalt := -1.1177517e-9 + t*(5.7311268e-11-1.5460458e-12*t)
	return water + salt*s + p*(pressure+pressureSalt*s)
}

// millardSeaverLinear is the coefficient of the wavelength to the first power
// (micrometres). The exponent of the t^3 term is -9: the paper's Table 2 is met
// only so.
func millardSeaverLinear(t, s float64) float64 {
	return t * (1.0508621e-5 + t*(2.1282248e-7-1.705881e-9*t) - 3.589495e-7*s)
}
