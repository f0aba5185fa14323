package geo

import (
	"math"
	"testing"
)

// TestProfileRedundancy: points less levels and slopes, counted by hand. Two points, or
// two on either side of a weir, leave nothing to tell their errors from.
func TestProfileRedundancy(t *testing.T) {
	for _, tc := range []struct {
		name string
		s, z []float64
		want int
	}{
		{"two level", []float64{0, 500}, []float64{3, 3}, 0},
		{"two falling", []float64{0, 500}, []float64{3, 2.5}, 0},
		{"three on a line", []float64{0, 250, 500}, []float64{3, 2.75, 2.5}, 1},
		{"five on a line", []float64{0, 100, 200, 300, 400}, []float64{3, 2.9, 2.8, 2.7, 2.6}, 3},
		{"three at one place", []float64{400, 400, 400}, []float64{3, 3.01, 2.99}, 2},
	} {
		t.Run(tc.name, func(t *testing.T) {
			p := profileAlong(t, 1000, tc.s, tc.z, false)
			f := p.Fit()
			if f.Redundancy != tc.want || math.IsNaN(f.Sigma) != (tc.want == 0) {
				t.Errorf("redundancy is %d with sigma %v, want %d", f.Redundancy, f.Sigma, tc.want)
			}
			sigma := make([]float64, 1)
			p.FillSigma(sigma, []float64{400}, []float64{0})
			if math.IsNaN(sigma[0]) != (tc.want == 0) {
				t.Errorf("sigma of the level is %v at redundancy %d", sigma[0], tc.want)
			}
		})
	}
}

// weirRiver returns levels each 20 m but from one chainage to another, and more at
// others, on a river that falls by a slope, and by high at chainage 250; 5 mm of noise.
func weirRiver(noise func() float64, slope, high, from, to float64, more ...float64) (s, z []float64) {
	for at := 0.0; at <= 500; at += 20 {
		if at <= from || at >= to {
			s = append(s, at)
		}
	}
	s = append(s, more...)
	for _, at := range s {
		level := 10 - slope*at + 0.005*noise()
		if at > 250 {
			level -= high
		}
		z = append(z, level)
	}
	return s, z
}

// TestProfileGapOverWeir: a weir of 1.2 m between levels 80 m apart has no place; the gap
// is told with both ends and the fall. Without the weir the slope beside explains
// what the level does in it, be it steep.
func TestProfileGapOverWeir(t *testing.T) {
	rng := newRand(t, 121)
	for _, rising := range []bool{false, true} {
		s, z := weirRiver(rng.NormFloat64, 0.001, 1.2, 200, 280)
		f := profileAlong(t, 500, s, z, rising).Fit()
		want := Drop{200, 280, 1.28}
		if rising {
			want.From, want.To = 220, 300
		}
		if len(f.Unplaced) != 1 || len(f.Steps) != 0 || f.Gap != f.Unplaced[0] {
			t.Fatalf("gap %v, unplaced %v, steps %v, want one gap that explains nothing", f.Gap, f.Unplaced, f.Steps)
		}
		if g := f.Gap; !near(g.From, want.From, 1e-9) || !near(g.To, want.To, 1e-9) || !near(g.Fall, want.Fall, 0.02) {
			t.Errorf("gap is %v, want %v", g, want)
		}
	}
	for _, slope := range []float64{0, 0.001, 0.02} {
		s, z := weirRiver(rng.NormFloat64, slope, 0, 200, 280)
		f := profileAlong(t, 500, s, z, false).Fit()
		if len(f.Unplaced)+len(f.Steps) != 0 || !near(f.Gap.Fall, 80*slope, 0.02) || f.Gap.From != 200 || f.Gap.To != 280 {
			t.Errorf("slope %g: gap %v, unplaced %v, steps %v, want a gap of 80 m that is explained", slope, f.Gap, f.Unplaced, f.Steps)
		}
	}
}

// TestProfileStep: with levels close to a weir the step has a place and a height; of two
// parts of a weir it is their sum.
func TestProfileStep(t *testing.T) {
	rng := newRand(t, 122)
	s, z := weirRiver(rng.NormFloat64, 0.001, 1.2, 240, 260, 244, 248, 252, 256)
	f := profileAlong(t, 500, s, z, false).Fit()
	if len(f.Unplaced) != 0 || len(f.Steps) != 1 || f.Steps[0].From != 248 || f.Steps[0].To != 252 || !near(f.Steps[0].Fall, 1.2, 0.02) {
		t.Errorf("unplaced %v, steps %v, want one step of 1.2 from 248 to 252", f.Unplaced, f.Steps)
	}
	s, z = append(s, 250), append(z, 10-0.25-0.6)
	f = profileAlong(t, 500, s, z, false).Fit()
	if len(f.Unplaced) != 0 || len(f.Steps) != 1 || f.Steps[0].From != 248 || f.Steps[0].To != 252 || !near(f.Steps[0].Fall, 1.2, 0.02) {
		t.Errorf("unplaced %v, steps %v, want one step of 1.2 from 248 to 252 in two parts", f.Unplaced, f.Steps)
	}
}

// TestProfileDropsOfSmoothRivers: a river without weirs, at random places and with noise
// of 2 cm, has neither steps nor gaps that nothing explains.
func TestProfileDropsOfSmoothRivers(t *testing.T) {
	rng := newRand(t, 123)
	for range 100 {
		var s, z []float64
		slope, bend := 0.002*rng.Float64(), 0.01*rng.Float64()
		for range 20 + rng.IntN(200) {
			at := 1000 * rng.Float64()
			level := 10 - slope*at - bend*max(at-500, 0) + 0.02*rng.NormFloat64()
			s, z = append(s, at), append(z, level)
		}
		if f := profileAlong(t, 1000, s, z, false).Fit(); len(f.Steps)+len(f.Unplaced) != 0 {
			t.Errorf("%d points, slope %g and %g: steps %v, unplaced %v, want none", len(s), slope, bend, f.Steps, f.Unplaced)
		}
	}
}

// TestProfileFewLevels: of 2 or 3 levels a blunder of 0.5 m is never set aside, of 4 to 7
// not reliably, of 8 mostly.
func TestProfileFewLevels(t *testing.T) {
	rng := newRand(t, 124)
	const surveys = 300
	for n, limits := range map[int][2]float64{2: {0, 0}, 3: {0, 0}, 4: {0.05, 0.6}, 7: {0.5, 0.85}, 8: {0.8, 1}} {
		aside := 0
		for range surveys {
			var s, z []float64
			for i := range n {
				s = append(s, 50*float64(i))
				z = append(z, 10-0.05*float64(i)+0.005*rng.NormFloat64())
			}
			bad := rng.IntN(n)
			z[bad] += float64(1-2*rng.IntN(2)) * 0.5
			aside += count(profileAlong(t, 1000, s, z, false).Fit().IsAside[bad])
		}
		if share := float64(aside) / surveys; share < limits[0] || share > limits[1] {
			t.Errorf("%d levels: the blunder is set aside in %.0f %% of surveys, want %.0f to %.0f", n, 100*share, 100*limits[0], 100*limits[1])
		}
	}
}
