package geo

import (
	"math"
	"math/rand/v2"
	"testing"
)

// planePoints are points of a plane within a radius, with noise.
func planePoints(rng *rand.Rand, n int, radius, noise float64) (u, v, z []float64) {
	for len(u) < n {
		a, b := radius*(2*rng.Float64()-1), radius*(2*rng.Float64()-1)
		if math.Hypot(a, b) < radius {
			u, v, z = append(u, a), append(v, b), append(z, -7.25+0.3*a-0.1*b+noise*rng.NormFloat64())
		}
	}
	return u, v, z
}

// A plane gives itself back: identity.
func TestLocalPlaneExact(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 1))
	var fit LocalPlane
	for _, n := range []int{6, 7, 40, 500} {
		level, sx, sy, ok := fitted(&fit)(planePoints(rng, n, 0.5, 0))
		if !ok || math.Abs(level+7.25) > 1e-12 || math.Abs(sx-0.3) > 1e-11 || math.Abs(sy+0.1) > 1e-11 {
			t.Errorf("%d points: %v %v %v %v", n, level, sx, sy, ok)
		}
	}
}

// Of 40 points with 2 cm of noise, 15 % lie 0.5 to 2 m too high, as fish and weed do:
// the level holds to 2 cm.
func TestLocalPlaneWithBlunders(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 2))
	var fit LocalPlane
	for range 200 {
		u, v, z := planePoints(rng, 40, 0.5, 0.02)
		for i := range 6 {
			z[i] += 0.5 + 1.5*rng.Float64()
		}
		if level, _, _, ok := fit.Fit(u, v, z, 0.5); !ok || math.Abs(level+7.25) > 0.02 {
			t.Errorf("level %v %v, want -7.25", level, ok)
		}
	}
}

// What does not determine the level is refused.
func TestLocalPlaneRefused(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 3))
	var fit LocalPlane
	if _, _, _, ok := fitted(&fit)(planePoints(rng, 5, 0.5, 0)); ok {
		t.Error("5 points are taken")
	}
	u, v, z := planePoints(rng, 30, 0.5, 0.01)
	for i := range u {
		v[i] = u[i] / 2
	}
	if _, _, _, ok := fit.Fit(u, v, z, 0.5); ok {
		t.Error("points on a line are taken")
	}
	u, v, z = planePoints(rng, 30, 0.1, 0.01)
	for i := range u {
		u[i] += 0.35
	}
	if _, _, _, ok := fit.Fit(u, v, z, 0.5); ok {
		t.Error("points far to one side are taken")
	}
}

// fitted fits what planePoints returns, within 0.5 m.
func fitted(l *LocalPlane) func(u, v, z []float64) (level, sx, sy float64, ok bool) {
	return func(u, v, z []float64) (float64, float64, float64, bool) { return l.Fit(u, v, z, 0.5) }
}
