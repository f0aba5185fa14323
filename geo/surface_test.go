package geo

import (
	"math"
	"math/big"
	"testing"
)

func TestFillLevel(t *testing.T) {
	for _, n := range []int{0, 1, 2, 31, 32, 33, 1023, 1024, 1025} {
		level, sx, sy := make([]float64, n), make([]float64, n), make([]float64, n)
		for i := range n {
			level[i], sx[i], sy[i] = math.NaN(), 5, math.NaN()
		}
		FillLevel(level, sx, sy, 0.42)
		for i := range n {
			if level[i] != 0.42 || sx[i] != 0 || sy[i] != 0 {
				t.Fatalf("n %d, point %d: %v %v %v, want 0.42 0 0", n, i, level[i], sx[i], sy[i])
			}
		}
	}
}

// TestPlaneFarFromOrigin compares with the plane computed in 200-bit numbers.
func TestPlaneFarFromOrigin(t *testing.T) {
	p := Plane{Level: 31.257, AtX: 512000, AtY: 7012000, SlopeX: 0.00123, SlopeY: -0.0171}
	rng := newRand(t, 11)
	const n = 1000
	level, sx, sy, x, y := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		x[i], y[i] = p.AtX+3000*(rng.Float64()-0.5), p.AtY+3000*(rng.Float64()-0.5)
	}
	p.Fill(level, sx, sy, x, y)
	exact := func(v float64) *big.Float { return new(big.Float).SetPrec(200).SetFloat64(v) }
	for i := range n {
		dx, dy := exact(x[i]), exact(y[i])
		dx.Mul(dx.Sub(dx, exact(p.AtX)), exact(p.SlopeX))
		dy.Mul(dy.Sub(dy, exact(p.AtY)), exact(p.SlopeY))
		want, _ := dx.Add(dx, dy.Add(dy, exact(p.Level))).Float64()
		if math.Abs(level[i]-want) > 4*0x1p-48 { // four roundings of 32 m
			t.Errorf("at %v %v: %.17g, want %.17g", x[i], y[i], level[i], want)
		}
		if sx[i] != p.SlopeX || sy[i] != p.SlopeY {
			t.Errorf("at %v %v: slopes %v %v, want %v %v", x[i], y[i], sx[i], sy[i], p.SlopeX, p.SlopeY)
		}
	}
}

func TestPlaneLimits(t *testing.T) {
	level, sx, sy := make([]float64, 3), make([]float64, 3), make([]float64, 3)
	p := Plane{Level: 2, AtX: 10, AtY: 20, SlopeX: 0.5, SlopeY: 0.25}
	x := []float64{10, 12, math.NaN()}
	p.Fill(level, sx, sy, x, []float64{20, 24, 20})
	// By hand: at the given position the given level; 2 + 0.5*2 + 0.25*4 = 4; nothing for NaN.
	if level[0] != 2 || level[1] != 4 || !math.IsNaN(level[2]) {
		t.Errorf("levels %v, want 2 4 NaN", level)
	}
	p.Fill(x, sx, sy, x, []float64{20, 24, 20})
	if x[0] != 2 || x[1] != 4 {
		t.Errorf("levels over x %v, want 2 4 NaN", x)
	}
}

func TestSurfaceLengths(t *testing.T) {
	two, three := make([]float64, 2), make([]float64, 3)
	mustPanic(t, func() { FillLevel(two, three, two, 1) })
	mustPanic(t, func() { FillLevel(two, two, three, 1) })
	for odd := 1; odd < 5; odd++ {
		c := [5][]float64{two, two, two, two, two}
		c[odd] = three
		mustPanic(t, func() { Plane{}.Fill(c[0], c[1], c[2], c[3], c[4]) })
	}
}
