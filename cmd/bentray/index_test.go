package main

import (
	"encoding/json"
	"maps"
	"math"
	"slices"
	"strings"
	"testing"
)

// published are values that index prints, by JSON key.
var published = []struct {
	name      string
	args      []string
	key       string
	value     float64
	tolerance float64
}{
	// Half a unit of the last digit, and half of one in the saturation pressure.
	{"StoneZimmerman2001/20 C, 60 kPa, dry, 633 nm", []string{"--temperature", "20", "--salinity", "0", "--wavelength", "633", "--air-temperature", "20", "--air-pressure", "600"}, "n_air", 1.000160924, 1e-9},
	{"StoneZimmerman2001/20 C, 100 kPa, 100 %, 633 nm", []string{"--temperature", "20", "--salinity", "0", "--wavelength", "633", "--air-temperature", "20", "--air-pressure", "1000", "--humidity", "100"}, "n_air", 1.000267394, 1e-9},
	// Measured, as a fit; the formula meets it within 3e-6.
	{"DaimonMasumura2007/21.5 C, 589.3 nm", []string{"--temperature", "21.5", "--salinity", "0", "--wavelength", "589.3", "--formula", "iapws"}, "n_water", 1.33321, 3e-6},
	// Its derivative; the formula meets it within 2.5e-5.
	{"DaimonMasumura2007/19 C, 532 nm", []string{"--temperature", "19", "--salinity", "0", "--formula", "iapws"}, "ng_water", 1.35706, 2.5e-5},
	// T68 = 1.00024 T90; half a unit of the last digit.
	{"UNESCO44/S 25, 10 C", []string{"--temperature", "9.9976", "--salinity", "25"}, "sound_speed", 1477.7, 0.0501},
}

func TestIndexJSON(t *testing.T) {
	for _, c := range published {
		t.Run(c.name, func(t *testing.T) {
			code, out, errs := call(t, append([]string{"index", "--json"}, c.args...)...)
			want(t, "index", code, exitDone, errs, "")
			var got map[string]any
			if err := json.Unmarshal([]byte(out), &got); err != nil {
				t.Fatal(err)
			}
			keys := []string{"formula", "in_range", "n_air", "n_water", "ng_air", "ng_water", "ratio", "sound_speed"}
			if g := slices.Sorted(maps.Keys(got)); !slices.Equal(g, keys) {
				t.Errorf("keys are %q, want %q", g, keys)
			}
			value, isNumber := got[c.key].(float64)
			if !isNumber || !(math.Abs(value-c.value) <= c.tolerance) {
				t.Errorf("%s is %v, want %v within %g", c.key, got[c.key], c.value, c.tolerance)
			}
			if ratio := got["n_water"].(float64) / got["n_air"].(float64); got["ratio"] != ratio {
				t.Errorf("ratio is %v, want %v", got["ratio"], ratio)
			}
		})
	}
}

func TestIndexBeyondRanges(t *testing.T) {
	code, out, errs := call(t, "index", "--json", "--temperature", "33", "--salinity", "36")
	if want(t, "index", code, exitDone, errs, ""); !strings.Contains(out, `"in_range": false`) {
		t.Errorf("got %s, want it out of the published range", out)
	}
	code, out, errs = call(t, "index", "--json", "--temperature", "20", "--salinity", "43")
	if want(t, "index", code, exitDone, errs, ""); !strings.Contains(out, `"sound_speed": null`) {
		t.Errorf("got %s, want no sound speed beyond salinity 40", out)
	}
	code, out, errs = call(t, "index", "--temperature", "-2.5", "--salinity", "35")
	if code != exitCall || out != "" || !strings.Contains(errs, "-2.5") || !strings.Contains(errs, "want -2 to 35") {
		t.Errorf("got %d, %q and %q, want 64 and the range", code, out, errs)
	}
	code, out, errs = call(t, "index", "--temperature", "20", "--salinity", "35", "--formula", "guess")
	if code != exitCall || out != "" || !strings.Contains(errs, `"guess"`) {
		t.Errorf("got %d, %q and %q, want 64 and the word", code, out, errs)
	}
}
