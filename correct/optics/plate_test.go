package optics_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct/optics"
)

// A ray leaves a plate parallel to how it came, moved sideways by PlateShift and
// along the normal by the thickness.
func TestThroughPlate(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 5))
	for range 5000 {
		normal := randomUnit(r)
		side := normal.Cross(randomUnit(r)).Unit()
		i := radians(85 * r.Float64())
		dir := normal.Scale(math.Cos(i)).Add(side.Scale(math.Sin(i)))
		at := randomUnit(r).Scale(10)
		thickness, around, plate := 0.05*r.Float64(), 1+0.4*r.Float64(), 1.45+0.3*r.Float64()

		exit, out, ok := optics.ThroughPlate(at, dir, normal, thickness, around, plate)
		if !ok {
			t.Fatalf("seed %d: total reflection at index %g in %g", seed, plate, around)
		}
		near(t, "change of direction", out.Sub(dir).Norm(), 0, 1e-14)
		moved := exit.Sub(at)
		near(t, "step along the normal, m", moved.Dot(normal), thickness, 1e-14)
		shift := moved.Sub(dir.Scale(moved.Dot(dir))).Norm()
		near(t, "displacement, m", shift, optics.PlateShift(thickness, i, plate/around), 1e-14)
		if t.Failed() {
			t.Fatalf("seed %d", seed)
		}
	}
}

// The plate's geometry gives t sin(i - r) / cos r with sin r = sin i / n.
func TestPlateShiftGeometry(t *testing.T) {
	for deg := 0.0; deg <= 89; deg++ {
		for _, n := range []float64{0.9, 1.1, 1.5, 1.9} {
			i := radians(deg)
			if math.Sin(i) > n-0.02 {
				continue // at the critical angle the arc sine loses its digits
			}
			refraction := math.Asin(math.Sin(i) / n)
			want := math.Sin(i-refraction) / math.Cos(refraction)
			near(t, "displacement of a plate of 1 m", optics.PlateShift(1, i, n), want, 1e-14)
		}
	}
}

func TestPlateLimits(t *testing.T) {
	near(t, "displacement at equal indices", optics.PlateShift(0.02, 1, 1), 0, 1e-17)
	near(t, "displacement straight through", optics.PlateShift(0.02, 0, 1.5), 0, 0)
	near(t, "displacement at 90 degrees", optics.PlateShift(0.02, math.Pi/2, 1.5), 0.02, 1e-15)
	if got := optics.PlateShift(0.02, 1, 0.7); !math.IsNaN(got) {
		t.Errorf("displacement on total reflection is %g, want NaN", got)
	}
	if exit, out, ok := optics.ThroughPlate(optics.Vec{X: 1}, tilted(1), up, 0.02, 1.34, 1); ok || exit != (optics.Vec{}) || out != (optics.Vec{}) {
		t.Errorf("total reflection gives %v %v %t, want zeros and false", exit, out, ok)
	}
}
