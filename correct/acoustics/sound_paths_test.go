package acoustics_test

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	"bentray/correct/acoustics"
)

// pathCase is one row of testdata/sound_paths.json: values by an independent solution of the
// ray equations and by closed forms in 40 digits, which agree within 2.5e-11 m.
type pathCase struct {
	ID        int
	Name      string
	Kind      string    `json:"profile_kind"`
	Depths    []float64 `json:"profile_z_m"`
	Speeds    []float64 `json:"profile_c_mps"`
	From      float64   `json:"source_depth_m"`
	Launch    float64   `json:"launch_angle_deg_from_down_vertical"`
	Speed     float64   `json:"sound_speed_at_source_mps"`
	Time      float64   `json:"one_way_time_s"`
	X         float64   `json:"x_m"`
	Z         float64   `json:"z_m"`
	EndAngle  float64   `json:"end_angle_deg"`
	Turned    bool      `json:"turned"`
	Tolerance float64   `json:"tolerance_m"`
}

func pathCases(t *testing.T) []pathCase {
	t.Helper()
	text, err := os.ReadFile("../../testdata/sound_paths.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Cases []pathCase }
	if err := json.Unmarshal(text, &file); err != nil {
		t.Fatal(err)
	}
	if len(file.Cases) != 18 {
		t.Fatalf("%d cases, want 18", len(file.Cases))
	}
	return file.Cases
}

func (c *pathCase) profile(t *testing.T) *acoustics.Profile {
	t.Helper()
	kind := acoustics.Linear
	if c.Kind == "constant_layers" {
		kind = acoustics.Steps
	}
	return profile(t, c.Depths, c.Speeds, kind)
}

func profile(t testing.TB, depths, speeds []float64, kind acoustics.Interpolation) *acoustics.Profile {
	t.Helper()
	p, err := acoustics.NewProfile(depths, speeds, kind)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// near fails the test unless got is within tol of want; NaN fails.
func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.17g, want %.17g within %g", what, got, want, tol)
	}
}

const degree = math.Pi / 180

func TestSoundPaths(t *testing.T) {
	for _, c := range pathCases(t) {
		t.Run(c.Name, func(t *testing.T) {
			p := c.profile(t)
			near(t, "speed at the source", p.Speed(c.From), c.Speed, 1e-9)
			sin, cos := math.Sincos(c.Launch * degree)
			if c.Launch == 90 {
				cos = 0
			}
			a := p.Trace(c.From, sin, cos, c.Time)
			if a.Fate != acoustics.Arrived || a.Turned != c.Turned {
				t.Fatalf("fate %v, turned %v, want arrived and %v", a.Fate, a.Turned, c.Turned)
			}
			near(t, "x", a.RunM, c.X, c.Tolerance)
			near(t, "z", a.DepthM, c.Z, c.Tolerance)
			near(t, "end angle", math.Atan2(a.Sin, a.Cos)/degree, c.EndAngle, 1e-7)
			near(t, "speed at the end", a.Speed, p.Speed(a.DepthM), 1e-9)
		})
	}
}

// Between the source and the end of each case lies a path, and it takes the time of the case.
func TestSoundPathsBetween(t *testing.T) {
	for _, c := range pathCases(t) {
		t.Run(c.Name, func(t *testing.T) {
			path, ok := c.profile(t).Between(c.From, c.Z, c.X)
			if !ok {
				t.Fatal("no path")
			}
			near(t, "time", path.TimeS, c.Time, 1e-9)
			near(t, "launch angle", math.Atan2(path.Sin, path.Cos)/degree, c.Launch, 1e-5)
		})
	}
}
