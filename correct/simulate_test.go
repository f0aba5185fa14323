package correct_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct"
)

// An independent simulation of a laser survey. It shares no code and no formula with the
// kernel: the entry comes from the optical path (Fermat), not from Snell's law.

const seed = 20260711

type vec [3]float64

func (v vec) plus(s float64, w vec) vec { return vec{v[0] + s*w[0], v[1] + s*w[1], v[2] + s*w[2]} }
func (v vec) dot(w vec) float64         { return v[0]*w[0] + v[1]*w[1] + v[2]*w[2] }
func (v vec) length() float64           { return math.Sqrt(v.dot(v)) }

// water is a tilted plane z = level + sx x + sy y over water of given indices, and the
// air above it.
type water struct {
	level, sx, sy                           float64
	air, rangeIndex, waterPhase, waterGroup float64
}

func (w water) at(x, y float64) float64 { return w.level + w.sx*x + w.sy*y }

// entry returns where the light from origin to bed crosses the plane: at the point of the
// line between their feet on the plane where the optical path is stationary,
// found by bisection of its derivative.
func (w water) entry(origin, bed vec) vec {
	up := vec{-w.sx, -w.sy, 1}
	up = up.plus(1/up.length()-1, up)
	above := (origin[2] - w.at(origin[0], origin[1])) * up[2]
	below := (w.at(bed[0], bed[1]) - bed[2]) * up[2]
	from, to := origin.plus(-above, up), bed.plus(below, up)
	run := to.plus(-1, from)
	span := run.length()
	low, high := 0.0, 1.0
	for range 100 {
		mid := (low + high) / 2
		s, rest := mid*span, (1-mid)*span
		if w.air*s/math.Hypot(above, s) < w.waterPhase*rest/math.Hypot(below, rest) {
			low = mid
		} else {
			high = mid
		}
	}
	return from.plus(low, run)
}

// apparent returns where the survey puts the bed: straight on from the entry, at the
// range that the travel time has at the file's index.
func (w water) apparent(origin, bed vec) vec {
	entry := w.entry(origin, bed)
	in := entry.plus(-1, origin)
	r := bed.plus(-1, entry).length() * w.waterGroup / w.rangeIndex
	return entry.plus(r/in.length(), in)
}

// survey is a simulated cloud with its truth.
type survey struct {
	truth, raw, origin correct.XYZ
	planes             correct.Planes
	light              correct.Light
	entryLevel         []float64
	out                []correct.Outcome
	dst                correct.Result
}

func newXYZ(n int) correct.XYZ {
	return correct.XYZ{X: make([]float64, n), Y: make([]float64, n), Z: make([]float64, n)}
}

func newSurvey(n int, w water) *survey {
	s := &survey{truth: newXYZ(n), raw: newXYZ(n), origin: newXYZ(n), dst: correct.NewResult(n)}
	s.planes = correct.Planes{Level: make([]float64, n), SlopeX: make([]float64, n), SlopeY: make([]float64, n)}
	s.light = correct.Light{Air: w.air, RangeIndex: w.rangeIndex, Water: make([]float64, n), WaterGroup: make([]float64, n)}
	s.entryLevel, s.out = make([]float64, n), make([]correct.Outcome, n)
	return s
}

// set puts point i, simulated near the origin of the axes, at an offset in plan.
func (s *survey) set(i int, w water, origin, bed, offset vec) {
	raw := w.apparent(origin, bed)
	for _, c := range []struct {
		to   correct.XYZ
		from vec
	}{{s.truth, bed}, {s.raw, raw}, {s.origin, origin}} {
		c.to.X[i], c.to.Y[i], c.to.Z[i] = c.from[0]+offset[0], c.from[1]+offset[1], c.from[2]
	}
	s.planes.Level[i], s.planes.SlopeX[i], s.planes.SlopeY[i] = w.at(raw[0], raw[1]), w.sx, w.sy
	s.light.Water[i], s.light.WaterGroup[i] = w.waterPhase, w.waterGroup
	s.entryLevel[i] = w.entry(origin, bed)[2]
}

func (s *survey) mark() {
	correct.MarkInvalid(s.out, s.raw)
	correct.MarkNoSurface(s.out, s.planes)
	correct.MarkDry(s.out, &s.dst, s.raw, s.planes)
}

func (s *survey) pulse(limitRad float64) {
	s.mark()
	correct.Pulse(&s.dst, s.out, s.raw, s.origin, s.planes, s.light, limitRad)
}

func (s *survey) vertical() {
	s.mark()
	correct.Vertical(&s.dst, s.out, s.raw, s.planes, s.light)
}

// simulate returns n random points: flying height 100 to 600 m, depth to 30 m,
// off nadir to maxOffNadirDeg, all slopes to maxSlope.
func simulate(n int, maxOffNadirDeg, maxSlope float64, offset vec) *survey {
	r := rand.New(rand.NewPCG(seed, uint64(n)))
	base := water{air: 1.000277, rangeIndex: 1.000284, waterPhase: 1.3400, waterGroup: 1.3620}
	s := newSurvey(n, base)
	for i := range n {
		w := base
		w.level = 2 * r.NormFloat64()
		w.sx, w.sy = maxSlope*(2*r.Float64()-1), maxSlope*(2*r.Float64()-1)
		w.waterPhase += 0.004 * r.NormFloat64()
		w.waterGroup += 0.004 * r.NormFloat64()
		height, depth := 100+500*r.Float64(), 0.01+29.99*r.Float64()
		turn, away := 2*math.Pi*r.Float64(), height*math.Tan(maxOffNadirDeg*r.Float64()*math.Pi/180)
		origin := vec{away * math.Cos(turn), away * math.Sin(turn), w.level + height}
		x, y := r.NormFloat64(), r.NormFloat64()
		s.set(i, w, origin, vec{x, y, w.at(x, y) - depth}, offset)
	}
	return s
}

// near fails the test unless got is within tol of want; NaN fails.
func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.17g, want %.17g within %g", what, got, want, tol)
	}
}
