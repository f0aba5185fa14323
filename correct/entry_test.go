package correct_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct"
)

func newPlanes(n int) correct.Planes {
	return correct.Planes{Level: make([]float64, n), SlopeX: make([]float64, n), SlopeY: make([]float64, n)}
}

// The straight ray meets its plane where the light of the simulation, which knows no
// straight ray, went into the water.
func TestEntryPlanReturnsTruth(t *testing.T) {
	for name, offset := range map[string]vec{"near": noOffset, "7 million metres north": {5e5, 7e6, 0}} {
		t.Run(name, func(t *testing.T) {
			s := simulate(2000, 50, 0.05, offset)
			x, y := make([]float64, len(s.out)), make([]float64, len(s.out))
			correct.EntryPlan(x, y, s.out, s.raw, s.origin, s.planes)
			for i := range x {
				share := (s.entryLevel[i] - s.raw.Z[i]) / (s.origin.Z[i] - s.raw.Z[i])
				near(t, "x", x[i], s.raw.X[i]+share*(s.origin.X[i]-s.raw.X[i]), 1e-8)
				near(t, "y", y[i], s.raw.Y[i]+share*(s.origin.Y[i]-s.raw.Y[i]), 1e-8)
				if t.Failed() {
					t.Fatalf("seed %d: point %d", seed, i)
				}
			}
		})
	}
}

// Points without an entry keep their place, whatever else is wrong with them.
func TestEntryPlanWithoutEntry(t *testing.T) {
	for name, change := range map[string]func(s *survey){
		"not Corrected":        func(s *survey) { s.out[0] = correct.NoWater },
		"no origin":            func(s *survey) { s.origin.Y[0] = math.NaN() },
		"origin below":         func(s *survey) { s.origin.Z[0] = -9 },
		"origin on the plane":  func(s *survey) { s.origin.Z[0] = 0.5 },
		"infinite origin":      func(s *survey) { s.origin.X[0] = math.Inf(1) },
		"point above":          func(s *survey) { s.raw.Z[0] = 1 },
		"point on the surface": func(s *survey) { s.raw.Z[0] = 0.5 },
		"no surface":           func(s *survey) { s.planes.Level[0] = math.NaN() },
	} {
		t.Run(name, func(t *testing.T) {
			s := one(20, 1, 1, 1.34, 1.36)
			change(s)
			x, y := []float64{1}, []float64{2}
			correct.EntryPlan(x, y, s.out, s.raw, s.origin, s.planes)
			if x[0] != s.raw.X[0] || y[0] != s.raw.Y[0] {
				t.Errorf("the entry is %g %g, want the raw position %g %g", x[0], y[0], s.raw.X[0], s.raw.Y[0])
			}
		})
	}
}

func TestCarryToRaw(t *testing.T) {
	const n = 100
	r := rand.New(rand.NewPCG(seed, n))
	raw, planes, x, y, want := newXYZ(n), newPlanes(n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		w := water{level: r.NormFloat64(), sx: r.NormFloat64(), sy: r.NormFloat64()}
		raw.X[i], raw.Y[i], x[i], y[i] = 9*r.Float64(), 9*r.Float64(), 9*r.Float64(), 9*r.Float64()
		planes.Level[i], planes.SlopeX[i], planes.SlopeY[i] = w.at(x[i], y[i]), w.sx, w.sy
		want[i] = w.at(raw.X[i], raw.Y[i])
	}
	planes.CarryToRaw(raw, x, y)
	for i := range n {
		near(t, "level", planes.Level[i], want[i], 1e-13)
	}
}

// A trough, z = x^2 / 1000, is met by taking its planes anew at the entries: after
// four times they stand where halving the ray finds the surface.
func TestEntryOfACurvedSurface(t *testing.T) {
	s := one(40, 1, 1, 1.34, 1.36)
	x, y := []float64{s.raw.X[0]}, []float64{s.raw.Y[0]}
	for range 4 {
		s.planes.Level[0], s.planes.SlopeX[0] = x[0]*x[0]/1000, x[0]/500
		s.planes.CarryToRaw(s.raw, x, y)
		correct.EntryPlan(x, y, s.out, s.raw, s.origin, s.planes)
	}
	raw := vec{s.raw.X[0], s.raw.Y[0], s.raw.Z[0]}
	way := vec{s.origin.X[0], s.origin.Y[0], s.origin.Z[0]}.plus(-1, raw)
	low, high := 0.0, 1.0
	for range 60 {
		mid := (low + high) / 2
		if p := raw.plus(mid, way); p[2] < p[0]*p[0]/1000 {
			low = mid
		} else {
			high = mid
		}
	}
	near(t, "entry x", x[0], raw.plus(low, way)[0], 1e-11)
	near(t, "entry y", y[0], -7.5, 0)
}

func TestKeep(t *testing.T) {
	for o := range correct.NumOutcomes {
		s := one(20, 1, 1, 1.34, 1.36)
		s.out[0] = correct.Outcome(o)
		columns := []*float64{
			&s.dst.X[0], &s.dst.Y[0], &s.dst.Z[0], &s.dst.Depth[0], &s.dst.WaterLevel[0], &s.dst.EntryLevel[0], &s.dst.IncidenceRad[0], &s.dst.RefractionRad[0],
		}
		for _, c := range columns {
			*c = 7
		}
		correct.Keep(&s.dst, s.out, s.raw)
		if s.out[0] == correct.Corrected || s.out[0] == correct.Dry {
			for k, c := range columns {
				if *c != 7 {
					t.Errorf("%s: column %d is %g, want it as it was", s.out[0], k, *c)
				}
			}
			continue
		}
		s.checkKept(t, 0)
	}
}

func TestEntryUnequalLengthsPanic(t *testing.T) {
	for name, call := range map[string]func(s *survey){
		"EntryPlan":            func(s *survey) { correct.EntryPlan(nil, s.raw.Y, s.out, s.raw, s.origin, s.planes) },
		"EntryPlan, no origin": func(s *survey) { correct.EntryPlan(s.raw.X, s.raw.Y, s.out, s.raw, correct.XYZ{}, s.planes) },
		"CarryToRaw":           func(s *survey) { s.planes.CarryToRaw(s.raw, s.raw.X, nil) },
		"Keep":                 func(s *survey) { s.dst.Depth = nil; correct.Keep(&s.dst, s.out, s.raw) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if got := recover(); got != "correct: columns of unequal length" {
					t.Errorf("panic is %v, want one that speaks of columns of unequal length", got)
				}
			}()
			call(simulate(3, 20, 0, noOffset))
		})
	}
}

func TestEntryNoAllocation(t *testing.T) {
	s := simulate(1000, 24, 0.05, noOffset)
	x, y := make([]float64, 1000), make([]float64, 1000)
	got := testing.AllocsPerRun(20, func() {
		correct.EntryPlan(x, y, s.out, s.raw, s.origin, s.planes)
		s.planes.CarryToRaw(s.raw, x, y)
		correct.Keep(&s.dst, s.out, s.raw)
	})
	if got != 0 {
		t.Errorf("%g allocations a call, want 0", got)
	}
}

func BenchmarkEntryPlan(b *testing.B) {
	x, y := make([]float64, chunk), make([]float64, chunk)
	bench(b, simulate(chunk, 24, 0.05, noOffset), func(s *survey) {
		correct.EntryPlan(x, y, s.out, s.raw, s.origin, s.planes)
	})
}
