package geo

import (
	"math"
	"testing"
)

// TestGridMisfitByHand has points of a plane, some of them lifted by metres, and a grid
// with an offset: the others agree to rounding, whatever the offset.
func TestGridMisfitByHand(t *testing.T) {
	var points SurfacePoints
	lifted := 0
	for i := range 60 {
		for k := range 50 {
			x, y := float64(i), float64(k)
			z := 0.3 + 0.002*x - 0.001*y
			if (7*i+3*k)%29 == 0 {
				z += 2 + x/30
				lifted++
			}
			points.Add([]float64{x, math.NaN()}, []float64{y, 1}, []float64{z, 1}, nil)
		}
	}
	g, err := NewGrid(&points, GridOptions{Cell: 5, Offset: 0.07})
	if err != nil {
		t.Fatal(err)
	}
	m := g.Misfit(&points)
	if m.Used != 60*50-lifted || m.FarOff != lifted {
		t.Errorf("%d points agree and %d are far off, want %d and %d", m.Used, m.FarOff, 60*50-lifted, lifted)
	}
	if want := 2 + 59.0/30; m.Farthest > want+0.001 || m.Farthest < want-0.1 {
		t.Errorf("the farthest is %v m off, want some %v", m.Farthest, want)
	}
	if m.RMS > 1e-6 || m.Largest > 1e-5 || m.Sigma > 1e-6 {
		t.Errorf("rms %v, largest %v, sigma %v, want some 0", m.RMS, m.Largest, m.Sigma)
	}
}

// TestGridMisfitOfNoise has two passes over a level that rose between them by 0.4 m,
// with 4 mm of noise: each point is compared at its own time.
func TestGridMisfitOfNoise(t *testing.T) {
	const noise, n = 0.004, 40000
	rng := newRand(t, 48)
	var points SurfacePoints
	square, largest := 0.0, 0.0
	for i := range n {
		e, at := noise*rng.NormFloat64(), float64(i%2)
		square, largest = square+e*e, max(largest, math.Abs(e))
		points.Add([]float64{100 * rng.Float64()}, []float64{100 * rng.Float64()}, []float64{0.4*at + e}, []float64{600 * at})
	}
	g, err := NewGrid(&points, GridOptions{Cell: 5})
	if err != nil {
		t.Fatal(err)
	}
	m := g.Misfit(&points)
	if m.Used+m.FarOff != n || m.FarOff > 3 {
		t.Errorf("%d and %d points, want %d and next to none", m.Used, m.FarOff, n)
	}
	want := math.Sqrt(square / n)
	for name, got := range map[string]float64{"rms": m.RMS, "sigma": m.Sigma} {
		if math.Abs(got-want) > 0.03*want {
			t.Errorf("%s is %v, want %v", name, got, want)
		}
	}
	if math.Abs(m.Largest-largest) > 0.2*largest {
		t.Errorf("the largest is %v, want some %v", m.Largest, largest)
	}
	if none := g.Misfit(&SurfacePoints{}); none != (GridMisfit{}) {
		t.Errorf("of no points: %+v", none)
	}
}
