package medium

import (
	"fmt"
	"math"
	"strings"
)

// Water is the state of the water at a point.
type Water struct {
	TemperatureC float64 // degrees C, ITS-90
	Salinity     float64 // practical salinity, PSS-78
	PressureDbar float64 // dbar above the atmosphere (gauge); 0 at the surface
}

// WaterFormula names a formula for the refractive index of water. The zero
// value is QuanFry, the default.
type WaterFormula uint8

const (
	// QuanFry is the formula of Quan & Fry 1995 for sea water at atmospheric
	// pressure.
	QuanFry WaterFormula = iota
	// MillardSeaver is the formula of Millard & Seaver 1990 for sea water
	// under pressure.
	MillardSeaver
	// IAPWS is IAPWS R9-97 with the density of IAPWS SR6-08, for fresh water at
	// atmospheric pressure.
	IAPWS
)

var waterFormulaNames = [...]string{
	QuanFry:       "quan-fry",
	MillardSeaver: "millard-seaver",
	IAPWS:         "iapws",
}

// ParseWaterFormula returns the formula called s: "quan-fry", "millard-seaver"
// or "iapws". For any other text it returns an error that names the three.
func ParseWaterFormula(s string) (WaterFormula, error) {
	for i, name := range waterFormulaNames {
		if s == name {
			return WaterFormula(i), nil
		}
	}
	return 0, fmt.Errorf("water formula is %q, want one of %s", s, strings.Join(waterFormulaNames[:], ", "))
}

// String returns the name that ParseWaterFormula takes.
func (f WaterFormula) String() string {
	if int(f) < len(waterFormulaNames) {
		return waterFormulaNames[f]
	}
	return fmt.Sprintf("WaterFormula(%d)", uint8(f))
}

// Index returns the phase and the group index of water, both referred to
// vacuum, at a vacuum wavelength in nm.
//
// A state or wavelength outside the computed range (see the package comment)
// or NaN gives NaN, NaN and a *RangeError. QuanFry and IAPWS check the pressure
// but do not apply it: see UsesPressure. Index panics for a value of f that is
// none of the constants.
func (f WaterFormula) Index(w Water, vacuumWavelengthNM float64) (phase, group float64, err error) {
	values := waterValues(w, vacuumWavelengthNM)
	if i := breach(waterComputed[f][:], values[:]); i >= 0 {
		return math.NaN(), math.NaN(), newRangeError(f.String(), waterQuantities[i], waterComputed[f][i], values[i])
	}
	switch f {
	case QuanFry:
		rel, slope := quanFry(w.TemperatureC, w.Salinity, vacuumWavelengthNM)
		phase, group = referToVacuum(rel, slope, w.TemperatureC, vacuumWavelengthNM)
	case MillardSeaver:
		rel, slope := millardSeaver(w, vacuumWavelengthNM)
		phase, group = referToVacuum(rel, slope, w.TemperatureC, vacuumWavelengthNM)
	case IAPWS:
		n, slope := iapws(w.TemperatureC, waterDensity(w.TemperatureC), vacuumWavelengthNM)
		phase, group = n, n-slope
	}
	return phase, group, nil
}

// Computed reports whether Index has a value for this state and vacuum
// wavelength (nm). Unlike an error it costs no allocation, for use per point.
func (f WaterFormula) Computed(w Water, vacuumWavelengthNM float64) bool {
	values := waterValues(w, vacuumWavelengthNM)
	return breach(waterComputed[f][:], values[:]) < 0
}

// Published reports whether the state and the vacuum wavelength (nm) are inside
// the range that the formula was published for; if not, Index extends it. Of
// the pressure only formulas that use it are asked: see UsesPressure. NaN is
// not inside.
func (f WaterFormula) Published(w Water, vacuumWavelengthNM float64) bool {
	values := waterValues(w, vacuumWavelengthNM)
	return breach(waterPublished[f][:], values[:]) < 0
}

// Nearest returns the state whose temperature and salinity are moved to the nearest
// values that Index is computed for; those inside stay, to the bit, and NaN stays NaN.
func (f WaterFormula) Nearest(w Water) Water {
	t, s := waterComputed[f][0], waterComputed[f][1]
	w.TemperatureC = min(max(w.TemperatureC, t.low), t.high)
	w.Salinity = min(max(w.Salinity, s.low), s.high)
	return w
}

// UsesPressure reports whether Water.PressureDbar enters the index. Where it
// does not, a pressure other than 0 is left out of the index, which is then too
// low by 1.3e-6 to 1.7e-6 per dbar.
func (f WaterFormula) UsesPressure() bool { return f == MillardSeaver }

// referToVacuum takes an index of water relative to air, and its slope lambda
// dn/dlambda, to the phase and group index relative to vacuum. The air is dry,
// as warm as the water, at 1013.25 hPa with 450 ppm CO2.
func referToVacuum(rel, slope, temperatureC, wavelengthNM float64) (phase, group float64) {
	air, airGroup := moistAir(temperatureC, 101325, 0, 450, wavelengthNM)
	return rel * air, rel*airGroup - slope*air
}
