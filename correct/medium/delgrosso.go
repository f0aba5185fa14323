package medium

// dbarPerKgf is the pressure of 1 kgf/cm2 in dbar: standard gravity, 9.80665 m/s2, by
// definition.
const dbarPerKgf = 9.80665

// delGrosso returns the speed of sound in sea water in m/s by Del Grosso 1974, J. Acoust.
// Soc. Am. 56(4), 1084-1091, in degrees C of ITS-90 and kgf/cm2 above the atmosphere, with
// the coefficients of Wong & Zhu 1995, J. Acoust. Soc. Am. 97(3), 1732-1736.
//
// Copies of the 1974 set with S^2 1.98955756844e-4 or P^3 -0.83392332513e-8 are
// misprints: 1.28955756844e-4 and -0.883392332513e-8 are right, and the refit is near them.
func delGrosso(w Water) float64 {
	t, s, p := w.TemperatureC, w.Salinity, w.PressureDbar/dbarPerKgf
	temperature := t * (5.012285 + t*(-0.551184e-1+t*0.221649e-3))
	salinity := s * (1.329530 + s*0.1288598e-3)
	pressure := p * (0.1560592 + p*(0.2449993e-4-p*0.8833959e-8))
	mixed := s*t*(-0.1275936e-1+t*0.9688441e-4) +
		t*p*(0.6353509e-2+p*(-0.1593895e-5+p*0.5222483e-9)) +
		t*t*p*(0.2656174e-7*p-0.4383615e-6*t) +
		s*s*p*(0.4857614e-5*t-0.1616745e-8*p) -
		0.3406824e-3*s*t*p
	return 1402.392 + temperature + salinity + pressure + mixed
}
