package medium

// mackenzie returns the speed of sound in sea water in m/s by the nine-term equation of
// Mackenzie 1981, J. Acoust. Soc. Am. 70(3), 807-812, which takes degrees C of IPTS-68.
func mackenzie(temperatureC, salinity, depthM float64) float64 {
	t, s, d := t68(temperatureC), salinity-35, depthM
	return 1448.96 + t*(4.591+t*(-5.304e-2+t*2.374e-4)) + 1.340*s +
		d*(1.630e-2+d*1.675e-7) - 1.025e-2*t*s - 7.139e-13*t*d*d*d
}
