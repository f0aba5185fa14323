package job

import (
	"strings"
	"testing"
)

func TestParseReportsAllFaultsInLineOrder(t *testing.T) {
	const text = `rays = { model = "pulse", range = 1 }

[water]
temperature = 99
salinity = "fresh"
depth = 3

[surface]
temperature = 5
level = 1

[surface.plane]
level = inf

[input]
files = ["", "a/*.csv"]
`
	want := []string{
		`job.toml:1: unknown key "range" in [rays], want "model", "trajectory", "max_gap", "range_index", "cameras", "solve", "residual", "max_off_nadir" or "camera_medium"`,
		`job.toml:4: [water] temperature is 99, want -2 to 35 degrees C for quan-fry`,
		`job.toml:5: [water] salinity is a string, want a number`,
		`job.toml:6: unknown key "depth" in [water], want "temperature", "salinity", "formula", "pressure_dbar", "stations", "max_gap" or "zones"`,
		`job.toml:9: unknown key "temperature" in [surface]; it belongs to [water] or [air]`,
		`job.toml:12: [surface.plane] at is missing, want a place [x, y]`,
		`job.toml:12: [surface] has level (line 10) and plane (line 12), want one of level, column, [surface.plane], [surface.profile] and [surface.grid]`,
		`job.toml:13: [surface.plane] level is inf, want a finite number`,
		`job.toml:16: [input] files item 1 is empty, want a pattern`,
		`job.toml: [output] folder is missing, want a folder`,
	}
	_, err := Parse("job.toml", []byte(text))
	if err == nil || err.Error() != strings.Join(want, "\n") {
		t.Errorf("got\n%v\nwant\n%s", err, strings.Join(want, "\n"))
	}
}

func TestParseOfNothing(t *testing.T) {
	want := []string{
		`job.toml: [input] files is missing, want a list of patterns such as ["raw/**/*.csv"]`,
		`job.toml: [output] folder is missing, want a folder`,
		`job.toml: [water] temperature is missing, want a number in degrees C`,
		`job.toml: [water] salinity is missing, want a number (practical salinity; 0 for fresh water)`,
		`job.toml: [surface] has no water surface, want level, column, [surface.plane], [surface.profile], [surface.grid] or [surface.gauge], or [water] zones with levels`,
		`job.toml: [rays] model is missing, want "vertical", "pulse" or "multiview"`,
	}
	_, err := Parse("job.toml", nil)
	if err == nil || err.Error() != strings.Join(want, "\n") {
		t.Errorf("got\n%v\nwant\n%s", err, strings.Join(want, "\n"))
	}
}

// A key of a hundred thousand parts is refused without its paths being kept,
// which would take gigabytes.
func TestParseOfADeepKey(t *testing.T) {
	_, err := Parse("job.toml", []byte(pulseJob+strings.Repeat("a.", 100_000)+"a = 1"))
	const want = `job.toml:12: unknown table [rays.a]; did you mean [rays]?`
	if err == nil || err.Error() != want {
		t.Errorf("got  %v\nwant %s", err, want)
	}
}

func TestEditDistance(t *testing.T) {
	for _, c := range []struct {
		a, b   string
		want   int
		source string
	}{
		{"", "", 0, "identity"},
		{"abc", "", 3, "three deletions"},
		{"", "abc", 3, "three insertions"},
		{"abc", "abc", 0, "identity"},
		{"kitten", "sitting", 3, "the customary example: k-s, e-i, +g"},
		{"sitting", "kitten", 3, "symmetry"},
		{"saturday", "sunday", 3, "from memory: -a, -t, r-n"},
	} {
		if got := editDistance(c.a, c.b); got != c.want {
			t.Errorf("editDistance(%q, %q) = %d, want %d (%s)", c.a, c.b, got, c.want, c.source)
		}
	}
}
