package medium

import "math"

// Air is the state of the air between the sensor and the water. Its zero value
// is no air: start from StandardAir.
type Air struct {
	TemperatureC    float64 // degrees C, ITS-90
	PressureHPa     float64 // hPa at the place, not reduced to sea level
	HumidityPercent float64 // relative humidity over liquid water
	CO2PPM          float64 // ppm by volume
}

// StandardAir returns dry air at 15 degrees C, 1013.25 hPa and 450 ppm CO2, the
// standard air of Ciddor 1996.
func StandardAir() Air {
	return Air{TemperatureC: 15, PressureHPa: 1013.25, CO2PPM: 450}
}

// Index returns the phase and the group index of the air, both referred to
// vacuum, at a vacuum wavelength in nm (Ciddor 1996, with the saturation
// pressure of BIPM).
//
// A state or wavelength outside the computed range (see the package comment)
// or NaN gives NaN, NaN and a *RangeError.
func (a Air) Index(vacuumWavelengthNM float64) (phase, group float64, err error) {
	values := airValues(a, vacuumWavelengthNM)
	if i := breach(airComputed[:], values[:]); i >= 0 {
		return math.NaN(), math.NaN(), newRangeError("ciddor", airQuantities[i], airComputed[i], values[i])
	}
	pressurePa := 100 * a.PressureHPa
	vapourPa := a.HumidityPercent / 100 * saturationPressure(a.TemperatureC)
	fraction := vapourFraction(a.TemperatureC, pressurePa, vapourPa)
	phase, group = moistAir(a.TemperatureC, pressurePa, fraction, a.CO2PPM, vacuumWavelengthNM)
	return phase, group, nil
}

// Published reports whether the state and the vacuum wavelength (nm) are inside
// the range that the formula was published for; if not, Index extends it or has
// no value. NaN is not inside.
func (a Air) Published(vacuumWavelengthNM float64) bool {
	values := airValues(a, vacuumWavelengthNM)
	return breach(airPublished[:], values[:]) < 0 && !math.IsNaN(a.CO2PPM)
}
