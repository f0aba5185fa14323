package medium

// specificVolume returns the volume of liquid water at 0.1 MPa in m3/kg for a
// temperature in kelvin, 253.15 to 383.15 K (metastable states included):
// IAPWS SR6-08(2011), eq. 2, with alpha = 10 K/(593 K - T) and
// beta = 10 K/(T - 232 K).
func specificVolume(temperatureK float64) float64 {
	const volume = 461.51805 * 10 / 1e5 // R Tr/p0, m3/kg
	a, b := 10/(593-temperatureK), 10/(temperatureK-232)
	a2 := a * a
	a4 := a2 * a2
	hot := a4 * (6.74458446e3 + a*(-2.22521604e5+a2*(1.00231247e8+a*(-1.63552118e9+a*8.32299658e9))))
	cold := b * (5.78545292e-3 + b*(-1.53195665e-2+b*(3.11337859e-2+b*(-4.23546241e-2+b*(3.38713507e-2-b*1.19946761e-2)))))
	return volume * (1.93763157e-2 + hot + cold)
}

// waterDensity returns the density of fresh water at 0.1 MPa in kg/m3. To the
// index the step from 0.1 MPa to 1 atm is worth 2e-7.
func waterDensity(temperatureC float64) float64 {
	return 1 / specificVolume(temperatureC+273.15)
}
