package optics_test

import (
	"math"
	"testing"

	"bentray/correct/optics"
)

// Worked by hand.
func TestVec(t *testing.T) {
	v, w := optics.Vec{X: 1, Y: 2, Z: 2}, optics.Vec{X: -3, Y: 0, Z: 4}
	for _, row := range []struct {
		name      string
		got, want optics.Vec
	}{
		{"add", v.Add(w), optics.Vec{X: -2, Y: 2, Z: 6}},
		{"sub", v.Sub(w), optics.Vec{X: 4, Y: 2, Z: -2}},
		{"scale", v.Scale(-2), optics.Vec{X: -2, Y: -4, Z: -4}},
		{"cross", v.Cross(w), optics.Vec{X: 8, Y: -10, Z: 6}},
	} {
		if row.got != row.want {
			t.Errorf("%s is %v, want %v", row.name, row.got, row.want)
		}
	}
	near(t, "dot", v.Dot(w), 5, 0)
	near(t, "norm", v.Norm(), 3, 0)
	near(t, "unit", v.Unit().Sub(optics.Vec{X: 1. / 3, Y: 2. / 3, Z: 2. / 3}).Norm(), 0, 2e-16)
	near(t, "angle", v.AngleRad(w), math.Acos(5./15), 1e-15)
	near(t, "small angle", tilted(1e-10).AngleRad(up), 1e-10, 1e-25)
	near(t, "opposite", up.AngleRad(up.Scale(-1)), math.Pi, 0)
	if u := (optics.Vec{}).Unit(); !math.IsNaN(u.Norm()) {
		t.Errorf("unit of the zero vector is %v, want no finite length", u)
	}
}
