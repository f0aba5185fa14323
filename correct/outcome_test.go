package correct_test

import (
	"math"
	"slices"
	"testing"

	"bentray/correct"
)

var nan, inf = math.NaN(), math.Inf(1)

// checkKept checks that point i kept its raw position and that nothing but the named columns
// was computed.
func (s *survey) checkKept(t *testing.T, i int, written ...string) {
	t.Helper()
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"x", s.dst.X[i], s.raw.X[i]},
		{"y", s.dst.Y[i], s.raw.Y[i]},
		{"z", s.dst.Z[i], s.raw.Z[i]},
		{"depth", s.dst.Depth[i], nan},
		{"water level", s.dst.WaterLevel[i], nan},
		{"entry level", s.dst.EntryLevel[i], nan},
		{"incidence", s.dst.IncidenceRad[i], nan},
		{"refraction", s.dst.RefractionRad[i], nan},
	} {
		if slices.Contains(written, c.name) {
			if math.IsNaN(c.got) {
				t.Errorf("%s is NaN, want a value", c.name)
			}
		} else if math.Float64bits(c.got) != math.Float64bits(c.want) && !(math.IsNaN(c.got) && math.IsNaN(c.want)) {
			t.Errorf("%s is %g, want %g", c.name, c.got, c.want)
		}
	}
}

// Each row spoils a good point in one way; later rows of precedence spoil it in several.
func TestPulseOutcomes(t *testing.T) {
	for _, row := range []struct {
		name  string
		spoil func(s *survey)
		want  correct.Outcome
	}{
		{"good", func(s *survey) {}, correct.Corrected},
		{"x NaN", func(s *survey) { s.raw.X[0] = nan }, correct.Invalid},
		{"y Inf", func(s *survey) { s.raw.Y[0] = inf }, correct.Invalid},
		{"z -Inf", func(s *survey) { s.raw.Z[0] = -inf }, correct.Invalid},
		{"level NaN", func(s *survey) { s.planes.Level[0] = nan }, correct.NoSurface},
		{"level Inf", func(s *survey) { s.planes.Level[0] = inf }, correct.NoSurface},
		{"slope NaN", func(s *survey) { s.planes.SlopeY[0] = nan }, correct.NoSurface},
		{"above the surface", func(s *survey) { s.raw.Z[0] = 0.6 }, correct.Dry},
		{"on the surface", func(s *survey) { s.raw.Z[0] = 0.5 }, correct.Dry},
		{"origin NaN", func(s *survey) { s.origin.Y[0] = nan }, correct.NoOrigin},
		{"origin Inf", func(s *survey) { s.origin.Z[0] = inf }, correct.NoOrigin},
		{"origin under water", func(s *survey) { s.origin.Z[0] = 0.4 }, correct.NoOrigin},
		{"origin on the surface", func(s *survey) { s.origin.Z[0] = 0.5 }, correct.NoOrigin},
		{"origin under a tilted plane", func(s *survey) { s.planes.SlopeX[0] = 10 }, correct.NoOrigin},
		{"incidence", func(s *survey) { s.origin.X[0] = 1000 }, correct.Grazing},
		{"phase index NaN", func(s *survey) { s.light.Water[0] = nan }, correct.Unsolved},
		{"phase index 0", func(s *survey) { s.light.Water[0] = 0 }, correct.Unsolved},
		{"phase index Inf", func(s *survey) { s.light.Water[0] = inf }, correct.Unsolved},
		{"group index NaN", func(s *survey) { s.light.WaterGroup[0] = nan }, correct.Unsolved},
		{"group index negative", func(s *survey) { s.light.WaterGroup[0] = -1.36 }, correct.Unsolved},
		{"group index Inf", func(s *survey) { s.light.WaterGroup[0] = inf }, correct.Unsolved},
		{"group index tiny", func(s *survey) { s.light.WaterGroup[0] = 5e-324 }, correct.Unsolved},
		{"air index 0", func(s *survey) { s.light.Air = 0 }, correct.Unsolved},
		{"range index NaN", func(s *survey) { s.light.RangeIndex = nan }, correct.Unsolved},
		{"depth 1e308", func(s *survey) { s.raw.Z[0] = -1e308 }, correct.Unsolved},
		{"depth overflows", func(s *survey) { s.raw.Z[0], s.planes.Level[0] = -1.7e308, 1e308; s.origin.Z[0] = 1.7e308 }, correct.Unsolved},
		{"origin 1e308", func(s *survey) { s.origin.Z[0] = 1e308 }, correct.Unsolved},
		{"plan 1e308", func(s *survey) { s.raw.X[0], s.origin.X[0] = 1.7e308, -1.7e308 }, correct.Unsolved},
		{"only x of the result overflows", func(s *survey) {
			s.raw.X[0], s.origin.X[0] = 1.7e308, 1.7e308
			s.planes.SlopeX[0], s.light.WaterGroup[0] = 0.5, 2.5e-308
		}, correct.Unsolved},
		{"only depth overflows", func(s *survey) {
			s.origin.X[0] = 12.25
			s.planes.SlopeX[0], s.light.WaterGroup[0] = 1.5, 2.5e-308
		}, correct.Unsolved},
		{"slope 1e308", func(s *survey) { s.planes.SlopeX[0] = -1e308 }, correct.Unsolved},

		{"precedence: x, level, origin", func(s *survey) { s.raw.X[0], s.planes.Level[0], s.origin.X[0] = nan, nan, nan }, correct.Invalid},
		{"precedence: level, origin", func(s *survey) { s.planes.Level[0], s.origin.X[0] = nan, nan }, correct.NoSurface},
		{"precedence: dry, origin", func(s *survey) { s.raw.Z[0], s.origin.X[0] = 0.6, nan }, correct.Dry},
		{"precedence: origin, index", func(s *survey) { s.origin.Z[0], s.light.Water[0] = nan, nan }, correct.NoOrigin},
		{"precedence: incidence, index", func(s *survey) { s.origin.X[0], s.light.Water[0] = 1000, nan }, correct.Grazing},
	} {
		t.Run(row.name, func(t *testing.T) {
			s := one(10, 1.00027, 1.00029, 1.34, 1.36)
			row.spoil(s)
			s.pulse(limit)
			if s.out[0] != row.want {
				t.Fatalf("outcome is %s, want %s", s.out[0], row.want)
			}
			switch row.want {
			case correct.Corrected:
				near(t, "depth below the raw one", s.dst.Depth[0], 4*1.00029/1.36, 0.03)
			case correct.Dry:
				s.checkKept(t, 0, "depth", "water level")
				near(t, "depth", s.dst.Depth[0], 0.5-s.raw.Z[0], 0)
				near(t, "water level", s.dst.WaterLevel[0], 0.5, 0)
			case correct.Grazing:
				s.checkKept(t, 0, "incidence")
			default:
				s.checkKept(t, 0)
			}
		})
	}
}

func TestVerticalOutcomes(t *testing.T) {
	for _, row := range []struct {
		name  string
		spoil func(s *survey)
		want  correct.Outcome
	}{
		{"origin is not read", func(s *survey) { s.origin.X[0] = nan }, correct.Corrected},
		{"x NaN", func(s *survey) { s.raw.X[0] = nan }, correct.Invalid},
		{"level NaN", func(s *survey) { s.planes.Level[0] = nan }, correct.NoSurface},
		{"on the surface", func(s *survey) { s.raw.Z[0] = 0.5 }, correct.Dry},
		{"index NaN", func(s *survey) { s.light.Water[0] = nan }, correct.Unsolved},
		{"index negative", func(s *survey) { s.light.Water[0] = -1.34 }, correct.Unsolved},
		{"both indices negative", func(s *survey) { s.light.Air, s.light.Water[0] = -1, -1.34 }, correct.Unsolved},
		{"air index 0", func(s *survey) { s.light.Air = 0 }, correct.Unsolved},
		{"depth overflows", func(s *survey) { s.raw.Z[0] = -1.7e308 }, correct.Unsolved},
	} {
		t.Run(row.name, func(t *testing.T) {
			s := one(10, 1.00027, 1.00029, 1.34, 1.36)
			row.spoil(s)
			s.vertical()
			if s.out[0] != row.want {
				t.Fatalf("outcome is %s, want %s", s.out[0], row.want)
			}
			if row.want == correct.Dry {
				s.checkKept(t, 0, "depth", "water level")
			} else if row.want != correct.Corrected {
				s.checkKept(t, 0)
			}
		})
	}
}

// An outcome that is set stays, whatever else is wrong with the point, and no kernel
// computes such a point.
func TestOutcomesStay(t *testing.T) {
	for o := correct.Invalid; o <= correct.Unsolved; o++ {
		if o == correct.Dry {
			continue // its entry is written by MarkDry, see the outcome tests
		}
		for _, kernel := range []func(s *survey){(*survey).vertical, func(s *survey) { s.pulse(limit) }} {
			s := one(10, 1.00027, 1.00029, 1.34, 1.36)
			s.out[0] = o
			s.raw.Y[0], s.planes.SlopeX[0], s.origin.X[0] = inf, nan, nan
			correct.MarkNoOrigin(s.out, s.raw, s.origin, s.planes)
			kernel(s)
			if s.out[0] != o {
				t.Errorf("outcome %s became %s", o, s.out[0])
			}
			s.checkKept(t, 0)
		}
	}
}

// A kernel that is called without the Mark functions corrects nothing it should not.
func TestKernelsWithoutMarks(t *testing.T) {
	for _, spoil := range []func(s *survey){
		func(s *survey) { s.raw.X[0] = nan },
		func(s *survey) { s.planes.Level[0] = nan },
		func(s *survey) { s.raw.Z[0] = 0.6 },
	} {
		p, v := one(10, 1, 1, 1.34, 1.36), one(10, 1, 1, 1.34, 1.36)
		spoil(p)
		spoil(v)
		correct.Pulse(&p.dst, p.out, p.raw, p.origin, p.planes, p.light, limit)
		correct.Vertical(&v.dst, v.out, v.raw, v.planes, v.light)
		for _, s := range []*survey{p, v} {
			if s.out[0] != correct.Unsolved {
				t.Errorf("outcome is %s, want unsolved", s.out[0])
			}
			s.checkKept(t, 0)
		}
	}
}

// MarkNoOrigin finds what Pulse finds, so that no_origin can come before no_water.
func TestMarkNoOrigin(t *testing.T) {
	s := simulate(33, 24, 0.05, noOffset)
	s.origin.X[3], s.origin.Z[5], s.origin.Z[7] = nan, -100, inf
	marked := slices.Clone(s.out)
	correct.MarkNoOrigin(marked, s.raw, s.origin, s.planes)
	s.pulse(limit)
	for i := range marked {
		want := correct.Corrected
		if i == 3 || i == 5 || i == 7 {
			want = correct.NoOrigin
		}
		if marked[i] != want || s.out[i] != want {
			t.Errorf("point %d is marked %s and computed %s, want %s", i, marked[i], s.out[i], want)
		}
	}
}

// The names stand in the order of precedence of the outcomes' definition; corrected
// is the zero value.
func TestOutcomeNames(t *testing.T) {
	names := []string{
		"corrected", "invalid", "not_selected", "no_rule", "outside", "no_surface", "dry",
		"no_origin", "no_water", "out_of_range", "few_rays", "grazing", "unsolved", "outcome 13",
	}
	for i, want := range names {
		if got := correct.Outcome(i).String(); got != want {
			t.Errorf("outcome %d is %q, want %q", i, got, want)
		}
	}
}
