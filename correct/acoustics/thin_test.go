package acoustics_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct/acoustics"
)

// noisy returns a profile of 500 samples down to 50 m with a thermocline and a probe's noise,
// m/s.
func noisy(t *testing.T, r *rand.Rand, noise float64, kind acoustics.Interpolation) *acoustics.Profile {
	t.Helper()
	depths, speeds := make([]float64, 500), make([]float64, 500)
	for i := range depths {
		z := 0.3 + 50*float64(i)/499
		depths[i] = z
		speeds[i] = 1500 - 12*math.Tanh((z-14)/4) + 0.016*z + noise*r.NormFloat64()
	}
	return profile(t, depths, speeds, kind)
}

// The end of no ray moves by ThinnedM, whatever its head, angle and time over the reach; and
// there is less to trace.
func TestThin(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 5))
	for _, row := range []struct {
		kind             acoustics.Interpolation
		noise            float64
		headMin, headMax float64
		from, to         float64 // launch angles, degrees
		atMost           int
		describe         string
	}{
		{acoustics.Linear, 0, 0.4, 0.6, 0, 65, 40, "smooth"},
		{acoustics.Linear, 0.03, 0.4, 0.6, 0, 45, 50, "noisy"},
		{acoustics.Linear, 0.03, 0.4, 0.6, 0, 75, 150, "noisy, wide"},
		{acoustics.Linear, 0.01, 0.4, 3, 0, 65, 100, "heads at many depths"},
		{acoustics.Linear, 0.01, 39, 40, 110, 180, 100, "upward"},
		{acoustics.Steps, 0, 0.4, 0.6, 0, 65, 40, "smooth steps"},
		{acoustics.Steps, 0.03, 0.4, 0.6, 0, 75, 80, "noisy steps, wide"},
	} {
		t.Run(row.describe, func(t *testing.T) {
			p := noisy(t, r, row.noise, row.kind)
			reach := acoustics.Reach{HeadMinM: row.headMin, HeadMaxM: row.headMax, AngleMinRad: row.from * degree, AngleMaxRad: row.to * degree, DepthM: 52}
			q := p.Thin(reach)
			t.Logf("%d samples of %d", q.Samples(), p.Samples())
			if q.Samples() > row.atMost || q.Interpolation() != row.kind {
				t.Errorf("%d samples, %v, want at most %d, %v", q.Samples(), q.Interpolation(), row.atMost, row.kind)
			}
			moved := 0.0
			for range 20000 {
				head := row.headMin + (row.headMax-row.headMin)*r.Float64()
				sin, cos := math.Sincos((row.from + (row.to-row.from)*r.Float64()) * degree)
				way := 52 - head
				if cos < 0 {
					way = head
				}
				time := way / max(0.1, math.Abs(cos)) * r.Float64() / 1500
				a, b := p.Trace(head, sin, cos, time), q.Trace(head, sin, cos, time)
				if a.Fate == acoustics.Arrived && b.Fate == acoustics.Arrived {
					moved = max(moved, math.Hypot(a.RunM-b.RunM, a.DepthM-b.DepthM))
				}
			}
			if !(moved < acoustics.ThinnedM && moved > 0) {
				t.Errorf("seed %d: a ray's end moved by %g m, want less than %g", seed, moved, acoustics.ThinnedM)
			}
			near(t, "speed at the head", q.Speed(row.headMin), p.Speed(row.headMin), 1e-9)
		})
	}
}

// What has nothing to lose becomes its ends; what has nothing to spare stays itself.
func TestThinLimits(t *testing.T) {
	reach := acoustics.Reach{HeadMinM: 0.5, HeadMaxM: 0.5, DepthM: 40, AngleMaxRad: 1}
	if got := gradient(t, 1000, 0.3).Thin(reach).Samples(); got > 8 {
		t.Errorf("one gradient has %d samples left, want next to none", got)
	}
	coarse := profile(t, []float64{0, 10, 20, 40}, []float64{1500, 1470, 1500, 1450}, acoustics.Linear)
	if coarse.Thin(reach) != coarse {
		t.Error("a zigzag was thinned")
	}
	one := profile(t, []float64{2}, []float64{1500}, acoustics.Steps)
	if one.Thin(reach) != one {
		t.Error("one sample was thinned")
	}
	turning := acoustics.Reach{HeadMinM: 0.5, HeadMaxM: 0.5, DepthM: 40, AngleMaxRad: 88 * degree}
	if p := gradient(t, 20, 0.3); p.Thin(turning) != p {
		t.Error("a profile in which a ray turns was thinned")
	}
	wrong := acoustics.Reach{HeadMinM: nan, HeadMaxM: 1, DepthM: 40, AngleMaxRad: 1}
	if p := gradient(t, 20, 0.3); p.Thin(wrong) != p {
		t.Error("a reach that is not a number thinned a profile")
	}
}
