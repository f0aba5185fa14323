package geo

import (
	"math"
	"testing"
)

// TestGridWindow: two passes at 100 and 103 s over level water that fell from 2 to
// 1 m, each of 0.2 s, and points without times at 5 m elsewhere. A time meets a pass
// if all its points lie within 2 s.
func TestGridWindow(t *testing.T) {
	rng := newRand(t, 121)
	x, y, z := scattered(rng, 4000, 60, func(_, _ float64) float64 { return 2 })
	at := make([]float64, len(x))
	for i := range x {
		at[i] = 100 + 0.2*rng.Float64()
		if i%2 == 0 {
			at[i], z[i] = at[i]+3, 1
		}
	}
	x2, y2, z2 := scattered(rng, 2000, 60, func(_, _ float64) float64 { return 5 })
	for i := range x2 {
		x2[i] += 200
		at = append(at, math.NaN())
	}
	g := mustGrid(t, append(x, x2...), append(y, y2...), append(z, z2...), at, GridOptions{Cell: 3})
	none := math.NaN()
	for _, tc := range []struct {
		name        string
		u, at, want float64
	}{
		{"first pass", 30, 100, 2},
		{"second pass", 30, 103.2, 1},
		{"before, all within", 30, 98.21, 2},
		{"before, some farther", 30, 98.1, none},
		{"nearer to the first", 30, 101.5, 2},
		{"nearer to the second", 30, 101.7, 1},
		{"after, all within", 30, 104.99, 1},
		{"after, some farther", 30, 105.05, none},
		{"long after", 30, 1e9, none},
		{"infinite", 30, math.Inf(1), none},
		{"no times there", 230, 100, 5},
		{"no times there, any time", 230, 1e9, 5},
		{"no times there, none asked", 230, none, 5},
	} {
		if got, _, _ := g.ask(512000+tc.u, 7012030, tc.at); !near(got, tc.want, 1e-9) {
			t.Errorf("%s: level %v, want %v", tc.name, got, tc.want)
		}
	}
	// Without a time, the points of both passes count alike.
	if got, _, _ := g.ask(512030, 7012030, none); got < 1 || got > 2 {
		t.Errorf("no time: level %v, want one from 1 to 2", got)
	}
	var level, sx, sy [1]float64
	g.Fill(level[:], sx[:], sy[:], []float64{512030}, []float64{7012030}, nil)
	if got, _, _ := g.ask(512030, 7012030, none); level[0] != got {
		t.Errorf("no times: level %v, want %v", level[0], got)
	}
}

// TestGridLongRecord: from a place that is measured for a minute while the water
// rises 1 cm a second, points within the window count and no others.
func TestGridLongRecord(t *testing.T) {
	rng := newRand(t, 122)
	const rate = 0.01
	x, y, z := scattered(rng, 30_000, 20, func(_, _ float64) float64 { return 0 })
	at := make([]float64, len(x))
	for i := range at {
		at[i] = 60 * rng.Float64()
		z[i] = rate * at[i]
	}
	g := mustGrid(t, x, y, z, at, GridOptions{Cell: 4})
	for when := 0.0; when <= 60; when += 0.037 {
		level, _, _ := g.ask(512000+20*rng.Float64(), 7012000+20*rng.Float64(), when)
		if !(math.Abs(level-rate*when) < rate*2) { // all points used lie within 2 s
			t.Errorf("at %v s: level %v, want %v within %v", when, level, rate*when, rate*2)
		}
	}
	for _, when := range []float64{-2.1, -0.9, 60.9, 62.1} {
		level, _, _ := g.ask(512010, 7012010, when)
		if inside := when > -1 && when < 61; inside != !math.IsNaN(level) {
			t.Errorf("at %v s: level %v", when, level)
		}
	}
}

// TestGridMixedTimes: points without times count in every pass, and stand alone at
// other times.
func TestGridMixedTimes(t *testing.T) {
	rng := newRand(t, 123)
	x, y, z := scattered(rng, 6000, 40, func(_, _ float64) float64 { return 3 })
	at := make([]float64, len(x))
	for i := range at {
		at[i] = math.NaN()
		if i%2 == 0 {
			at[i], z[i] = 100, 3.002 // within the scale's floor of the others: a mean of both
		}
	}
	g := mustGrid(t, x, y, z, at, GridOptions{Cell: 3})
	for _, tc := range []struct{ at, low, high float64 }{
		{100, 3.0005, 3.0015}, {math.NaN(), 3.0005, 3.0015}, {200, 3, 3},
	} {
		if level, _, _ := g.ask(512020, 7012020, tc.at); !(level >= tc.low-1e-9 && level <= tc.high+1e-9) {
			t.Errorf("at %v s: level %v, want %v to %v", tc.at, level, tc.low, tc.high)
		}
	}
}

// TestGridPassEdge: where the second pass covers half of the area, the other half has
// no surface at its time beyond reach of it.
func TestGridPassEdge(t *testing.T) {
	rng := newRand(t, 124)
	x, y, z := scattered(rng, 8000, 90, func(_, _ float64) float64 { return 2 })
	at := make([]float64, len(x))
	for i := range x {
		if i%2 == 0 {
			at[i], z[i] = 40, 1
			x[i] -= (x[i] - 512000) / 2
		}
	}
	g := mustGrid(t, x, y, z, at, GridOptions{Cell: 3})
	none := math.NaN()
	for _, tc := range []struct{ u, at, want float64 }{
		{20, 0, 2}, {20, 40, 1}, {80, 0, 2}, {52, 40, 1}, {80, 40, none}, {52, 0, 2},
	} {
		if level, _, _ := g.ask(512000+tc.u, 7012045, tc.at); !near(level, tc.want, 1e-9) {
			t.Errorf("%v m east at %v s: level %v, want %v", tc.u, tc.at, level, tc.want)
		}
	}
}
