package correct_test

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"testing"

	"bentray/correct"
)

// Levi M., Some Shallow Observations, SIAM News 56(4), May 2023: at index 1/0.7 an
// apparent depth of 5 is about 7 in truth.
func TestVerticalPublished(t *testing.T) {
	text, err := os.ReadFile("../testdata/refracted_rays.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Published []struct {
			ID, Source string
			Inputs     struct{ C, Apparent float64 }
			Published  struct {
				Depth float64 `json:"true_approx"`
			}
			Recomputed struct {
				Depth float64 `json:"true"`
			}
		}
	}
	if err := json.Unmarshal(text, &file); err != nil {
		t.Fatal(err)
	}
	found := false
	for _, c := range file.Published {
		if c.ID != "levi-vertical" {
			continue
		}
		found = true
		s := one(0, 1, 1, 1/c.Inputs.C, math.NaN())
		s.raw.Z[0] = 0.5 - c.Inputs.Apparent
		s.vertical()
		near(t, c.Source+": true depth", s.dst.Depth[0], c.Recomputed.Depth, 1e-14)
		near(t, c.Source+": printed depth", s.dst.Depth[0], c.Published.Depth, 0.5)
	}
	if !found {
		t.Error("testdata/refracted_rays.json: no case levi-vertical")
	}
}

func TestVerticalIdentities(t *testing.T) {
	t.Run("depth scales by the phase index, plan kept", func(t *testing.T) {
		s := one(20, 1.00027, math.NaN(), 1.34, math.NaN())
		s.light.WaterGroup = nil
		s.planes.SlopeX[0] = 0.05
		s.vertical()
		near(t, "depth", s.dst.Depth[0], 4*1.34/1.00027, 1e-14)
		near(t, "z", s.dst.Z[0], 0.5-4*1.34/1.00027, 1e-14)
		if s.dst.X[0] != 12.25 || s.dst.Y[0] != -7.5 || s.dst.WaterLevel[0] != 0.5 || s.dst.EntryLevel[0] != 0.5 {
			t.Errorf("position or level moved: %v", s.dst)
		}
		if !math.IsNaN(s.dst.IncidenceRad[0]) || !math.IsNaN(s.dst.RefractionRad[0]) {
			t.Error("angles are set, want NaN")
		}
	})
	t.Run("equal indices change no bit", func(t *testing.T) {
		s := one(0, 1.3, 1, 1.3, 1)
		s.raw.Z[0] = -3.1
		s.planes.Level[0] = 0.42
		s.vertical()
		if s.dst.Z[0] != -3.1 {
			t.Errorf("z is %.17g, want -3.1", s.dst.Z[0])
		}
	})
	t.Run("the share of an oblique pair", func(t *testing.T) {
		// Two cameras on either side of a bed point 2 m deep, i in air and r in water: rays meet
		// at depth 2 tan r / tan i. The law leaves tan^2(i) (n^2-1)/2n^2 of the depth.
		const n, i = 1.34, 0.1
		seen := 2 * math.Tan(math.Asin(math.Sin(i)/n)) / math.Tan(i)
		s := one(0, 1, 1, n, 1)
		s.raw.Z[0] = 0.5 - seen
		s.vertical()
		left := math.Pow(math.Tan(i), 2) * (n*n - 1) / (2 * n * n)
		near(t, "share of depth", 1-s.dst.Depth[0]/2, left, 0.02*left)
	})
}

func TestVerticalSizes(t *testing.T) {
	for _, n := range []int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 31, 32, 33} {
		t.Run(fmt.Sprint(n), func(t *testing.T) {
			s := simulate(33, 24, 0, noOffset).tail(n)
			s.vertical()
			for i := range n {
				if s.out[i] != correct.Corrected {
					t.Errorf("point %d is %s", i, s.out[i])
				}
				near(t, "depth", s.dst.Depth[i], (s.planes.Level[i]-s.raw.Z[i])*s.light.Water[i]/s.light.Air, 1e-13)
			}
		})
	}
}
