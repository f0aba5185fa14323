package geo

import (
	"math"
	"testing"
)

// shore returns the points of a square raster over a disc of radius 2 about the
// centre that lie east of a straight shore.
func shore(at float64) []sample {
	const step = 0.02
	var s []sample
	for u := -2 + step/2; u < 2; u += step {
		for v := -2 + step/2; v < 2; v += step {
			if u > at && u*u+v*v < 4 {
				s = append(s, sample{u: u, v: v, z: 1, t: math.NaN()})
			}
		}
	}
	return s
}

// TestPatchLeverage compares with integrals over the disc with the weight
// (1 - r^2)^2, r from 0 to 1: the means of r, r^2 and r^4 are 16/35, 1/4 and 1/10. A
// quadratic about points all round has the leverage 1/(1 - (1/4)^2/(1/10)) = 8/3. A
// plane at a shore through the centre has 1 + m^2/(1/8 - m^2), m = 16/35 2/pi.
func TestPatchLeverage(t *testing.T) {
	m := 16.0 / 35 * 2 / math.Pi
	for _, tc := range []struct {
		name         string
		at           float64
		coefficients int
		want         float64
	}{
		{"plane, all round", -2, 3, 1},
		{"quadratic, all round", -2, 6, 8.0 / 3},
		{"plane, shore", 0, 3, 1 + m*m/(0.125-m*m)},
	} {
		f := patchFitter{radius: 2}
		f.load(shore(tc.at))
		if !f.reweight(tc.coefficients) || math.Abs(f.leverage()/tc.want-1) > 1e-3 {
			t.Errorf("%s: leverage %v, want %v", tc.name, f.leverage(), tc.want)
		}
	}
}

// TestPatchDegree: all round, and at a shore through the centre, a patch is a
// quadratic, a quarter of a cell off the shore a plane, and a cell off it there is
// none.
func TestPatchDegree(t *testing.T) {
	for _, tc := range []struct{ at, want float64 }{{-2, 6}, {0, 6}, {0.25, 3}, {1, 0}} {
		f := patchFitter{radius: 2}
		_, ok := f.fit(shore(tc.at))
		if got := float64(f.equations.n); ok != (tc.want > 0) || ok && got != tc.want {
			t.Errorf("shore at %v: %v coefficients, %v, want %v", tc.at, got, ok, tc.want)
		}
	}
}

// TestPatchExact: a quadratic without noise comes back, whatever a tenth of blunders
// to one side.
func TestPatchExact(t *testing.T) {
	want := patch{level: 31, sx: 0.02, sy: -0.01, xx: 0.003, xy: -0.002, yy: 0.001}
	rng := newRand(t, 61)
	for _, n := range []int{20, 33, 1025} {
		var s []sample
		for i := range n {
			p := sample{u: 4*rng.Float64() - 2, v: 4*rng.Float64() - 2, t: float64(i)}
			p.z, _, _ = want.at(p.u, p.v)
			if i > 12 && i%10 == 0 {
				p.z += 1 + rng.Float64()
			}
			s = append(s, p)
		}
		f := patchFitter{radius: 2.9}
		got, ok := f.fit(s)
		if !ok {
			t.Fatalf("%d points: no patch", n)
		}
		for _, d := range []float64{got.level - want.level, got.sx - want.sx, got.sy - want.sy, got.xx - want.xx, got.xy - want.xy, got.yy - want.yy, got.sigma} {
			if math.Abs(d) > 1e-10 {
				t.Errorf("%d points: %+v, want %+v", n, got, want)
			}
		}
		if got.from != 0 || got.to != float64(n-1) {
			t.Errorf("%d points: times %v to %v", n, got.from, got.to)
		}
	}
}

// TestPatchRounds: more rounds change a level by less than a tenth of its sigma.
func TestPatchRounds(t *testing.T) {
	rng := newRand(t, 62)
	change := 0.0
	for range 100 {
		var s []sample
		for range 60 {
			p := sample{u: 4*rng.Float64() - 2, v: 4*rng.Float64() - 2, t: math.NaN()}
			p.z = 0.1*p.u + 0.02*rng.NormFloat64()
			if rng.Float64() < 0.1 {
				p.z += 2 * rng.Float64()
			}
			s = append(s, p)
		}
		f := patchFitter{radius: 3}
		before, ok := f.fit(s)
		if !ok {
			t.Fatal("no patch")
		}
		for range 20 {
			f.step(f.equations.n, biweightCut*robustSigma(f.r, f.scratch, f.equations.n))
		}
		change += (f.result().level - before.level) / before.sigma * ((f.result().level - before.level) / before.sigma) / 100
	}
	if change = math.Sqrt(change); change > 0.1 {
		t.Errorf("20 more rounds change the level by %.3f of its sigma, want below 0.1", change)
	}
}

func TestPatchTooFew(t *testing.T) {
	f := patchFitter{radius: 2}
	for n := range 6 {
		if _, ok := f.fit(shore(-2)[:n]); ok {
			t.Errorf("%d points make a patch", n)
		}
	}
	var line []sample
	for i := range 40 {
		line = append(line, sample{u: float64(i-20) / 11, v: 0.25, t: math.NaN()})
	}
	if _, ok := f.fit(line); ok {
		t.Error("points on one line make a patch")
	}
}
