package optics_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/optimize"

	"bentray/correct/optics"
)

// crossing is one task for Fermat: distances from the plane, run along it, indices.
type crossing struct{ near, far, run, nNear, nFar float64 }

func (c crossing) boundary() optics.Stack { return optics.NewStack(c.nNear, c.nFar) }

func (c crossing) slopes() optics.Slopes {
	b := c.boundary()
	return b.Fermat(c.near, c.far, c.run*c.run, optics.Slopes{})
}

// crossings are random, over twelve powers of ten and in both directions.
func crossings(n int) []crossing {
	r := rand.New(rand.NewPCG(seed, uint64(n)))
	power := func() float64 { return math.Pow(10, -6+12*r.Float64()) }
	out := make([]crossing, n)
	for i := range out {
		out[i] = crossing{power(), power(), power(), 1 + r.Float64(), 1 + r.Float64()}
	}
	return out
}

// bisect returns the share of the run on the near side where the derivative of the
// optical path changes its sign.
func (c crossing) bisect() float64 {
	low, high := 0.0, 1.0
	for range 200 {
		mid := (low + high) / 2
		s, rest := mid*c.run, (1-mid)*c.run
		if c.nNear*s/math.Hypot(c.near, s) < c.nFar*rest/math.Hypot(c.far, rest) {
			low = mid
		} else {
			high = mid
		}
	}
	return low
}

func TestFermatSnell(t *testing.T) {
	for i, c := range crossings(20000) {
		s := c.slopes()
		near(t, "run", s.Near*c.near+s.Far*c.far, 1, 1e-14)
		sinNear, sinFar := math.Sin(math.Atan(s.Near*c.run)), math.Sin(math.Atan(s.Far*c.run))
		near(t, "n sin", c.nNear*sinNear, c.nFar*sinFar, 4e-15)
		near(t, "share of the near side", s.Near*c.near, c.bisect(), 1e-12)
		if t.Failed() {
			t.Fatalf("seed %d: crossing %d: %+v", seed, i, c)
		}
	}
}

// No other way takes less time, by gonum's minimiser.
func TestFermatLeastTime(t *testing.T) {
	for i, c := range crossings(300) {
		if max(c.near, c.far, c.run) > 1e3*min(c.near, c.far, c.run) {
			continue
		}
		path := func(share float64) float64 {
			return (c.nNear*math.Hypot(c.near, share*c.run) + c.nFar*math.Hypot(c.far, (1-share)*c.run)) / c.run
		}
		share := c.slopes().Near * c.near
		found, err := optimize.Minimize(optimize.Problem{Func: func(x []float64) float64 { return path(x[0]) }},
			[]float64{0.5}, nil, &optimize.NelderMead{})
		if err != nil {
			t.Fatalf("seed %d: crossing %d: %v", seed, i, err)
		}
		if path(share) > found.F*(1+1e-15) {
			t.Errorf("seed %d: crossing %d %+v: path %.17g, the minimiser has %.17g", seed, i, c, path(share), found.F)
		}
	}
}

// The worst tasks: the denser side can only just cover the run, or only just not.
func TestFermatEdges(t *testing.T) {
	reach := 1 / math.Sqrt(1.34*1.34-1) // of 1 m of the denser side, at most
	for _, c := range []crossing{
		{1, 1, 0, 1, 1.34},
		{60, 0, 100, 1, 1.34},
		{60, 1e-300, 100, 1, 1.34},
		{1e-12, 1, reach, 1, 1.34},
		{1e-12, 1, reach * (1 - 1e-12), 1, 1.34},
		{1e-12, 1, reach * (1 + 1e-12), 1, 1.34},
		{1e-12, 1, 5, 1, 1.34},
		{1, 1e-12, reach, 1.34, 1},
		{1, 1e-12, 5, 1.34, 1},
		{1e-9, 1e-9, 1e3, 1, 1.34},
		{0, 1, 0.5, 1, 1.34},
		{1, 2, 3, 1, 1 + 1e-15},
		{1, 2, 3, 1, 9},
	} {
		t.Run(fmt.Sprint(c), func(t *testing.T) {
			s := c.slopes()
			near(t, "run", s.Near*c.near+s.Far*c.far, 1, 1e-14)
			near(t, "n sin", c.nNear*math.Sin(math.Atan(s.Near*c.run)), c.nFar*math.Sin(math.Atan(s.Far*c.run)), 1e-14)
			if !(s.Near > 0 && s.Far > 0) {
				t.Errorf("slopes are %+v, want positive ones", s)
			}
		})
	}
	t.Run("straight down the paraxial ratio", func(t *testing.T) {
		s := crossing{3, 2, 0, 1, 1.34}.slopes()
		near(t, "far over near", s.Far/s.Near, 1/1.34, 1e-15)
	})
	t.Run("equal indices go straight, to the bit", func(t *testing.T) {
		if s := (crossing{3, 2, 7, 1.34, 1.34}).slopes(); s.Near != 1./5 || s.Far != 1./5 {
			t.Errorf("slopes are %+v, want 0.2", s)
		}
	})
	t.Run("not a number", func(t *testing.T) {
		for _, c := range []crossing{{math.NaN(), 1, 1, 1, 2}, {1, 1, math.NaN(), 1, 2}, {1, 1, 1, math.NaN(), 2}} {
			if s := c.slopes(); s.Near == s.Near && s.Far == s.Far {
				t.Errorf("%+v gives %+v, want NaN", c, s)
			}
		}
	})
}

func TestFermatReversible(t *testing.T) {
	for i, c := range crossings(1000) {
		s, back := c.slopes(), crossing{c.far, c.near, c.run, c.nFar, c.nNear}.slopes()
		if s.Near != back.Far || s.Far != back.Near {
			t.Fatalf("seed %d: crossing %d %+v: %+v there and %+v back", seed, i, c, s, back)
		}
	}
}

// A guess changes nothing but the number of steps.
func TestFermatGuess(t *testing.T) {
	for i, c := range crossings(1000) {
		want, b := c.slopes(), c.boundary()
		for _, factor := range []float64{-1, 0.5, 1 - 1e-9, 1, 1 + 1e-4, 2, 1e9, math.Inf(1), math.NaN()} {
			s := b.Fermat(c.near, c.far, c.run*c.run, optics.Slopes{Thin: want.Thin * factor})
			near(t, "near slope over the one without guess", s.Near/want.Near, 1, 2e-15)
			near(t, "far slope over the one without guess", s.Far/want.Far, 1, 2e-15)
			if t.Failed() {
				t.Fatalf("seed %d: crossing %d %+v, guess times %g", seed, i, c, factor)
			}
		}
	}
}

// The derivatives against differences of Fermat itself at both sides, which is correct
// by the tests above.
func TestFermatChange(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 3))
	for i := range 2000 {
		c := crossing{1 + 9*r.Float64(), 1 + 9*r.Float64(), 0.1 + 10*r.Float64(), 1 + r.Float64(), 1 + r.Float64()}
		b, run2 := c.boundary(), c.run*c.run
		byFar, byRun2 := b.Change(c.slopes(), c.near, c.far, run2)
		const h = 1e-4
		at := func(far, run2 float64) float64 { return b.Fermat(c.near, far, run2, optics.Slopes{}).Near }
		near(t, "by the far distance", byFar, (at(c.far+h, run2)-at(c.far-h, run2))/(2*h), 1e-8)
		near(t, "by the squared run", byRun2, (at(c.far, run2+h)-at(c.far, run2-h))/(2*h), 1e-8)
		if t.Failed() {
			t.Fatalf("seed %d: crossing %d: %+v", seed, i, c)
		}
	}
}

// Bend in tangents is Refract in vectors.
func TestBendIsRefract(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 4))
	for i := range 2000 {
		n1, n2, rad, run := 1+r.Float64(), 1+r.Float64(), 1.5*r.Float64(), 10*r.Float64()
		b := optics.NewStack(n1, n2)
		far := b.Bend(math.Tan(rad)/run, run*run).Far * run
		out, ok := optics.Refract(tilted(rad), up, n1, n2)
		if ok != (far == far) {
			t.Fatalf("seed %d: case %d: slope %g, refracted %v", seed, i, far, ok)
		}
		if ok && !(math.Abs(math.Atan(far)-out.AngleRad(up)) < 1e-7) {
			t.Fatalf("seed %d: case %d: angle %.17g, want %.17g", seed, i, math.Atan(far), out.AngleRad(up))
		}
	}
}

// On a tilted plane: Snell's law in vectors at the entry, which lies on the plane.
func TestThroughPlane(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 5))
	for i := range 2000 {
		normal, at := randomUnit(r), randomUnit(r).Scale(10)
		side := func(height float64) optics.Vec {
			return at.Add(randomUnit(r).Cross(normal).Scale(9)).Add(normal.Scale(height))
		}
		from, to := side(5*r.Float64()), side(-5*r.Float64())
		n1, n2 := 1+r.Float64(), 1+r.Float64()
		if r.IntN(2) == 0 {
			normal = normal.Scale(-1)
		}
		entry, ok := optics.ThroughPlane(from, to, at, normal, n1, n2)
		if !ok {
			t.Fatalf("seed %d: case %d: no entry", seed, i)
		}
		near(t, "entry above the plane", entry.Sub(at).Dot(normal), 0, 1e-13)
		in, out := entry.Sub(from).Unit(), to.Sub(entry).Unit()
		// Snell: the part of n d along the plane does not change.
		jump := in.Scale(n1).Sub(out.Scale(n2))
		near(t, "jump along the plane", jump.Cross(normal).Norm(), 0, 1e-11)
		if t.Failed() {
			t.Fatalf("seed %d: case %d", seed, i)
		}
	}
	for name, to := range map[string]optics.Vec{"same side": {X: 3, Z: 1}, "on the plane": {X: 3}, "not a number": {Z: math.NaN()}} {
		if entry, ok := optics.ThroughPlane(optics.Vec{Z: 2}, to, optics.Vec{}, up, 1, 1.34); ok || entry != (optics.Vec{}) {
			t.Errorf("%s: entry %v, %v, want none", name, entry, ok)
		}
	}
}

func BenchmarkFermat(b *testing.B) {
	c := crossing{60, 5, 30, 1, 1.34}
	m := c.boundary()
	for name, guess := range map[string]optics.Slopes{"cold": {}, "warm": c.slopes()} {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			var sum float64
			for b.Loop() {
				sum += m.Fermat(c.near, c.far, c.run*c.run, guess).Near
			}
			if sum == 0 {
				b.Fatal("no slope")
			}
		})
	}
}
