package correct

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct/optics"
)

const gradientSeed = 20260712

// randomSights fills a solver with the rays of a point at the origin under tilted
// planes or, if it is not nil, behind a port, each camera turned at random but facing it.
func randomSights(t *testing.T, r *rand.Rand, s *MultiviewSolver, rule Residual, port *Port) {
	t.Helper()
	s.sights = s.sights[:0]
	near, far := 1+r.Float64(), 1+r.Float64()
	s.stack = optics.NewStack(near, far)
	if port != nil {
		s.stack = optics.NewStack(near, far, port.Panes...)
	}
	for range 5 {
		camera := optics.Vec{X: 9 * r.NormFloat64(), Y: 9 * r.NormFloat64(), Z: 20 + 9*r.Float64()}
		z := camera.Add(optics.Vec{X: r.NormFloat64(), Y: r.NormFloat64()}).Unit()
		x := z.Cross(optics.Vec{X: r.NormFloat64(), Y: 1}).Unit()
		y := z.Cross(x)
		cameras := Cameras{Rotation: [][9]float64{{x.X, y.X, z.X, x.Y, y.Y, z.Y, x.Z, y.Z, z.Z}}}
		surface := plane{level: 2, rise: 2, slopeX: 0.1 * r.NormFloat64(), slopeY: 0.1 * r.NormFloat64()}
		var k sight
		if port != nil {
			k.lookThrough(port, &cameras, 0, camera, near, far)
		} else {
			k.look(camera, camera, surface, false)
		}
		if !k.aimFor(rule, &cameras, 0) {
			t.Fatalf("seed %d: a camera looks away", gradientSeed)
		}
		s.sights = append(s.sights, k)
	}
}

// Newton's derivatives against central differences of the gradient, also far from
// the solution, where the angles between rays and point are large.
func TestGradientDerivative(t *testing.T) {
	r := rand.New(rand.NewPCG(gradientSeed, 0))
	panes := []optics.Layer{{ThicknessM: 0.7, Index: 1.5}, {ThicknessM: 0.2, Index: 1.2}}
	for _, port := range []*Port{
		nil,
		{DistanceM: 2, Panes: panes, Normal: PortNormal(0.1, -0.2)},
		{DistanceM: 2, Panes: panes, Normal: PortNormal(0.1, -0.2), CalibrationM: 7},
		{DistanceM: 2, Normal: PortNormal(0, 0)},
		{Panes: panes, Normal: PortNormal(0, 0), CalibrationM: 40},
	} {
		checkGradient(t, r, port)
	}
}

func checkGradient(t *testing.T, r *rand.Rand, port *Port) {
	t.Helper()
	const h = 1e-5
	for _, rule := range []Residual{Image, Angle, Equal} {
		for _, spread := range []float64{0.01, 0.5, 5} {
			for i := range 50 {
				var s MultiviewSolver
				randomSights(t, r, &s, rule, port)
				p := optics.Vec{X: spread * r.NormFloat64(), Y: spread * r.NormFloat64(), Z: -1 - 5*r.Float64()}
				_, by := s.gradient(p, rule)
				for c, d := range []optics.Vec{{X: h}, {Y: h}, {Z: h}} {
					up, _ := s.gradient(p.Add(d), rule)
					down, _ := s.gradient(p.Sub(d), rule)
					want, got := up.Sub(down).Scale(1/(2*h)), by.times(d.Scale(1/h))
					scale := math.Sqrt(by.x.Dot(by.x) + by.y.Dot(by.y) + by.z.Dot(by.z))
					if !(got.Sub(want).Norm() < 1e-7*scale) {
						t.Fatalf("seed %d: residual %d, case %d: derivative by axis %d is %v, want %v", gradientSeed, rule, i, c, got, want)
					}
				}
			}
		}
	}
}

// Both sides of the change from series to closed form agree, with the angle itself too.
func TestAngleOverSine(t *testing.T) {
	for _, rad := range []float64{0, 1e-9, 1e-3, 0.03, 0.0316, 0.0317, 0.1, 1, 2, 3, 3.12} {
		sin, cos := math.Sincos(rad)
		k, by := angleOverSine(sin*sin, cos)
		wantK, wantBy := rad/sin, (rad*cos/sin-1)/(sin*sin)
		if rad < 1e-2 {
			wantK, wantBy = 1+rad*rad/6+7*math.Pow(rad, 4)/360, -1./3-2*rad*rad/15 // series from memory
		}
		if !(math.Abs(k-wantK) < 1e-14*wantK && math.Abs(by-wantBy) < 2e-12*math.Abs(wantBy)) {
			t.Errorf("at %g: %.17g and %.17g, want %.17g and %.17g", rad, k, by, wantK, wantBy)
		}
	}
}

// A pair of rays of 3, 4 and 5: 30 m down and 40 m across in the air, 4 m down and 3 m across in
// water of index 4/3, prolonged to 2.25 m. From starts far off Newton's method ends at the
// point; without a check of its steps, some would leave the water for good.
func TestInvertFromAfar(t *testing.T) {
	s := MultiviewSolver{stack: optics.NewStack(1, 4./3)}
	for _, x := range []float64{-43, 43} {
		var k sight
		camera := optics.Vec{X: x, Z: 30}
		k.look(camera, camera.Sub(optics.Vec{Z: -2.25}), plane{level: 0, rise: 2.25}, false)
		k.aimFor(Angle, nil, 0)
		s.sights = append(s.sights, k)
	}
	for _, from := range []optics.Vec{{Z: 2.2}, {X: 30, Z: 2}, {X: -60, Y: 40, Z: 2}, {Y: 60, Z: -100}, {X: 200, Z: -500}, {Z: -5000}} {
		p, ok := s.invert(from, Angle)
		if !ok || !(p.Sub(optics.Vec{Z: -1.75}).Norm() < 1e-9) {
			t.Errorf("from %v: %v, %v, want -1.75 in z", from, p, ok)
		}
	}
}
