package correct_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct"
)

// turn turns v about the y axis.
func turn(v vec, rad float64) vec {
	sin, cos := math.Sincos(rad)
	return vec{cos*v[0] + sin*v[2], v[1], cos*v[2] - sin*v[0]}
}

// Intersect knows no vertical: a world turned as a whole gives the turned result.
func TestIntersectTurns(t *testing.T) {
	const rad = 0.2
	r := rand.New(rand.NewPCG(seed, 11))
	for i := range 100 {
		s := level(vec{r.NormFloat64(), r.NormFloat64(), -1 - 9*r.Float64()}, networks["side"](r, 60, 0.7)...)
		raw := s.triangulate(correct.Equal, s.truth)
		turned := &scene{truth: turn(s.truth, rad)}
		for _, c := range s.cameras {
			turned.cameras = append(turned.cameras, turn(c, rad))
			turned.waters = append(turned.waters, water{air: 1, waterPhase: 1.34, sx: -math.Tan(rad)})
		}
		turned.rotations = s.rotations
		a, b := newPhotos(1), newPhotos(1)
		a.bundle.Solve, b.bundle.Solve = correct.Intersect, correct.Intersect
		a.add(s, raw, noOffset)
		b.add(turned, turn(raw, rad), noOffset)
		a.solve()
		b.solve()
		want := turn(vec{a.dst.X[0], a.dst.Y[0], a.dst.Z[0]}, rad)
		near(t, "x", b.dst.X[0], want[0], 1e-11)
		near(t, "y", b.dst.Y[0], want[1], 1e-11)
		near(t, "z", b.dst.Z[0], want[2], 1e-11)
		near(t, "incidence", b.dst.IncidenceRad[0], a.dst.IncidenceRad[0], 1e-13)
		if t.Failed() || b.out[0] != correct.Corrected {
			t.Fatalf("seed %d: case %d is %s", seed, i, b.out[0])
		}
	}
}

// Intersect of two rays that meet: a symmetric pair finds the point itself.
func TestIntersectSymmetricPair(t *testing.T) {
	for _, deg := range []float64{0.5, 10, 45, 59} {
		t.Run(fmt.Sprint(deg), func(t *testing.T) {
			away := 60 * math.Tan(deg*math.Pi/180)
			p := level(vec{0, 0, -4}, vec{-away, 0, 60}, vec{away, 0, 60}).photos(correct.Equal)
			p.bundle.Solve = correct.Intersect
			p.solve()
			p.checkTruth(t, 1e-9)
		})
	}
}

// Average on tilted planes, from the angles by Snell's law in sines.
func TestAverageTilted(t *testing.T) {
	p := simulatePhotos(60, networks["ring"], correct.Equal, 45, 0.1, true, noOffset)
	p.bundle.Solve = correct.Average
	p.solve()
	for i, s := range p.scenes {
		raw := vec{p.raw.X[i], p.raw.Y[i], p.raw.Z[i]}
		sum := 0.0
		for k, c := range s.cameras {
			w := s.waters[k]
			up := vec{-w.sx, -w.sy, 1}.unit()
			incidence := math.Acos(c.plus(-1, raw).unit().dot(up))
			refraction := math.Asin(w.air * math.Sin(incidence) / s.waters[0].waterPhase)
			depth := w.at(raw[0], raw[1]) - raw[2]
			sum += depth*math.Tan(incidence)/math.Tan(refraction) - depth
		}
		near(t, "x", p.dst.X[i], raw[0], 0)
		near(t, "y", p.dst.Y[i], raw[1], 0)
		near(t, "z", p.dst.Z[i], raw[2]-sum/float64(len(s.cameras)), 1e-9)
		near(t, "water level", p.dst.WaterLevel[i], s.waters[0].at(raw[0], raw[1]), 1e-12)
		if t.Failed() {
			t.Fatalf("seed %d: point %d", seed, i)
		}
	}
}
