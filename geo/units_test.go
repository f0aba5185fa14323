package geo

import (
	"math"
	"testing"
)

func TestParseUnit(t *testing.T) {
	for _, tc := range []struct {
		name, source   string
		metres, within float64
	}{
		{"m", "SI base unit", 1, 0},
		{"ft", "NIST SP 811 (2008) B.6: 1 ft = 0.3048 m exactly", 0.3048, 0},
		{"us-ft", "NIST SP 811 (2008) B.6: 1 ft (US survey) = 3.048 006 E-01 m", 0.3048006, 0.5e-7},
		{"us-ft", "NIST SP 811 (2008) B.6: 3937 US survey feet are 1200 m", 1200.0 / 3937, 0},
	} {
		got, err := ParseUnit(tc.name)
		if err != nil || math.Abs(float64(got)-tc.metres) > tc.within {
			t.Errorf("%s: %v, %v, want %v (%s)", tc.name, float64(got), err, tc.metres, tc.source)
		}
	}
}

func TestParseUnitRefuses(t *testing.T) {
	for _, name := range []string{"", "M", "feet", "us-survey-ft", " m"} {
		_, err := ParseUnit(name)
		wantError(t, err, `"`+name+`"`, `"m"`, `"ft"`, `"us-ft"`)
	}
}
