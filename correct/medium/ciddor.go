package medium

import "math"

// The refractivities below hold at two standard states: dry air at 15 degrees
// C and 101325 Pa, and pure vapour at 20 degrees C and 1333 Pa (Ciddor 1996).
// The molar masses and the gas constant of the printed densities cancel in the
// ratio of a density to its standard, so molar densities serve.
var (
	standardDry    = molarDensity(15, 101325, 0)
	standardVapour = molarDensity(20, 1333, 1)
)

// moistAir returns the phase and group index of air relative to vacuum, for a
// temperature in degrees C, a pressure in Pa, the molar fraction of water
// vapour (0 to 1), CO2 in ppm and a vacuum wavelength in nm (Ciddor 1996).
//
// The densities do not depend on the wavelength, so the group refractivities of
// the two parts mix like the phase ones.
func moistAir(temperatureC, pressurePa, fraction, co2PPM, wavelengthNM float64) (phase, group float64) {
	sigma := 1000 / wavelengthNM // per micrometre
	dry, dryGroup := dryRefractivity(sigma*sigma, co2PPM)
	vapour, vapourGroup := vapourRefractivity(sigma * sigma)
	density := molarDensity(temperatureC, pressurePa, fraction)
	a, w := (1-fraction)*density/standardDry, fraction*density/standardVapour
	return 1 + (a*dry + w*vapour), 1 + (a*dryGroup + w*vapourGroup)
}

// dryRefractivity returns n-1 and n_g-1 of standard dry air for a squared
// wavenumber in 1/um^2 and CO2 in ppm (Ciddor 1996). A term
// k/(c-s) with s = sigma^2 has the group term k (c+s)/(c-s)^2.
func dryRefractivity(s, co2PPM float64) (phase, group float64) {
	const k1, c1 = 5792105e-8, 238.0185
	const k3, c2 = 167917e-8, 57.362
	co2 := 1 + 0.534e-6*(co2PPM-450)
	d1, d2 := c1-s, c2-s
	phase = co2 * (k1/d1 + k3/d2)
	group = co2 * (k1*(c1+s)/(d1*d1) + k3*(c2+s)/(d2*d2))
	return phase, group
}

// vapourRefractivity returns n-1 and n_g-1 of standard water vapour for a
// squared wavenumber in 1/um^2 (Ciddor 1996). A term in sigma^m has the
// group term (1+m) times itself.
func vapourRefractivity(s float64) (phase, group float64) {
	const scale = 1.022e-8
	const w0, w1, w2, w3 = 295.235, 2.6422, -0.032380, 0.004028
	phase = scale * (w0 + s*(w1+s*(w2+s*w3)))
	group = scale * (w0 + s*(3*w1+s*(5*w2+s*7*w3)))
	return phase, group
}

// molarDensity returns p/(Z T) in Pa/K: the molar density of moist air times
// the gas constant. Z is the compressibility of BIPM (in Ciddor 1996).
func molarDensity(temperatureC, pressurePa, fraction float64) float64 {
	t, x := temperatureC, fraction
	pt := pressurePa / (t + 273.15)
	first := 1.58123e-6 + t*(-2.9331e-8+1.1043e-10*t) + (5.707e-6-2.051e-8*t)*x + (1.9898e-4-2.376e-6*t)*x*x
	z := 1 - pt*first + pt*pt*(1.83e-11-0.765e-8*x*x)
	return pt / z
}

// vapourFraction returns the molar fraction of water vapour in moist air whose
// vapour pressure, not yet enhanced by the presence of the air, is vapourPa
// (Ciddor 1996).
func vapourFraction(temperatureC, pressurePa, vapourPa float64) float64 {
	enhancement := 1.00062 + 3.14e-8*pressurePa + 5.6e-7*temperatureC*temperatureC
	return enhancement * vapourPa / pressurePa
}

// saturationPressure returns the pressure of water vapour over liquid water in
// Pa (BIPM, in Ciddor 1996), also below 0 degrees C, where humidity
// sensors refer to liquid water too.
func saturationPressure(temperatureC float64) float64 {
	t := temperatureC + 273.15
	return math.Exp(1.2378847e-5*t*t - 1.9121316e-2*t + 33.93711047 - 6343.1645/t)
}
