package medium

import (
	"fmt"
	"math"
	"strings"
)

// SoundFormula names a formula for the speed of sound in sea water. The zero value
// is ChenMillero, the default.
type SoundFormula uint8

const (
	// ChenMillero is the formula of Chen & Millero 1977, that of EOS-80. It alone
	// reaches to fresh water.
	ChenMillero SoundFormula = iota
	// DelGrosso is the formula of Del Grosso 1974 as refitted to ITS-90 by Wong & Zhu
	// 1995.
	DelGrosso
	// Mackenzie is the nine-term formula of Mackenzie 1981, by depth.
	Mackenzie
)

var soundFormulaNames = [...]string{
	ChenMillero: "chen-millero",
	DelGrosso:   "del-grosso",
	Mackenzie:   "mackenzie",
}

// ParseSoundFormula returns the formula called s: "chen-millero", "del-grosso" or
// "mackenzie". For any other text it returns an error that names the three.
func ParseSoundFormula(s string) (SoundFormula, error) {
	for i, name := range soundFormulaNames {
		if s == name {
			return SoundFormula(i), nil
		}
	}
	return 0, fmt.Errorf("sound speed formula is %q, want one of %s", s, strings.Join(soundFormulaNames[:], ", "))
}

// String returns the name that ParseSoundFormula takes.
func (f SoundFormula) String() string {
	if int(f) < len(soundFormulaNames) {
		return soundFormulaNames[f]
	}
	return fmt.Sprintf("SoundFormula(%d)", uint8(f))
}

// Speed returns the speed of sound in water in m/s. For a depth, let the pressure be
// PressureDbar(depth, latitude).
//
// The latitude, radians, is read by Mackenzie alone, which takes the depth back from
// the pressure; the others need none. A state outside the computed range (see the
// package comment) or NaN gives NaN and a *RangeError. Speed panics for a value
// of f that is none of the constants.
func (f SoundFormula) Speed(w Water, latitudeRad float64) (float64, error) {
	values := soundValues(w, latitudeRad)
	if i := breach(soundComputed[f][:], values[:]); i >= 0 {
		return math.NaN(), newRangeError(f.String(), soundQuantities[i], soundComputed[f][i], values[i])
	}
	switch f {
	case DelGrosso:
		return delGrosso(w), nil
	case Mackenzie:
		return mackenzie(w.TemperatureC, w.Salinity, values[3]), nil
	}
	return chenMillero(w), nil
}

// Published reports whether the state is inside the range that the formula was
// published for; if not, Speed extends it. The latitude, radians, is read by
// Mackenzie alone. NaN is not inside.
func (f SoundFormula) Published(w Water, latitudeRad float64) bool {
	values := soundValues(w, latitudeRad)
	return breach(soundPublished[f][:], values[:]) < 0
}

// Ranges of sound are in this order: temperature, salinity, pressure, depth. The limit
// of Del Grosso's pressure is 1000 kgf/cm2.
var (
	soundQuantities = [4]quantity{
		{"water temperature", "degrees C"},
		{"salinity", ""},
		{"water pressure", "dbar"},
		{"depth", "m"},
	}
	soundComputed = [...][4]interval{
		ChenMillero: {{-2, 40}, {0, 45}, {0, 10000}, anyNumber},
		DelGrosso:   {{-2, 35}, {20, 45}, {0, 1000 * dbarPerKgf}, anyNumber},
		Mackenzie:   {{-2, 35}, {20, 45}, anyNumber, {0, 8000}},
	}
	soundPublished = [...][4]interval{
		ChenMillero: {{0, 40}, {0, 40}, {0, 10000}, anyNumber},
		DelGrosso:   {{0, 30}, {30, 40}, {0, 1000 * dbarPerKgf}, anyNumber},
		Mackenzie:   {{2, 30}, {25, 40}, anyNumber, {0, 8000}},
	}
)

// soundValues returns what the ranges are asked for. The depth is 0 where the pressure
// is, whatever the latitude; without a latitude (NaN) it is NaN elsewhere.
func soundValues(w Water, latitudeRad float64) [4]float64 {
	depth := 0.0
	if w.PressureDbar != 0 {
		depth = DepthM(w.PressureDbar, latitudeRad)
	}
	return [4]float64{w.TemperatureC, w.Salinity, w.PressureDbar, depth}
}
