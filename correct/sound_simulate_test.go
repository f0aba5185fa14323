package correct_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct"
	"bentray/correct/acoustics"
)

// An independent simulation of a sonar survey. Its water is a smooth function of depth, and it
// follows rays by the ray equations in slowness, without layers, angles or Snell's law.

// sea is a speed of sound by depth: a thermocline.
type sea struct{ top, drop, mid, width, slope float64 }

var (
	summerSea = sea{1520, 12, 9, 3, 0.016}
	springSea = sea{1488, 3, 15, 6, 0.03}
)

// speed returns the speed at a depth and its gradient.
func (s sea) speed(z float64) (c, gradient float64) {
	th := math.Tanh((z - s.mid) / s.width)
	return s.top - s.drop*th + s.slope*z, s.slope - s.drop*(1-th*th)/s.width
}

// profile samples the sea down to 60 m.
func (s sea) profile(t testing.TB, n int, kind acoustics.Interpolation) *acoustics.Profile {
	t.Helper()
	depths, speeds := make([]float64, n), make([]float64, n)
	for i := range depths {
		depths[i] = 60 * float64(i) / float64(n-1)
		speeds[i], _ = s.speed(depths[i])
	}
	p, err := acoustics.NewProfile(depths, speeds, kind)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// follow returns where a ray from a head at a depth ends, relative to the head, z up: r' = c^2 q,
// q' = -grad c / c with the slowness q, by Runge and Kutta's classical method.
func (s sea) follow(depth float64, dir vec, time float64) vec {
	type state struct{ r, q vec }
	rate := func(a state) state {
		c, g := s.speed(depth - a.r[2])
		return state{vec{}.plus(c*c, a.q), vec{0, 0, g / c}}
	}
	step := func(a state, h float64, d state) state { return state{a.r.plus(h, d.r), a.q.plus(h, d.q)} }
	c, _ := s.speed(depth)
	a := state{vec{}, vec{}.plus(1/c, dir)}
	const steps = 600
	h := time / steps
	for range steps {
		k1 := rate(a)
		k2 := rate(step(a, h/2, k1))
		k3 := rate(step(a, h/2, k2))
		k4 := rate(step(a, h, k3))
		a = step(step(step(step(a, h/6, k1), h/3, k2), h/3, k3), h/6, k4)
	}
	return a.r
}

// soundings is a simulated sonar cloud with its truth.
type soundings struct {
	truth, raw, origin correct.XYZ
	planes             correct.Planes
	sound              correct.Sound
	out                []correct.Outcome
	dst                correct.SoundResult
}

func newSoundings(n int) *soundings {
	s := &soundings{truth: newXYZ(n), raw: newXYZ(n), origin: newXYZ(n), out: make([]correct.Outcome, n), dst: correct.NewSoundResult(n)}
	s.planes = correct.Planes{Level: make([]float64, n), SlopeX: make([]float64, n), SlopeY: make([]float64, n)}
	s.sound.AssumedSpeed = make([]float64, n)
	return s
}

// ping is one ray of a sonar.
type ping struct {
	depth   float64 // of the head
	dir     vec
	time    float64
	level   float64 // of the water over the head
	sx, sy  float64
	head    vec // plan position; z is not read
	assumed float64
}

// set puts point i: raw is where the ray seemed to end and truth where it did, relative to the
// head.
func (s *soundings) set(i int, p ping, raw, truth vec) {
	head := vec{p.head[0], p.head[1], p.level - p.depth}
	for _, c := range []struct {
		to   correct.XYZ
		from vec
	}{{s.truth, head.plus(1, truth)}, {s.raw, head.plus(1, raw)}, {s.origin, head}} {
		c.to.X[i], c.to.Y[i], c.to.Z[i] = c.from[0], c.from[1], c.from[2]
	}
	s.planes.Level[i], s.planes.SlopeX[i], s.planes.SlopeY[i] = p.level+p.sx*raw[0]+p.sy*raw[1], p.sx, p.sy
	s.sound.AssumedSpeed[i] = p.assumed
}

func (s *soundings) run() {
	correct.MarkInvalid(s.out, s.raw)
	correct.MarkNoSurface(s.out, s.planes)
	correct.MarkDry(s.out, &s.dst.Result, s.raw, s.planes)
	correct.Sounding(&s.dst, s.out, s.raw, s.origin, s.planes, &s.sound)
}

// randomPing returns a ray to 70 degrees off nadir, some 2 to 45 m deep, under a tilted level.
func randomPing(r *rand.Rand) ping {
	angle, turn := 70*r.Float64()*math.Pi/180, 2*math.Pi*r.Float64()
	sin, cos := math.Sincos(angle)
	return ping{
		depth: 0.3 + r.Float64(), dir: vec{sin * math.Cos(turn), sin * math.Sin(turn), -cos},
		time: (1 + 43*r.Float64()) / cos / 1500, level: 2 * r.NormFloat64(),
		sx: 2e-3 * r.NormFloat64(), sy: 2e-3 * r.NormFloat64(),
		head: vec{100 * r.NormFloat64(), 100 * r.NormFloat64()}, assumed: 1480 + 40*r.Float64(),
	}
}

// straight returns n random points that were made with straight rays through the summer sea.
func straight(t testing.TB, n, samples int) *soundings {
	s, r := newSoundings(n), rand.New(rand.NewPCG(seed, uint64(n)))
	s.sound.Profiles = []*acoustics.Profile{summerSea.profile(t, samples, acoustics.Linear)}
	for i := range n {
		p := randomPing(r)
		s.set(i, p, vec{}.plus(p.time*p.assumed, p.dir), vec{})
	}
	return s
}
