package medium

import "math"

// PressureDbar returns the pressure of sea water above the atmosphere in dbar at a
// depth in metres and a latitude in radians, either side of the equator.
//
// It is the closed form of Saunders 1981, J. Phys. Oceanogr. 11, 573-574, for the standard
// ocean (0 degrees C, salinity 35): within 0.1 dbar of the polynomial of UNESCO
// Technical Papers in Marine Science 44 down to 200 m, 0.3 dbar down to 1000 m and 7
// at 10000 m. Fresh water weighs 2.8 % less: 0.28 dbar in 10 m, worth 0.005 m/s. NaN
// gives NaN.
func PressureDbar(depthM, latitudeRad float64) float64 {
	c := saunders(latitudeRad)
	// The root of saundersC2 p^2 - c p + depth = 0 in the form that does not cancel.
	return 2 * depthM / (c + math.Sqrt(c*c-4*saundersC2*depthM))
}

// DepthM returns the depth in metres at a pressure of sea water above the
// atmosphere in dbar and a latitude in radians: the inverse of PressureDbar.
func DepthM(pressureDbar, latitudeRad float64) float64 {
	return (saunders(latitudeRad) - saundersC2*pressureDbar) * pressureDbar
}

// saundersC2 is the second coefficient of Saunders 1981, m/dbar^2.
const saundersC2 = 2.21e-6

// saunders returns 1 - c1 of Saunders 1981, m/dbar.
func saunders(latitudeRad float64) float64 {
	sin := math.Sin(latitudeRad)
	return 1 - (5.92+5.25*sin*sin)*1e-3
}
