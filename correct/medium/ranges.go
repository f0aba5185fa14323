package medium

import (
	"fmt"
	"math"
)

// RangeError says that an input is NaN or outside the range over which a
// formula is computed.
type RangeError struct {
	Quantity  string  // such as "salinity"
	Unit      string  // such as "nm"; empty for a pure number
	Value     float64 // as given
	Low, High float64 // the range, its ends inside
	Formula   string  // such as "quan-fry"
}

// Error returns, for example, "salinity is 52, want 0 to 45 for quan-fry".
func (e *RangeError) Error() string {
	unit := e.Unit
	if unit != "" {
		unit = " " + unit
	}
	return fmt.Sprintf("%s is %g%s, want %g to %g for %s", e.Quantity, e.Value, unit, e.Low, e.High, e.Formula)
}

type quantity struct{ name, unit string }

// interval is closed: both ends are inside.
type interval struct{ low, high float64 }

var anyNumber = interval{math.Inf(-1), math.Inf(1)}

// The water's ranges are in this order: temperature, salinity, pressure,
// wavelength. Published ranges are those of the sources; pressure is free where
// it does not enter. For IAPWS the range of R9-97 (-12 to 500 degrees C) is cut
// to that of the density (253.15 to 383.15 K), and its wavelengths are those of
// R9-97 (0.2 to 1.1 micrometres).
var (
	waterQuantities = [4]quantity{
		{"water temperature", "degrees C"},
		{"salinity", ""},
		{"water pressure", "dbar"},
		{"wavelength", "nm"},
	}
	waterComputed = [...][4]interval{
		QuanFry:       {{-2, 35}, {0, 45}, {0, 100}, {400, 700}},
		MillardSeaver: {{-2, 35}, {0, 45}, {0, 11000}, {400, 700}},
		IAPWS:         {{-12, 110}, {0, 0.5}, {0, 100}, {200, 1100}},
	}
	waterPublished = [...][4]interval{
		QuanFry:       {{0, 30}, {0, 35}, anyNumber, {400, 700}},
		MillardSeaver: {{0, 30}, {0, 40}, {0, 11000}, {500, 700}},
		IAPWS:         {{-12, 110}, {0, 0}, anyNumber, {200, 1100}},
	}
)

func waterValues(w Water, wavelengthNM float64) [4]float64 {
	return [4]float64{w.TemperatureC, w.Salinity, w.PressureDbar, wavelengthNM}
}

// The air's ranges are in this order: temperature, pressure, humidity, CO2,
// wavelength. The source states no range of CO2.
var (
	airQuantities = [5]quantity{
		{"air temperature", "degrees C"},
		{"air pressure", "hPa"},
		{"humidity", "%"},
		{"CO2", "ppm"},
		{"wavelength", "nm"},
	}
	airComputed  = [5]interval{{-40, 60}, {500, 1200}, {0, 100}, {0, 2000}, {300, 1700}}
	airPublished = [5]interval{{-40, 100}, {800, 1200}, {0, 100}, anyNumber, {300, 1690}}
)

func airValues(a Air, wavelengthNM float64) [5]float64 {
	return [5]float64{a.TemperatureC, a.PressureHPa, a.HumidityPercent, a.CO2PPM, wavelengthNM}
}

// breach returns the position of the first value that is NaN or outside its
// range, or -1. ranges and values have the same length.
func breach(ranges []interval, values []float64) int {
	for i, r := range ranges {
		if !(values[i] >= r.low && values[i] <= r.high) {
			return i
		}
	}
	return -1
}

func newRangeError(formula string, q quantity, want interval, got float64) *RangeError {
	return &RangeError{Quantity: q.name, Unit: q.unit, Value: got, Low: want.low, High: want.high, Formula: formula}
}
