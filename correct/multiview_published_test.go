package correct_test

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"testing"

	"bentray/correct"
)

// checkNetwork is a case of testdata/multiview.json: an apparent point of a known bed
// point below a level surface at 0, to nine decimals, and what the approximate
// methods leave of it, to six.
type checkNetwork struct {
	Network         string
	FlyingHeightM   float64 `json:"flying_height_m"`
	MaxOffNadirDeg  float64 `json:"max_off_nadir_deg"`
	IndexRatio      float64 `json:"index_ratio"`
	Residual        string
	Cameras         []vec
	TruePoint       vec  `json:"true_point"`
	ApparentPoint   vec  `json:"apparent_point"`
	LeftVertical    *vec `json:"left_vertical"`
	LeftAverage     *vec `json:"left_average"`
	LeftIntersect   *vec `json:"left_intersect"`
	ApparentPerp    vec  `json:"apparent_perp"`    // reference cases: residual equal
	ApparentAngular vec  `json:"apparent_angular"` // reference cases: residual angle
}

func (c *checkNetwork) name() string {
	return fmt.Sprintf("Fermat and least squares/%s/%gm/%gdeg/%s", c.Network, c.FlyingHeightM, c.MaxOffNadirDeg, c.Residual)
}

// photos returns the case as a cloud of one point.
func (c *checkNetwork) photos() *photos {
	s := &scene{truth: c.TruePoint, cameras: c.Cameras}
	for range c.Cameras {
		s.waters = append(s.waters, water{air: 1, waterPhase: c.IndexRatio})
		s.rotations = append(s.rotations, rotation{1, 0, 0, 0, 1, 0, 0, 0, 1})
	}
	p := newPhotos(1)
	p.bundle.Residual = residuals[c.Residual]
	p.add(s, c.ApparentPoint, noOffset)
	return p
}

func readJSON(t *testing.T, path string, to any) {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(text, to); err != nil {
		t.Fatal(err)
	}
}

type checkNetworks struct {
	Cases          []checkNetwork
	ReferenceCases []checkNetwork `json:"reference_cases"`
}

func TestMultiviewCheckValues(t *testing.T) {
	var file checkNetworks
	readJSON(t, "../testdata/multiview.json", &file)
	if len(file.Cases) != 32 {
		t.Fatalf("testdata/multiview.json: %d cases, want 32", len(file.Cases))
	}
	for _, c := range file.Cases {
		t.Run(c.name(), func(t *testing.T) {
			p := c.photos()
			p.solve()
			p.checkTruth(t, 2e-8)
			if c.Residual != "equal" {
				return
			}
			vertical := c.photos()
			correct.Vertical(&vertical.dst, vertical.out, vertical.raw, vertical.planes, vertical.bundle.Light)
			vertical.checkLeft(t, "vertical", c.LeftVertical)
			for solve, left := range map[correct.Solve]*vec{correct.Average: c.LeftAverage, correct.Intersect: c.LeftIntersect} {
				p := c.photos()
				p.bundle.Solve = solve
				p.solve()
				p.checkLeft(t, fmt.Sprint("solve ", solve), left)
			}
		})
	}
}

// checkLeft holds what a method left of the true point to within 1 % and 0.002 % of
// the depth.
func (p *photos) checkLeft(t *testing.T, method string, want *vec) {
	t.Helper()
	if want == nil || p.out[0] != correct.Corrected {
		t.Fatalf("%s: outcome %s, check value %v", method, p.out[0], want)
	}
	got := vec{p.dst.X[0] - p.truth.X[0], p.dst.Y[0] - p.truth.Y[0], p.dst.Z[0] - p.truth.Z[0]}
	for k, axis := range []string{"x", "y", "z"} {
		near(t, method+" left in "+axis, got[k], want[k], max(0.01*math.Abs(want[k]), 2e-5*-p.truth.Z[0]))
	}
}

// The angular reference points rest under distances that are weighted with the range, which is
// nearly, not quite, the least sum of squared angles.
func TestMultiviewReferenceCases(t *testing.T) {
	var file checkNetworks
	readJSON(t, "../testdata/multiview.json", &file)
	if len(file.ReferenceCases) != 4 {
		t.Fatalf("testdata/multiview.json: %d reference cases, want 4", len(file.ReferenceCases))
	}
	for i, c := range file.ReferenceCases {
		c.IndexRatio = 1.34
		t.Run(fmt.Sprint("Fermat and least squares/", i, "/equal"), func(t *testing.T) {
			c.Residual, c.ApparentPoint = "equal", c.ApparentPerp
			p := c.photos()
			p.solve()
			p.checkTruth(t, 2e-9)
		})
		t.Run(fmt.Sprint("Fermat and weighted least squares/", i, "/angle"), func(t *testing.T) {
			c.Residual, c.ApparentPoint = "angle", c.ApparentAngular
			p := c.photos()
			p.solve()
			p.checkTruth(t, -4e-5*c.TruePoint[2])
		})
	}
}
