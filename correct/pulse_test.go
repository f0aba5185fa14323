package correct_test

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/optimize"

	"bentray/correct"
)

const limit = math.Pi / 3

var noOffset = vec{}

func TestPulseReturnsTruth(t *testing.T) {
	north := vec{5e5, 7e6, 0}
	for _, row := range []struct {
		name                string
		offNadirDeg, slopes float64
		offset              vec
	}{
		{"level", 24, 0, noOffset},
		{"tilted", 24, 0.05, noOffset},
		{"level, 7 million metres north", 24, 0, north},
		{"tilted, 7 million metres north", 24, 0.05, north},
		{"tilted, to 50 degrees off nadir", 50, 0.05, noOffset},
	} {
		t.Run(row.name, func(t *testing.T) {
			s := simulate(5000, row.offNadirDeg, row.slopes, row.offset)
			s.pulse(limit)
			for i, o := range s.out {
				if o != correct.Corrected {
					t.Fatalf("seed %d: point %d is %s", seed, i, o)
				}
				near(t, "x", s.dst.X[i], s.truth.X[i], 1e-8)
				near(t, "y", s.dst.Y[i], s.truth.Y[i], 1e-8)
				near(t, "z", s.dst.Z[i], s.truth.Z[i], 1e-8)
				near(t, "entry level", s.dst.EntryLevel[i], s.entryLevel[i], 1e-8)
				s.checkSurface(t, i)
				if t.Failed() {
					t.Fatalf("seed %d: point %d", seed, i)
				}
			}
		})
	}
}

// checkSurface checks the columns that follow from the true point and Snell's law.
func (s *survey) checkSurface(t *testing.T, i int) {
	t.Helper()
	level := s.planes.Level[i] + s.planes.SlopeX[i]*(s.truth.X[i]-s.raw.X[i]) + s.planes.SlopeY[i]*(s.truth.Y[i]-s.raw.Y[i])
	near(t, "water level", s.dst.WaterLevel[i], level, 1e-8)
	near(t, "depth", s.dst.Depth[i], level-s.truth.Z[i], 1e-8)
	up := vec{-s.planes.SlopeX[i], -s.planes.SlopeY[i], 1}
	back := vec{s.origin.X[i] - s.raw.X[i], s.origin.Y[i] - s.raw.Y[i], s.origin.Z[i] - s.raw.Z[i]}
	incidence := math.Acos(min(1, back.dot(up)/back.length()/up.length()))
	near(t, "incidence", s.dst.IncidenceRad[i], incidence, 1e-7)
	near(t, "n sin(refraction)", s.light.Water[i]*math.Sin(s.dst.RefractionRad[i]), s.light.Air*math.Sin(incidence), 1e-7)
}

// A second opinion on the way itself: gonum's minimiser finds no quicker way from the
// origin to the corrected point than over the simulated entry.
func TestPulseLeastOpticalPath(t *testing.T) {
	s := simulate(40, 24, 0.05, noOffset)
	s.pulse(limit)
	for i := range s.out {
		p := vec{s.dst.X[i], s.dst.Y[i], s.dst.Z[i]}
		o := vec{s.origin.X[i], s.origin.Y[i], s.origin.Z[i]}
		optical := func(e []float64) float64 {
			dz := s.planes.SlopeX[i]*(e[0]-s.raw.X[i]) + s.planes.SlopeY[i]*(e[1]-s.raw.Y[i])
			entry := vec{e[0], e[1], s.planes.Level[i] + dz}
			return s.light.Air*entry.plus(-1, o).length() + s.light.Water[i]*entry.plus(-1, p).length()
		}
		found, err := optimize.Minimize(optimize.Problem{Func: optical}, []float64{p[0], p[1]}, nil, &optimize.NelderMead{})
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		// The kernel's entry lies on the raw ray at EntryLevel.
		raw := vec{s.raw.X[i], s.raw.Y[i], s.raw.Z[i]}
		share := (s.dst.EntryLevel[i] - raw[2]) / (o[2] - raw[2])
		entry := raw.plus(share, o.plus(-1, raw))
		near(t, "optical path, m", optical(entry[:2]), found.F, 1e-9)
		// The path is flat at its minimum: its last bit is worth 1e-6 m of position.
		near(t, "entry x", entry[0], found.X[0], 1e-4)
		near(t, "entry y", entry[1], found.X[1], 1e-4)
	}
}

// one returns a cloud of one point 4 m below level 0.5, seen offNadirDeg
// off nadir from 300 m above it, with all indices given.
func one(offNadirDeg, air, rangeIndex, phase, group float64) *survey {
	s := newSurvey(1, water{air: air, rangeIndex: rangeIndex})
	s.raw.X[0], s.raw.Y[0], s.raw.Z[0] = 12.25, -7.5, -3.5
	s.origin.X[0], s.origin.Y[0] = 12.25+300*math.Tan(offNadirDeg*math.Pi/180), -7.5
	s.origin.Z[0] = -3.5 + 300
	s.planes.Level[0] = 0.5
	s.light.Water[0], s.light.WaterGroup[0] = phase, group
	return s
}

func TestPulseIdentities(t *testing.T) {
	t.Run("index 1 changes nothing", func(t *testing.T) {
		s := one(24, 1, 1, 1, 1)
		s.planes.SlopeX[0], s.planes.SlopeY[0] = 0.03, -0.05
		s.pulse(limit)
		near(t, "x", s.dst.X[0], 12.25, 1e-12)
		near(t, "y", s.dst.Y[0], -7.5, 1e-12)
		near(t, "z", s.dst.Z[0], -3.5, 1e-12)
		near(t, "refraction", s.dst.RefractionRad[0], s.dst.IncidenceRad[0], 1e-15)
	})
	t.Run("straight down the depth scales by the group index", func(t *testing.T) {
		s := one(0, 1.00027, 1.00029, 1.34, 1.36)
		s.pulse(limit)
		near(t, "x", s.dst.X[0], 12.25, 0)
		near(t, "y", s.dst.Y[0], -7.5, 0)
		near(t, "depth", s.dst.Depth[0], 4*1.00029/1.36, 1e-14)
		near(t, "incidence", s.dst.IncidenceRad[0], 0, 0)
		near(t, "refraction", s.dst.RefractionRad[0], 0, 0)
	})
	t.Run("a level surface has one level to the bit", func(t *testing.T) {
		s := one(24, 1.00027, 1.00029, 1.34, 1.36)
		s.pulse(limit)
		if s.dst.WaterLevel[0] != 0.5 || s.dst.EntryLevel[0] != 0.5 {
			t.Errorf("levels are %g and %g, want 0.5", s.dst.WaterLevel[0], s.dst.EntryLevel[0])
		}
	})
	t.Run("a turn about the vertical turns the result", func(t *testing.T) {
		a, b := one(20, 1.00027, 1.00029, 1.34, 1.36), one(20, 1.00027, 1.00029, 1.34, 1.36)
		a.planes.SlopeX[0] = 0.04
		b.planes.SlopeY[0] = 0.04
		b.origin.X[0], b.origin.Y[0] = 12.25, -7.5+a.origin.X[0]-12.25
		a.pulse(limit)
		b.pulse(limit)
		near(t, "shift along the view", b.dst.Y[0]+7.5, a.dst.X[0]-12.25, 1e-14)
		near(t, "depth", b.dst.Depth[0], a.dst.Depth[0], 1e-14)
	})
}

func TestPulseIncidenceLimits(t *testing.T) {
	for _, row := range []struct {
		name            string
		offNadirDeg     float64
		air, waterPhase float64
		limitDeg        float64
		want            correct.Outcome
	}{
		{"below the limit", 30, 1, 1.34, 30.0000001, correct.Corrected},
		{"beyond the limit", 30, 1, 1.34, 29.9999999, correct.Grazing},
		{"no limit, nearly along the surface", 89, 1, 1.34, 90, correct.Corrected},
		{"just below the critical angle", 30 - 1e-9, 1, 0.5, 90, correct.Corrected},
		{"just beyond the critical angle", 30 + 1e-9, 1, 0.5, 90, correct.Grazing},
		{"limit not a number", 30, 1, 1.34, math.NaN(), correct.Grazing},
	} {
		t.Run(row.name, func(t *testing.T) {
			s := one(row.offNadirDeg, row.air, row.air, row.waterPhase, row.waterPhase)
			s.pulse(row.limitDeg * math.Pi / 180)
			if s.out[0] != row.want {
				t.Fatalf("outcome is %s, want %s", s.out[0], row.want)
			}
			near(t, "incidence, deg", s.dst.IncidenceRad[0]*180/math.Pi, row.offNadirDeg, 1e-11)
			if row.want == correct.Grazing {
				s.checkKept(t, 0, "incidence")
			}
		})
	}
}

// The result does not depend on where in a column a point stands or how long the column is.
func TestPulseSizes(t *testing.T) {
	whole := simulate(33, 24, 0.05, noOffset)
	whole.pulse(limit)
	for _, n := range []int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 31, 32, 33} {
		t.Run(fmt.Sprint(n), func(t *testing.T) {
			part := simulate(33, 24, 0.05, noOffset).tail(n)
			part.pulse(limit)
			for i := range n {
				k := 33 - n + i
				if part.dst.X[i] != whole.dst.X[k] || part.dst.Z[i] != whole.dst.Z[k] || part.dst.Depth[i] != whole.dst.Depth[k] {
					t.Errorf("point %d of %d differs from the same point of 33", i, n)
				}
			}
		})
	}
}

// tail returns the last n points of s.
func (s *survey) tail(n int) *survey {
	k := len(s.out) - n
	cut := func(p correct.XYZ) correct.XYZ { return correct.XYZ{X: p.X[k:], Y: p.Y[k:], Z: p.Z[k:]} }
	out := newSurvey(n, water{air: s.light.Air, rangeIndex: s.light.RangeIndex})
	out.raw, out.origin, out.truth = cut(s.raw), cut(s.origin), cut(s.truth)
	out.planes = correct.Planes{Level: s.planes.Level[k:], SlopeX: s.planes.SlopeX[k:], SlopeY: s.planes.SlopeY[k:]}
	out.light.Water, out.light.WaterGroup = s.light.Water[k:], s.light.WaterGroup[k:]
	return out
}
