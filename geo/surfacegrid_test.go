package geo

import (
	"math"
	"math/rand/v2"
	"testing"
)

// scattered returns n places over a square of the given side (m) far from the
// origin, and the heights that f gives there.
func scattered(rng *rand.Rand, n int, side float64, f func(u, v float64) float64) (x, y, z []float64) {
	for range n {
		u, v := side*rng.Float64(), side*rng.Float64()
		x, y, z = append(x, 512000+u), append(y, 7012000+v), append(z, f(u, v))
	}
	return x, y, z
}

// gridOf is the grid of points given as columns.
func gridOf(x, y, z, t []float64, options GridOptions) (*Grid, error) {
	var points SurfacePoints
	points.Add(x, y, z, t)
	return NewGrid(&points, options)
}

// mustGrid returns a grid that must not fail.
func mustGrid(t testing.TB, x, y, z, at []float64, options GridOptions) *Grid {
	t.Helper()
	g, err := gridOf(x, y, z, at, options)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// TestGridExact: a tilted plane without noise comes back everywhere, also at shores
// and in gaps, and a quadratic among the points, at 7e6 m.
func TestGridExact(t *testing.T) {
	plane := func(u, v float64) float64 { return 31 + 0.01*u - 0.02*v }
	bowl := func(u, v float64) float64 { return plane(u, v) + 0.001*u*u - 0.0005*u*v }
	rng := newRand(t, 111)
	for _, tc := range []struct {
		name           string
		f              func(u, v float64) float64
		low, high, fit float64
	}{{"plane", plane, -8, 68, 1e-9}, {"quadratic", bowl, 4, 56, 1e-8}} {
		x, y, z := scattered(rng, 3000, 60, tc.f)
		g := mustGrid(t, x, y, z, nil, GridOptions{Cell: 3, Offset: 0.25})
		for range 2000 {
			u, v := tc.low+(tc.high-tc.low)*rng.Float64(), tc.low+(tc.high-tc.low)*rng.Float64()
			level, sx, sy := g.ask(512000+u, 7012000+v, math.NaN())
			d := 1e-3
			wantX, wantY := (tc.f(u+d, v)-tc.f(u-d, v))/(2*d), (tc.f(u, v+d)-tc.f(u, v-d))/(2*d)
			if !near(level, tc.f(u, v)+0.25, tc.fit) || !near(sx, wantX, 1e-9) || !near(sy, wantY, 1e-9) {
				t.Fatalf("%s at %v %v: %v %v %v, want %v %v %v", tc.name, u, v, level, sx, sy, tc.f(u, v)+0.25, wantX, wantY)
			}
		}
	}
}

// inParts is points given in parts that are joined, some of them empty or more than a
// block long.
func inParts(rng *rand.Rand, x, y, z, t []float64) *SurfacePoints {
	var all SurfacePoints
	for len(x) > 0 {
		var part SurfacePoints
		for range rng.IntN(3) {
			n := min(rng.IntN(5000), len(x))
			part.Add(x[:n], y[:n], z[:n], t[:n])
			x, y, z, t = x[n:], y[n:], z[n:], t[n:]
		}
		all.Join(&part)
	}
	return &all
}

// TestGridOrder: the order of points, as when files are read in another order or cut
// in other tiles, changes no bit.
func TestGridOrder(t *testing.T) {
	rng := newRand(t, 112)
	x, y, z, at := testSwell.points(rng, 12_000, 0.02, true, pass(4.1e8))
	for i := range x {
		switch {
		case i%7 == 0:
			at[i] = math.NaN()
		case i%2 == 0:
			at[i] += 40
		}
		if i%10 == 0 { // twice the same place
			x[i], y[i] = x[i/2], y[i/2]
		}
	}
	for _, options := range []GridOptions{{}, {Cell: 9}} {
		g := mustGrid(t, x, y, z, at, options)
		var x2, y2, z2, at2 []float64
		for _, i := range rng.Perm(len(x)) {
			x2, y2, z2, at2 = append(x2, x[i]), append(y2, y[i]), append(z2, z[i]), append(at2, at[i])
		}
		other, err := NewGrid(inParts(rng, x2, y2, z2, at2), options)
		if err != nil {
			t.Fatal(err)
		}
		if g.Stats() != other.Stats() {
			t.Errorf("stats %+v, want %+v", other.Stats(), g.Stats())
		}
		for range 5000 {
			px, py, when := 511980+240*rng.Float64(), 7011980+240*rng.Float64(), 4.1e8+44*rng.Float64()
			if got, want := other.at(px, py, when, true), g.at(px, py, when, true); got != want && !math.IsNaN(want.level) {
				t.Fatalf("at %v %v %v: %+v, want %+v", px, py, when, got, want)
			}
		}
	}
}

// TestGridGaps: a hole of 15 m in points 1 m apart, with cells of 3 m. Five cells
// reach its middle, one does not.
func TestGridGaps(t *testing.T) {
	rng := newRand(t, 113)
	x, y, z := scattered(rng, 10_000, 100, func(u, v float64) float64 { return 5 + 0.01*u + 0.02*rng.NormFloat64() })
	k := 0
	for i := range x {
		if math.Hypot(x[i]-512050, y[i]-7012050) > 15 {
			x[k], y[k], z[k] = x[i], y[i], z[i]
			k++
		}
	}
	x, y, z = x[:k], y[:k], z[:k]
	for _, tc := range []struct {
		reach  float64
		filled bool
	}{{0, true}, {5, true}, {2, false}, {0.5, false}} {
		g := mustGrid(t, x, y, z, nil, GridOptions{Cell: 3, Reach: tc.reach})
		level, sx, sy := g.ask(512050, 7012050, math.NaN())
		if tc.filled != !math.IsNaN(level) || tc.filled != !math.IsNaN(sx) || tc.filled != !math.IsNaN(sy) {
			t.Errorf("reach %v: %v %v %v in the gap", tc.reach, level, sx, sy)
		}
		if tc.filled && (math.Abs(level-5.5) > 0.02 || math.Hypot(sx-0.01, sy) > 0.003) {
			t.Errorf("reach %v: %v %v %v in the gap, want about 5.5 0.01 0", tc.reach, level, sx, sy)
		}
		if level, _, _ = g.ask(512033, 7012050, math.NaN()); math.IsNaN(level) {
			t.Errorf("reach %v: no surface among points", tc.reach)
		}
		var sigma [2]float64
		g.FillSigma(sigma[:], []float64{512050, 512020}, []float64{7012050, 7012020}, nil)
		if tc.filled != !math.IsNaN(sigma[0]) || tc.filled && !(sigma[0] > sigma[1]) {
			t.Errorf("reach %v: sigma %v in the gap, %v among points", tc.reach, sigma[0], sigma[1])
		}
	}
	g := mustGrid(t, x, y, z, nil, GridOptions{Cell: 3})
	for _, tc := range []struct {
		off  float64 // beyond the eastern side
		want bool
	}{{2, true}, {13, true}, {19.5, false}, {1000, false}, {1e9, false}, {1e300, false}, {math.Inf(1), false}, {math.NaN(), false}} {
		if level, _, _ := g.ask(512100+tc.off, 7012020, math.NaN()); tc.want != !math.IsNaN(level) {
			t.Errorf("%v m beyond the points: level %v", tc.off, level)
		}
	}
}

// TestGridContinuity walks across patches, shores and a gap in steps of 1 mm: level and
// slopes change little from step to step wherever there is a surface.
func TestGridContinuity(t *testing.T) {
	rng := newRand(t, 114)
	x, y, z, _ := testSwell.points(rng, 40_000, 0.02, true, still)
	k := 0
	for i := range x {
		if math.Hypot(x[i]-512080, y[i]-7012100) > 12 && rng.Float64() < 0.2 {
			x[k], y[k], z[k] = x[i], y[i], z[i]
			k++
		}
	}
	g := mustGrid(t, x[:k], y[:k], z[:k], nil, GridOptions{Cell: 4})
	filled := 0
	for range 20 {
		px, py := 511990+220*rng.Float64(), 7011990+220*rng.Float64()
		sin, cos := math.Sincos(2 * math.Pi * rng.Float64())
		last, lastX, lastY := math.NaN(), 0.0, 0.0
		for step := range 20_000 {
			d := 0.001 * float64(step)
			level, sx, sy := g.ask(px+d*cos, py+d*sin, math.NaN())
			if !math.IsNaN(level) {
				filled++
			}
			if math.Abs(level-last) > 2e-4 || math.Hypot(sx-lastX, sy-lastY) > 1e-4 && !math.IsNaN(last) {
				t.Fatalf("at %v %v: from %v %v %v to %v %v %v", px+d*cos, py+d*sin, last, lastX, lastY, level, sx, sy)
			}
			last, lastX, lastY = level, sx, sy
		}
	}
	if filled < 200_000 {
		t.Errorf("%d steps on the surface, want most of 400 000", filled)
	}
}

func TestGridRefuses(t *testing.T) {
	rng := newRand(t, 115)
	x, y, z := scattered(rng, 200, 30, func(_, _ float64) float64 { return 1 })
	none := []float64{math.NaN(), math.NaN()}
	farX, farY := append([]float64{0}, x[1:]...), append([]float64{0}, y[1:]...)
	for _, tc := range []struct {
		name    string
		x, y, z []float64
		options GridOptions
		words   []string
	}{
		{"no points", nil, nil, nil, GridOptions{}, []string{"none of 0 surface points", "at least 6"}},
		{"nothing finite", none, none, none, GridOptions{}, []string{"none of 2 surface points"}},
		{"one point", x[:1], y[:1], z[:1], GridOptions{}, []string{"cell of 1 m", "1 surface points", "larger cells"}},
		{"cells too small", x, y, z, GridOptions{Cell: 0.01}, []string{"cell of 0.01 m", "200 surface points", "larger cells"}},
		{"a point far away", farX, farY, z, GridOptions{}, []string{"span", "far away"}},
		{"a point far away, cells given", farX, farY, z, GridOptions{Cell: 0.5}, []string{"span", "far away"}},
		{"cells out of number", x, y, z, GridOptions{Cell: 1e-9}, []string{"too far away for cells of 1e-09 m"}},
		{"all options wrong", x, y, z, GridOptions{Cell: -1, Reach: 51, Window: -2, Offset: math.NaN()}, []string{"cell is -1 m", "reach is 51 cells, want 0 to 50", "window is -2 s", "offset is NaN m"}},
		{"options NaN", x, y, z, GridOptions{Cell: math.NaN(), Reach: math.NaN(), Window: math.NaN()}, []string{"cell is NaN", "reach is NaN", "window is NaN"}},
	} {
		_, err := gridOf(tc.x, tc.y, tc.z, nil, tc.options)
		if err == nil {
			t.Errorf("%s: no error", tc.name)
			continue
		}
		wantError(t, err, tc.words...)
	}
	mustPanic(t, func() { _, _ = gridOf(x, y, z[:1], nil, GridOptions{}) })
	mustPanic(t, func() { _, _ = gridOf(x, y, z, z[:1], GridOptions{}) })
	g := mustGrid(t, x, y, z, nil, GridOptions{})
	mustPanic(t, func() { g.Fill(x, y, z, x, y, z[:1]) })
	mustPanic(t, func() { g.Fill(x, y, z, x, y[:1], nil) })
	mustPanic(t, func() { g.FillSigma(x, y[:1], z, nil) })
}

// TestGridStats: points that are not finite are counted, and the default cell holds
// 16 points where there are points: 4 m for 1 a square metre, whatever one point far
// away does to the rectangle.
func TestGridStats(t *testing.T) {
	rng := newRand(t, 116)
	x, y, z := scattered(rng, 10_000, 100, func(_, _ float64) float64 { return 1 + 0.02*rng.NormFloat64() })
	x, y, z = append(x, math.NaN(), 1, 515000), append(y, 1, math.Inf(1), 7015000), append(z, 1, 1, 1)
	s := mustGrid(t, x, y, z, nil, GridOptions{}).Stats()
	if s.Used != 10_001 || s.Ignored != 2 || math.Abs(s.Cell-4) > 0.2 || s.Cells != s.Patches || s.Cells < 600 || s.Sigma < 0.001 || s.Sigma > 0.01 {
		t.Errorf("stats %+v", s)
	}
}

func TestGridAllocations(t *testing.T) {
	rng := newRand(t, 117)
	x, y, z := scattered(rng, 3000, 60, func(u, _ float64) float64 { return u / 100 })
	g := mustGrid(t, x, y, z, nil, GridOptions{Cell: 3})
	sx, sy := make([]float64, len(x)), make([]float64, len(x))
	for i := range x {
		x[i] -= 10
	}
	if n := testing.AllocsPerRun(5, func() { g.Fill(z, sx, sy, x, y, nil); g.FillSigma(z, x, y, y) }); n != 0 {
		t.Errorf("%v allocations, want 0", n)
	}
}
