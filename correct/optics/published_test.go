package optics_test

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	"bentray/correct/optics"
)

// publishedCase is one row of testdata/refracted_rays.json, source included. Only
// the numbers are read; formulas stand there for the reader.
type publishedCase struct {
	ID         string
	Source     string
	Inputs     map[string]any
	Published  map[string]any
	Recomputed map[string]any
}

// published returns the case of that id, with its source.
func published(t *testing.T, id string) publishedCase {
	t.Helper()
	text, err := os.ReadFile("../../testdata/refracted_rays.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Published []publishedCase }
	if err := json.Unmarshal(text, &file); err != nil {
		t.Fatal(err)
	}
	for _, c := range file.Published {
		if c.ID == id {
			return c
		}
	}
	t.Fatalf("testdata/refracted_rays.json: no case %q", id)
	return publishedCase{}
}

// near fails the test unless got is within tol of want; NaN fails.
func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.17g, want %.17g within %g", what, got, want, tol)
	}
}

func radians(deg float64) float64 { return deg * math.Pi / 180 }

// tilted returns the unit direction in the xz plane at an angle from +z.
func tilted(rad float64) optics.Vec {
	return optics.Vec{X: math.Sin(rad), Z: math.Cos(rad)}
}

var up = optics.Vec{Z: 1}

// riseToAir follows a ray from a point at x = 0 at the bottom of horizontal layers, listed
// from the bottom, to the air above them. It returns the plan position where
// the ray leaves the water and its slope dx/dz in air.
func riseToAir(t *testing.T, rad float64, thickness, index []float64) (x, slope float64) {
	t.Helper()
	dir, ok := tilted(rad), true
	for k, n := range index {
		x += thickness[k] * dir.X / dir.Z
		next := 1.0
		if k+1 < len(index) {
			next = index[k+1]
		}
		if dir, ok = optics.Refract(dir, up, n, next); !ok {
			t.Fatalf("total reflection at layer %d at %g rad", k, rad)
		}
	}
	return x, dir.X / dir.Z
}

// apparentDepth returns the depth below the water line at which two neighbouring rays,
// prolonged straight from the air, meet.
func apparentDepth(t *testing.T, rad, step float64, thickness, index []float64) float64 {
	t.Helper()
	x1, s1 := riseToAir(t, rad-step, thickness, index)
	x2, s2 := riseToAir(t, rad+step, thickness, index)
	return (x2 - x1) / (s2 - s1)
}

func TestPublishedApparentDepth(t *testing.T) {
	t.Run("Levi2023/oblique", func(t *testing.T) {
		c := published(t, "levi-oblique")
		n := c.Inputs["n"].(float64)
		inWater := math.Asin(math.Sin(radians(c.Inputs["i_deg"].(float64))) / n)
		// The error of the central difference is of order step^2.
		got := 1 / apparentDepth(t, inWater, 1e-5, []float64{1}, []float64{n})
		near(t, c.Source+": true over apparent", got, c.Recomputed["true_over_apparent"].(float64), 1e-6)
		if got <= c.Published["true_over_apparent_gt"].(float64) {
			t.Errorf("%s: true over apparent is %g, want above 5", c.Source, got)
		}
	})
	t.Run("Levi2023/vertical", func(t *testing.T) {
		c := published(t, "levi-vertical")
		n := 1 / c.Inputs["c"].(float64)
		trueDepth := c.Recomputed["true"].(float64)
		got := apparentDepth(t, 0, 1e-6, []float64{trueDepth}, []float64{n})
		near(t, c.Source+": apparent depth", got, c.Inputs["apparent"].(float64), 1e-9)
	})
	t.Run("YoungFreedman14/layers", func(t *testing.T) {
		c := published(t, "layers-YF")
		got := apparentDepth(t, 0, 1e-6, numbers(c.Inputs["thickness"]), numbers(c.Inputs["index"]))
		near(t, c.Source+": apparent depth", got, c.Recomputed["apparent"].(float64), 1e-9)
		// The last printed digit is cut off, so a whole unit of it.
		near(t, c.Source+": printed depth", got, c.Published["apparent"].(float64), 1e-3)
	})
}

func numbers(list any) []float64 {
	var out []float64
	for _, v := range list.([]any) {
		out = append(out, v.(float64))
	}
	return out
}

func TestPublishedPlate(t *testing.T) {
	c := published(t, "slab-60")
	thickness, n := c.Inputs["t_cm"].(float64)/100, c.Inputs["n"].(float64)
	i := radians(c.Inputs["i_deg"].(float64))
	in := tilted(i)

	inside, ok := optics.Refract(in, up, 1, n)
	if !ok {
		t.Fatal("total reflection on entering glass")
	}
	near(t, c.Source+": refraction, deg", inside.AngleRad(up)*180/math.Pi, c.Published["r_deg"].(float64), 0.005)

	exit, _, ok := optics.ThroughPlate(optics.Vec{}, in, up, thickness, 1, n)
	if !ok {
		t.Fatal("total reflection in a plate")
	}
	near(t, c.Source+": path, cm", 100*exit.Norm(), c.Published["path_cm"].(float64), 0.005)

	d := optics.PlateShift(thickness, i, n)
	near(t, c.Source+": displacement, cm", 100*d, c.Recomputed["d_cm"].(float64), 1e-13)
	// The print rounds the path before it multiplies, so a whole unit of its last digit.
	near(t, c.Source+": printed displacement, cm", 100*d, c.Published["d_cm"].(float64), 0.01)
}
