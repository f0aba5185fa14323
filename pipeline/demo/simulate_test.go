package demo

import (
	"math"
	"math/rand/v2"
	"testing"
)

const seed = 20260519

// near fails the test unless got is within tol of want; NaN fails.
func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.17g, want %.17g within %g", what, got, want, tol)
	}
}

// rays calls f with random rays: 100 to 600 m of height, up to 30 m of depth, up to
// 60 degrees off nadir, and a surface that slopes by up to 0.2.
func rays(t *testing.T, f func(l light, surface plane, origin, bed vec)) {
	t.Helper()
	t.Logf("seed %d", seed)
	r := rand.New(rand.NewPCG(seed, 1))
	for range 5000 {
		l := light{1.00027, 1.00028, 1.33 + 0.02*r.Float64(), 1.35 + 0.02*r.Float64()}
		height, depth := 100+500*r.Float64(), 30*r.Float64()+1e-6
		away, turn := height*math.Tan(r.Float64()*math.Pi/3), 2*math.Pi*r.Float64()
		slope, side := 0.2*r.Float64(), 2*math.Pi*r.Float64()
		surface := plane{vec{3, -4, levelM}, slope * math.Cos(side), slope * math.Sin(side)}
		origin := vec{x: away * math.Cos(turn), y: away * math.Sin(turn)}
		origin.z = surface.z(origin.x, origin.y) + height
		f(l, surface, origin, vec{z: surface.z(0, 0) - depth})
	}
}

// snellEntry finds the entry another way: it shoots with angles, by Snell's law,
// until the ray meets the bed point. It returns the distance from the origin in plan.
func snellEntry(l light, height, depth, across float64) float64 {
	low, high := 0.0, math.Pi/2
	for range 200 {
		incidence := (low + high) / 2
		refraction := math.Asin(math.Sin(incidence) * l.airPhase / l.waterPhase)
		if height*math.Tan(incidence)+depth*math.Tan(refraction) < across {
			low = incidence
		} else {
			high = incidence
		}
	}
	return height * math.Tan(low)
}

// The angles are taken between the rays and the normal, so that this holds on
// slopes too: Snell's law, one plane with the normal, and the entry that
// snellEntry finds, as far from the foot of the origin.
func TestEntryIsOfLeastPath(t *testing.T) {
	rays(t, func(l light, surface plane, origin, bed vec) {
		entry, up := l.entry(surface, origin, bed), surface.up()
		near(t, "entry's elevation", entry.z, surface.z(entry.x, entry.y), 1e-9)
		in, out := entry.minus(origin), bed.minus(entry)
		sinIn, sinOut := cross(in, up).length()/in.length(), cross(out, up).length()/out.length()
		if out.length() > 0.01 { // below, rounding is most of the angle in the water
			near(t, "Snell's law", l.airPhase*sinIn, l.waterPhase*sinOut, 1e-9)
		}
		n := cross(in, out)
		near(t, "the volume of origin, entry, bed and normal", n.x*up.x+n.y*up.y+n.z*up.z, 0, 1e-8)
		height, depth := -dot(in, up), -dot(out, up)
		across := cross(bed.minus(origin), up).length()
		near(t, "entry", cross(in, up).length(), snellEntry(l, height, depth, across), 1e-9)
	})
}

func TestApparentPoint(t *testing.T) {
	rays(t, func(l light, surface plane, origin, bed vec) {
		entry, apparent := l.entry(surface, origin, bed), l.apparent(surface, origin, bed)
		in, all := entry.minus(origin), apparent.minus(origin)
		near(t, "path time", all.length()*l.airGroup, in.length()*l.airGroup+bed.minus(entry).length()*l.waterGroup, 1e-9)
		near(t, "way off the straight ray", all.plus(-all.length()/in.length(), in).length(), 0, 1e-9)
	})
}

func TestApparentPointLimits(t *testing.T) {
	l := light{1.0003, 1.0003, 1.34, 1.36}
	air := light{1.0003, 1.0003, 1.0003, 1.0003}
	origin := vec{30, 40, levelM + 350}
	for _, c := range []struct {
		name      string
		light     light
		bed, want vec
	}{
		{"straight down: depth times the ratio of group indices", l, vec{30, 40, levelM - 10}, vec{30, 40, levelM - 10*1.36/1.0003}},
		{"equal indices change nothing", air, vec{-60, 7, levelM - 10}, vec{-60, 7, levelM - 10}},
		{"land is where it is", l, vec{-60, 7, levelM + 3}, vec{-60, 7, levelM + 3}},
		{"the waterline is land", l, vec{-60, 7, levelM}, vec{-60, 7, levelM}},
	} {
		t.Run(c.name, func(t *testing.T) {
			near(t, "distance", c.light.apparent(coveSurface, origin, c.bed).minus(c.want).length(), 0, 1e-10)
		})
	}
}

func BenchmarkShots(b *testing.B) {
	b.ReportAllocs()
	lines := flightLines()
	s, err := newShooter()
	if err != nil {
		b.Fatal(err)
	}
	fired := 0
	for b.Loop() {
		s.fire(lines[0], fired%(lineS*pulsesPerS))
		fired++
	}
}
