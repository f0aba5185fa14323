package acoustics_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct/acoustics"
)

const seed = 20261201

var nan, inf = math.NaN(), math.Inf(1)

// traced returns the arrival of a ray launched at an angle from the downward vertical.
func traced(t *testing.T, p *acoustics.Profile, depth, deg, time float64) acoustics.Arrival {
	t.Helper()
	sin, cos := math.Sincos(deg * degree)
	switch deg {
	case 90:
		cos = 0
	case 180:
		sin = 0
	}
	a := p.Trace(depth, sin, cos, time)
	if a.Fate != acoustics.Arrived {
		t.Fatalf("fate %v from %g m at %g degrees in %g s, want arrived", a.Fate, depth, deg, time)
	}
	return a
}

// A constant speed is a straight line, with one sample and with many, in both
// interpolations.
func TestTraceStraight(t *testing.T) {
	many := []float64{0, 1, 2.5, 7, 40}
	same := []float64{1487.3, 1487.3, 1487.3, 1487.3, 1487.3}
	for _, p := range []*acoustics.Profile{
		profile(t, []float64{3}, []float64{1487.3}, acoustics.Linear),
		profile(t, many, same, acoustics.Linear), profile(t, many, same, acoustics.Steps),
	} {
		for _, deg := range []float64{0, 1e-7, 30, 89, 89.99999, 90, 90.0001, 135, 180} {
			a := traced(t, p, 30, deg, 0.019)
			sin, cos := math.Sincos(deg * degree)
			near(t, "x", a.RunM, 1487.3*0.019*sin, 1e-9)
			near(t, "z", a.DepthM, 30+1487.3*0.019*cos, 1e-9)
			near(t, "sine", a.Sin, sin, 1e-14)
			near(t, "cosine", a.Cos, cos, 1e-14)
		}
	}
}

// gradient returns n layers of one gradient from 0 to 100 m.
func gradient(t *testing.T, n int, g float64) *acoustics.Profile {
	t.Helper()
	depths, speeds := make([]float64, n+1), make([]float64, n+1)
	for i := range depths {
		depths[i] = 100 * float64(i) / float64(n)
		speeds[i] = 1500 + g*depths[i]
	}
	return profile(t, depths, speeds, acoustics.Linear)
}

// 1, 10 and 1000 layers of one gradient give one arc: turning, upward and horizontal rays
// too, and one that begins at a boundary.
func TestTraceLayersOfOneGradient(t *testing.T) {
	for _, g := range []float64{0.9, -0.9, 0.017, 1e-6} {
		one, ten, thousand := gradient(t, 1, g), gradient(t, 10, g), gradient(t, 1000, g)
		for _, deg := range []float64{0, 20, 70, 88, 90, 92, 110, 160, 180} {
			for _, depth := range []float64{50, 47.3} {
				a := traced(t, one, depth, deg, 0.03)
				for _, p := range []*acoustics.Profile{ten, thousand} {
					b := traced(t, p, depth, deg, 0.03)
					near(t, "x", b.RunM, a.RunM, 1e-9)
					near(t, "z", b.DepthM, a.DepthM, 1e-9)
					near(t, "cosine", b.Cos, a.Cos, 1e-12)
					if b.Turned != a.Turned {
						t.Errorf("gradient %g, %g m, %g degrees: turned is %v in %d layers, %v in one", g, depth, deg, b.Turned, p.Samples()-1, a.Turned)
					}
				}
			}
		}
	}
}

// To first order in the gradient the ray equations integrate to
// x = c t s + g c t^2 s k and z = c t k + g c t^2 (k^2 - s^2) / 2 with s, k sine and cosine of
// the launch angle. What is left is of order g^2 c t^3.
func TestTraceSmallGradients(t *testing.T) {
	const time = 0.04
	for g := 1e-2; g > 1e-16; g /= 7 {
		for _, sign := range []float64{1, -1} {
			p := profile(t, []float64{0, 1000}, []float64{1500, 1500 + sign*g*1000}, acoustics.Linear)
			for _, deg := range []float64{0, 35, 89.9, 90, 125} {
				from := 40.0
				s, k := math.Sincos(deg * degree)
				a, c, h := traced(t, p, from, deg, time), p.Speed(from), sign*g
				tol := 1e-12 + 2*g*g*c*time*time*time
				near(t, "x", a.RunM, c*time*s+h*c*time*time*s*k, tol+1e-11)
				near(t, "z", a.DepthM-from, c*time*k+h*c*time*time*(k*k-s*s)/2, tol+1e-11)
			}
		}
	}
}

// random returns a profile of n samples to about 60 m.
func random(t *testing.T, r *rand.Rand, n int, kind acoustics.Interpolation) (p *acoustics.Profile, depths, speeds []float64) {
	t.Helper()
	z := 2 * r.Float64()
	for range n {
		depths, speeds = append(depths, z), append(speeds, 1480+40*r.Float64())
		z += 0.5 + 120/float64(n)*r.Float64()
	}
	return profile(t, depths, speeds, kind), depths, speeds
}

// integrate solves the ray equations x' = c sin th, z' = c cos th, th' = (dc/dz) sin th by
// Runge and Kutta's classical method, in 5000 steps, but 1000 times shorter ones where the gradient
// changes. It knows nothing of layers, arcs or ray parameters.
func integrate(depths, speeds []float64, z, th, time float64) (x, depth, end float64) {
	sound := func(z float64) (c, g float64) {
		for i := 1; i < len(depths); i++ {
			if z < depths[i] && z >= depths[i-1] {
				g = (speeds[i] - speeds[i-1]) / (depths[i] - depths[i-1])
				return speeds[i-1] + g*(z-depths[i-1]), g
			}
		}
		if z < depths[0] {
			return speeds[0], 0
		}
		return speeds[len(speeds)-1], 0
	}
	slope := func(z, th float64) (dx, dz, dth float64) {
		c, g := sound(z)
		return c * math.Sin(th), c * math.Cos(th), g * math.Sin(th)
	}
	full := time / 5000
	for time > 0 {
		h := full
		for _, d := range depths {
			if math.Abs(z-d) < 1600*full {
				h = full / 1000
			}
		}
		h = min(h, time)
		time -= h
		x1, z1, t1 := slope(z, th)
		x2, z2, t2 := slope(z+h/2*z1, th+h/2*t1)
		x3, z3, t3 := slope(z+h/2*z2, th+h/2*t2)
		x4, z4, t4 := slope(z+h*z3, th+h*t3)
		x += h / 6 * (x1 + 2*x2 + 2*x3 + x4)
		z += h / 6 * (z1 + 2*z2 + 2*z3 + z4)
		th += h / 6 * (t1 + 2*t2 + 2*t3 + t4)
	}
	return x, z, th
}

func TestTraceAgainstIntegration(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 1))
	turned := 0
	for i := range 80 {
		p, depths, speeds := random(t, r, 2+r.IntN(10), acoustics.Linear)
		from, deg, time := 5+40*r.Float64(), 80*r.Float64(), 0.01+0.05*r.Float64()
		if i%2 == 0 {
			deg = 84 + 12*r.Float64()
		}
		sin, cos := math.Sincos(deg * degree)
		a := p.Trace(from, sin, cos, time)
		if a.Fate == acoustics.Surfaced {
			continue
		}
		if a.Turned {
			turned++
		}
		x, z, th := integrate(depths, speeds, from, deg*degree, time)
		// A step over a change of the gradient turns the ray by up to 1e-8 s times the change.
		near(t, "x", a.RunM, x, 3e-6)
		near(t, "z", a.DepthM, z, 3e-6)
		near(t, "angle", math.Atan2(a.Sin, a.Cos), th, 1e-6)
		if t.Failed() {
			t.Fatalf("seed %d: from %g m at %g degrees, %g s, through %v %v", seed, from, deg, time, depths, speeds)
		}
	}
	if turned < 5 {
		t.Errorf("seed %d: %d rays turned, want 5 at least", seed, turned)
	}
}

// A path gone back from its end, with the direction reversed, returns to its start.
func TestTraceReversed(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 2))
	turned := 0
	for i := range 6000 {
		p, _, _ := random(t, r, 2+r.IntN(40), acoustics.Interpolation(i%2))
		from, time := 0.5+50*r.Float64(), 0.06*r.Float64()
		sin, cos := math.Sincos(math.Pi * r.Float64())
		a := p.Trace(from, sin, cos, time)
		// Where it nearly touches a vertex a ray is ill-conditioned.
		if a.Fate == acoustics.Surfaced || math.Abs(a.Cos) < 1e-2 {
			continue
		}
		if a.Turned {
			turned++
		}
		b := p.Trace(a.DepthM, a.Sin, -a.Cos, time)
		near(t, "x", b.RunM, a.RunM, 1e-8)
		near(t, "z", b.DepthM, from, 1e-8)
		near(t, "cosine", b.Cos, -cos, 1e-9)
		if t.Failed() || b.Fate != acoustics.Arrived {
			t.Fatalf("seed %d: from %g m, cosine %g, %g s: fate back %v", seed, from, cos, time, b.Fate)
		}
	}
	if turned < 100 {
		t.Errorf("seed %d: %d rays turned, want 100 at least", seed, turned)
	}
}

// In a channel of gradients -g and g, a ray from its axis with cosine k comes back to it after
// 2 atanh(k) / g and 2 c k / (g sin): half a period.
func TestTraceChannel(t *testing.T) {
	const g, c = 0.5, 1480.0
	p := profile(t, []float64{0, 100, 200}, []float64{c + 100*g, c, c + 100*g}, acoustics.Linear)
	for _, k := range []float64{1e-3, 1e-8, 1e-12} {
		half := 2 * math.Atanh(k) / g
		for _, halves := range []float64{4, 1000, 10001} {
			a := p.Trace(100, math.Sqrt(1-k*k), k, (halves+0.5)*half)
			run := (halves + 0.5) * 2 * c * k / (g * math.Sqrt(1-k*k))
			near(t, "x", a.RunM/run, 1, 1e-9)
			near(t, "height of the vertex", math.Abs(a.DepthM-100), c/g*(1/math.Sqrt(1-k*k)-1), 1e-10)
			near(t, "cosine", a.Cos, 0, 1e-9)
			if !a.Turned {
				t.Errorf("cosine %g, %g half periods: not turned", k, halves)
			}
		}
	}
	a := p.Trace(100, 1, 0, 2)
	near(t, "x along the axis", a.RunM, 2*c, 1e-9)
	near(t, "z along the axis", a.DepthM, 100, 0)
}

// At a step to a speed that makes the sine 1 or more the ray is reflected.
func TestTraceReflected(t *testing.T) {
	p := profile(t, []float64{0, 10}, []float64{1450, 1500}, acoustics.Steps)
	a := traced(t, p, 4, 80, 0.03)
	length := 1450 * 0.03
	near(t, "x", a.RunM, length*math.Sin(80*degree), 1e-9)
	near(t, "z", a.DepthM, 10-(length*math.Cos(80*degree)-6), 1e-9)
	if !a.Turned || a.Beyond {
		t.Errorf("turned %v, beyond %v, want true and false", a.Turned, a.Beyond)
	}
	a = traced(t, p, 4, 70, 0.03)
	near(t, "Snell's law below the step", a.Sin, 1500./1450*math.Sin(70*degree), 1e-14)
	if a.Turned || !a.Beyond {
		t.Errorf("turned %v, beyond %v, want false and true", a.Turned, a.Beyond)
	}
}

func TestTraceFates(t *testing.T) {
	p := profile(t, []float64{0, 10}, []float64{1500, 1490}, acoustics.Linear)
	for _, row := range []struct {
		name                 string
		depth, sin, cos, sec float64
		want                 acoustics.Fate
	}{
		{"down", 0, 0, 1, 0.1, acoustics.Arrived},
		{"no time", 5, 0.6, 0.8, 0, acoustics.Arrived},
		{"up, in time", 5, 0, -1, 0.003, acoustics.Arrived},
		{"up, through the surface", 5, 0, -1, 0.004, acoustics.Surfaced},
		{"turns below the surface", 5, math.Sqrt(1 - 1e-4), -1e-2, 0.1, acoustics.Arrived},
		{"up from the surface", 0, 0.6, -0.8, 1e-9, acoustics.Surfaced},
		{"above the water", -0.1, 0, 1, 0.1, acoustics.NoRay},
		{"depth NaN", nan, 0, 1, 0.1, acoustics.NoRay},
		{"depth 20 km", 2e4, 0, 1, 0.1, acoustics.NoRay},
		{"time negative", 5, 0, 1, -0.1, acoustics.NoRay},
		{"time NaN", 5, 0, 1, nan, acoustics.NoRay},
		{"time Inf", 5, 0, 1, inf, acoustics.NoRay},
		{"no direction", 5, 0, 0, 0.1, acoustics.NoRay},
		{"direction NaN", 5, nan, 1, 0.1, acoustics.NoRay},
		{"sine negative", 5, -0.6, 0.8, 0.1, acoustics.NoRay},
	} {
		if a := p.Trace(row.depth, row.sin, row.cos, row.sec); a.Fate != row.want {
			t.Errorf("%s: fate %v, want %v", row.name, a.Fate, row.want)
		}
	}
}

// Beyond is for several samples: one is a constant profile.
func TestTraceBeyond(t *testing.T) {
	one := profile(t, []float64{0}, []float64{1500}, acoustics.Linear)
	two := profile(t, []float64{0, 10}, []float64{1500, 1490}, acoustics.Linear)
	for _, row := range []struct {
		name string
		p    *acoustics.Profile
		from float64
		deg  float64
		want bool
	}{
		{"one sample", one, 5, 0, false},
		{"within", two, 1, 0, false},
		{"ends below", two, 5, 0, true},
		{"begins below", two, 12, 180, true},
		{"begins at the last sample", two, 10, 180, false},
	} {
		if a := traced(t, row.p, row.from, row.deg, 0.005); a.Beyond != row.want {
			t.Errorf("%s: beyond is %v", row.name, a.Beyond)
		}
	}
}
