package optics_test

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/optimize"

	"bentray/correct/optics"
)

const seed = 20260711

// randomUnit returns a direction uniform on the sphere.
func randomUnit(r *rand.Rand) optics.Vec {
	return optics.Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}.Unit()
}

// against returns n or its opposite, whichever points against travel along dir.
func against(n, dir optics.Vec) optics.Vec {
	if dir.Dot(n) > 0 {
		return n.Scale(-1)
	}
	return n
}

func TestRefractSnell(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 1))
	var bent, reflected int
	for range 20000 {
		dir := randomUnit(r)
		normal := against(randomUnit(r), dir)
		from, to := 1+r.Float64(), 1+r.Float64()
		if r.IntN(4) == 0 {
			to = from * (1 + 1e-9*r.NormFloat64()) // nearly equal
		}
		sin := dir.Cross(normal).Norm()
		out, ok := optics.Refract(dir, normal, from, to)
		if want := from*sin <= to; ok != want && math.Abs(from*sin-to) > 1e-14 {
			t.Fatalf("seed %d: sine %g from index %g to %g: refracted is %t, want %t", seed, sin, from, to, ok, want)
		}
		if !ok {
			reflected++
			continue
		}
		bent++
		near(t, "length", out.Norm(), 1, 1e-15)
		near(t, "n sin", to*out.Cross(normal).Norm(), from*sin, 2e-15)
		near(t, "out of the plane of incidence", out.Dot(dir.Cross(normal)), 0, 1e-15)
		if out.Dot(normal) > 0 {
			t.Errorf("seed %d: the refracted ray turned back: %v", seed, out)
		}
		flipped, ok := optics.Refract(dir, normal.Scale(-1), from, to)
		if !ok || flipped != out {
			t.Errorf("seed %d: opposite normal gives %v, want %v", seed, flipped, out)
		}
		if t.Failed() {
			t.Fatalf("seed %d: dir %v normal %v from %g to %g", seed, dir, normal, from, to)
		}
	}
	if bent < 1000 || reflected < 1000 {
		t.Errorf("%d rays bent and %d reflected, want 1000 of each at least", bent, reflected)
	}
}

// Reversed, a refracted ray retraces its path. Near 90 degrees the angle is
// ill-conditioned, so incidence stays below 80.
func TestRefractReversible(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 2))
	for range 5000 {
		dir := tilted(radians(80 * r.Float64()))
		to := 1 + r.Float64()
		down, ok := optics.Refract(dir, up, 1, to)
		if !ok {
			t.Fatalf("seed %d: total reflection into index %g", seed, to)
		}
		back, ok := optics.Refract(down.Scale(-1), up, to, 1)
		if !ok {
			t.Fatalf("seed %d: total reflection on the way back from index %g", seed, to)
		}
		near(t, "difference from the reversed ray", back.Add(dir).Norm(), 0, 1e-14)
	}
}

func TestRefractEqualIndices(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 3))
	for range 1000 {
		dir, normal, n := randomUnit(r), randomUnit(r), 1+r.Float64()
		if out, ok := optics.Refract(dir, normal, n, n); !ok || out != dir {
			t.Fatalf("seed %d: %v became %v between equal indices", seed, dir, out)
		}
	}
	along := optics.Vec{X: 1}
	if out, ok := optics.Refract(along, up, 1.3, 1.3); !ok || out != along {
		t.Errorf("ray along the boundary became %v, want it unchanged", out)
	}
}

// The bend tends to (nTo/nFrom - 1) tan i as the indices approach each other:
// differentiate Snell's law.
func TestRefractNearlyEqualIndices(t *testing.T) {
	for _, step := range []float64{1e-8, 1e-12, -1e-12} {
		dir, to := tilted(1), 1+step
		out, ok := optics.Refract(dir, up, 1, to)
		if !ok {
			t.Fatalf("total reflection at 1 rad from index 1 to %g", to)
		}
		// What to really differs from 1 by, after rounding.
		near(t, "bend, rad", out.Cross(dir).Y, (to-1)*math.Tan(1), 2e-16+10*step*step)
	}
}

// Near grazing incidence a small difference of indices turns the ray much; the cosine
// of refraction, sqrt(1 - (1 - c^2) (nFrom/nTo)^2), comes from 200-bit arithmetic.
func TestRefractGrazingNearlyEqual(t *testing.T) {
	for _, row := range []struct{ cos, from, to float64 }{
		{1e-6, 1, 1 + 1e-13}, {1e-7, 1.34, 1.34 + 1e-12}, {1e-6, 1.34 + 1e-13, 1.34}, {1e-3, 1.00027, 1.00028},
	} {
		out, ok := optics.Refract(optics.Vec{X: math.Sqrt(1 - row.cos*row.cos), Z: -row.cos}, up, row.from, row.to)
		if !ok {
			t.Fatalf("total reflection at cosine %g from index %.17g to %.17g", row.cos, row.from, row.to)
		}
		wide := func(x float64) *big.Float { return new(big.Float).SetPrec(200).SetFloat64(x) }
		ratio := wide(0).Quo(wide(row.from), wide(row.to))
		sine := wide(0).Sub(wide(1), wide(0).Mul(wide(row.cos), wide(row.cos)))
		sine.Mul(sine, ratio).Mul(sine, ratio)
		want, _ := wide(0).Sqrt(wide(0).Sub(wide(1), sine)).Float64()
		near(t, "cosine of refraction", -out.Z, want, 4e-16*want)
	}
}

func TestRefractLimits(t *testing.T) {
	const air, water = 1.00027, 1.3400
	critical := optics.CriticalAngleRad(water, air)
	near(t, "sine of the critical angle", math.Sin(critical), air/water, 1e-15)
	for _, row := range []struct {
		name     string
		rad      float64
		from, to float64
		wantRad  float64 // NaN: total reflection
		tol      float64
	}{
		{"straight down", 0, air, water, 0, 0},
		{"straight up", 0, water, air, 0, 0},
		{"along the surface into water", math.Pi / 2, air, water, critical, 1e-15},
		// Near the critical angle an ulp of incidence moves the refracted ray by some 1e-8.
		{"just below the critical angle", critical * (1 - 1e-12), water, air, math.Pi / 2, 3e-6},
		{"just beyond the critical angle", critical * (1 + 1e-12), water, air, math.NaN(), 0},
		{"along the surface out of water", math.Pi / 2, water, air, math.NaN(), 0},
	} {
		t.Run(row.name, func(t *testing.T) {
			out, ok := optics.Refract(tilted(row.rad).Scale(-1), up, row.from, row.to)
			if ok == math.IsNaN(row.wantRad) {
				t.Fatalf("refracted is %t at %g rad", ok, row.rad)
			}
			if ok {
				near(t, "refraction", out.AngleRad(up.Scale(-1)), row.wantRad, row.tol)
			} else if out != (optics.Vec{}) {
				t.Errorf("direction is %v on total reflection, want zeros", out)
			}
		})
	}
	if got := optics.CriticalAngleRad(air, water); got != math.Pi/2 {
		t.Errorf("critical angle into the denser medium is %g, want pi/2", got)
	}
	if got := optics.CriticalAngleRad(water, water); got != math.Pi/2 {
		t.Errorf("critical angle between equal media is %g, want pi/2", got)
	}
	if out, ok := optics.Refract(optics.Vec{X: 1}, up, air, water); !ok || out.Z >= 0 {
		t.Errorf("ray exactly along the surface became %v, want it to go down, away from the normal", out)
	}
	if out, ok := optics.Refract(optics.Vec{X: math.NaN()}, up, air, water); ok && !math.IsNaN(out.X) {
		t.Errorf("NaN direction became %v, want NaN", out)
	}
}

// Fermat: among all points of the boundary, the light from one medium to the
// other crosses where the optical path is least. The minimiser knows nothing of
// Snell's law.
func TestRefractLeastOpticalPath(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 4))
	for range 50 {
		dir := optics.Vec{X: r.Float64() - 0.5, Y: r.Float64() - 0.5, Z: -1}.Unit()
		normal := optics.Vec{X: 0.1 * r.NormFloat64(), Y: 0.1 * r.NormFloat64(), Z: 1}.Unit()
		const air, water = 1.00027, 1.3400
		bent, ok := optics.Refract(dir, normal, air, water)
		if !ok {
			t.Fatalf("seed %d: total reflection into water", seed)
		}
		start, end := dir.Scale(-5), bent.Scale(3) // the crossing is at 0
		u := normal.Cross(optics.Vec{X: 1}).Unit()
		v := normal.Cross(u)
		path := func(at []float64) float64 {
			p := u.Scale(at[0]).Add(v.Scale(at[1]))
			return air*p.Sub(start).Norm() + water*p.Sub(end).Norm()
		}
		found, err := optimize.Minimize(optimize.Problem{Func: path}, []float64{1, -1}, nil, &optimize.NelderMead{})
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		// The path is flat at its minimum: its last bit is worth 1e-7 m of position.
		near(t, "crossing, m", math.Hypot(found.X[0], found.X[1]), 0, 1e-5)
		near(t, "least path, m", path([]float64{0, 0}), found.F, 1e-9)
	}
}
