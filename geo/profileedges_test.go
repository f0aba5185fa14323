package geo

import (
	"math"
	"testing"
)

// TestProfileFewPoints: levels that fall are kept to the millimetre that levels are good for, and
// nothing is set aside; those that rise against the rest are averaged. By hand.
func TestProfileFewPoints(t *testing.T) {
	for _, tc := range []struct {
		name     string
		s, z     []float64
		at, want []float64
	}{
		{"two", []float64{100, 300}, []float64{5, 4}, []float64{100, 200, 300, 400}, []float64{5, 4.5, 4, 4}},
		{"two alike", []float64{100, 300}, []float64{5, 5}, []float64{0, 200, 400}, []float64{5, 5, 5}},
		{"two at one chainage", []float64{100, 100}, []float64{5, 4}, []float64{50, 100, 200}, []float64{4.5, 4.5, 4.5}},
		{"three", []float64{0, 100, 300}, []float64{5, 4.5, 4.3}, []float64{0, 50, 100, 200, 300}, []float64{5, 4.75, 4.5, 4.4, 4.3}},
		{"three with a weir", []float64{0, 200, 210}, []float64{5, 5, 2}, []float64{0, 100, 200, 205, 210}, []float64{5, 5, 5, 3.5, 2}},
		{"five with a weir", []float64{100, 300, 498, 502, 700}, []float64{10, 9.9, 9.8, 6.5, 6.4}, []float64{100, 300, 498, 500, 502, 700}, []float64{10, 9.9, 9.8, 8.15, 6.5, 6.4}},
		{"five, hollow", []float64{0, 100, 200, 300, 400}, []float64{9, 7, 6, 5.5, 5.4}, []float64{0, 100, 200, 300, 400}, []float64{9, 7, 6, 5.5, 5.4}},
		{"long gap", []float64{0, 10, 20, 980, 990, 1000}, []float64{5, 5, 5, 3, 3, 3}, []float64{0, 20, 500, 980, 1000}, []float64{5, 5, 4, 3, 3}},
		{"two clusters", []float64{100, 100, 100, 300, 300, 300}, []float64{5.01, 5, 4.99, 4.01, 4, 3.99}, []float64{50, 100, 200, 300}, []float64{5, 5, 4.5, 4}},
		{"one cluster", []float64{100, 100, 100}, []float64{5.01, 5, 4.99}, []float64{50, 100, 200}, []float64{5, 5, 5}},
	} {
		for _, rising := range []bool{false, true} {
			p := profileAlong(t, 1000, tc.s, tc.z, rising)
			for i, at := range tc.at {
				if level, _, _ := p.ask(at, 0); !near(level, tc.want[i], 1e-3) {
					t.Errorf("%s, rising %v: level at %g m is %.4f, want %.4f", tc.name, rising, at, level, tc.want[i])
				}
			}
			if f := p.Fit(); f.SetAside != 0 || f.IsUneven() {
				t.Errorf("%s: fit %+v", tc.name, f)
			}
		}
	}
}

// TestProfileClusters: gauging places with many readings each, a third of them wrong to one
// side, count by their right ones, whichever way the line is drawn.
func TestProfileClusters(t *testing.T) {
	rng := newRand(t, 113)
	var s, z []float64
	for i := range 90 {
		level := []float64{8, 7.5, 5}[i%3] + 0.004*rng.NormFloat64()
		if i >= 60 {
			level += 0.2 + rng.Float64()
		}
		s, z = append(s, []float64{100, 400, 900}[i%3]), append(z, level)
	}
	for _, rising := range []bool{false, true} {
		p := profileAlong(t, 1000, s, z, rising)
		for i, at := range []float64{100, 400, 900} {
			if level, _, _ := p.ask(at, 0); !near(level, []float64{8, 7.5, 5}[i], 0.004) {
				t.Errorf("rising %v: level at %g m is %.4f", rising, at, level)
			}
		}
		if f := p.Fit(); f.SetAside != 30 || f.Falling == rising {
			t.Errorf("rising %v: %d set aside, want 30; falling %v", rising, f.SetAside, f.Falling)
		}
	}
}

// TestProfileEnds: wrong points at the ends take no part, so the profile ends with the
// first and last right point; from there the level holds for reach, without slope.
func TestProfileEnds(t *testing.T) {
	s, z := []float64{20, 990}, []float64{3, 12} // true: 9.98 and 9.01
	for at := 50.0; at <= 950; at += 10 {
		s, z = append(s, at), append(z, 10-at/1000)
	}
	p, err := NewProfile([]float64{0, 1000}, []float64{0, 0}, s, make([]float64, len(s)), z, 45)
	if err != nil {
		t.Fatal(err)
	}
	if f := p.Fit(); f.SetAside != 2 || !f.IsAside[0] || !f.IsAside[1] || f.First != 50 || f.Last != 950 {
		t.Errorf("set aside %d, first %v, last %v, want 2, 50, 950", f.SetAside, f.First, f.Last)
	}
	none := math.NaN()
	for _, tc := range []struct{ x, level, slope float64 }{
		{4.9, none, none},
		{5, 9.95, 0},
		{49.9, 9.95, 0},
		{50.1, 9.9499, -0.001},
		{500, 9.5, -0.001},
		{949.9, 9.0501, -0.001},
		{950.1, 9.05, 0},
		{995, 9.05, 0},
		{995.1, none, none},
	} {
		if level, slope, _ := p.ask(tc.x, 10); !near(level, tc.level, 1e-9) || !near(slope, tc.slope, 1e-9) {
			t.Errorf("at %v: level %v, slope %v, want %v, %v", tc.x, level, slope, tc.level, tc.slope)
		}
	}
}

// TestProfileUneven: levels that rise and fall along the line are no profile; errors that
// know nothing of each other are no reason to say so.
func TestProfileUneven(t *testing.T) {
	rng := newRand(t, 114)
	shape := func(n int, swell, noise float64) ProfileFit {
		var s, z []float64
		for range n {
			at := 1000 * rng.Float64()
			s, z = append(s, at), append(z, 10-at/1000+swell*math.Sin(at/40)+noise*rng.NormFloat64())
		}
		return profileAlong(t, 1000, s, z, false).Fit()
	}
	for _, n := range []int{50, 200, 1000} {
		if f := shape(n, 0.2, 0.005); !f.IsUneven() || f.Spread < 0.05 {
			t.Errorf("%d points on swell: spread %.4f, scatter %.4f, want uneven", n, f.Spread, f.Scatter)
		}
	}
	const surveys = 100
	for _, n := range []int{5, 10, 30, 200} {
		uneven := 0
		for range surveys {
			f := shape(n, 0, 0.03)
			uneven += count(f.IsUneven())
		}
		if uneven > surveys/50 {
			t.Errorf("%d points: %d of %d surveys with independent errors are called uneven", n, uneven, surveys)
		}
	}
	if f := shape(1000, 0, 0.03); !near(f.Scatter, 0.03, 0.003) || !near(f.Spread, 0.03, 0.003) {
		t.Errorf("spread %.4f, scatter %.4f, want the noise, 0.03", f.Spread, f.Scatter)
	}
}

// TestProfileAnyPoints: whatever the levels, the profile is finite, turns nowhere, and
// reaches from the first to the last point that counts.
func TestProfileAnyPoints(t *testing.T) {
	rng := newRand(t, 115)
	for range 2000 {
		var s, z []float64
		for range 2 + rng.IntN(12) {
			s = append(s, float64(100*rng.IntN(1+rng.IntN(10))))
			z = append(z, math.Round(10*rng.NormFloat64())*math.Pow(10, float64(rng.IntN(4)-2)))
		}
		p := profileAlong(t, 1000, s, z, rng.IntN(2) == 0)
		f := p.Fit()
		first, last := math.Inf(1), math.Inf(-1)
		for i, isAside := range f.IsAside {
			if !isAside {
				first, last = min(first, f.Chainage[i]), max(last, f.Chainage[i])
			}
		}
		if f.First != first || f.Last != last || !isFinite(f.Spread) || isFinite(f.Sigma) != (f.Redundancy > 0) || f.SetAside > len(s)-1 {
			t.Fatalf("levels %v at %v: fit %+v", z, s, f)
		}
		begin, _, _ := p.ask(0, 0)
		end, _, _ := p.ask(1000, 0)
		before := begin
		for at := 0.0; at <= 1000; at += 10 {
			level, slope, _ := p.ask(at, 0)
			if !isFinite(level, slope) || (level-before)*(end-begin) < -1e-9 || slope*(end-begin) < 0 {
				t.Fatalf("levels %v at %v: at %g level %v, slope %v", z, s, at, level, slope)
			}
			before = level
		}
	}
}
