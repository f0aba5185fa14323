package geo

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// course is a made-up river along a straight line: its level over the chainage (m),
// n level points at random places with noise (m), and how many straight parts it has.
type course struct {
	name   string
	long   float64
	n      int
	noise  float64
	level  func(s float64) float64
	parts  int
	drops  []float64 // chainages of vertical drops
	missed float64   // greatest share of 12 % blunders that may count; 0: not tried
}

// stairs returns the level of pools of some length (m), with a drop (m) after each, on
// a slope.
func stairs(pool, drop, slope float64) func(float64) float64 {
	return func(s float64) float64 { return 50 - drop*math.Floor(s/pool) - slope*s }
}

// every returns the multiples of a length below long.
func every(pool, long float64) (at []float64) {
	for s := pool; s < long; s += pool {
		at = append(at, s)
	}
	return at
}

// rapids are pools at 50 m and 48 m, 600 m long, with a steep reach of 100 m between.
func rapids(s float64) float64 { return 50 - 2*min(max((s-600)/100, 0), 1) }

// straight is a slope without drops.
func straight(slope float64) func(float64) float64 { return stairs(1e9, 0, slope) }

var courses = []course{
	{"weir of 3 m between pools", 1000, 400, 0.01, stairs(500, 3, 0), 2, []float64{500}, 0.02},
	{"weir of 3 m, no noise", 1000, 400, 0, stairs(500, 3, 0), 2, []float64{500}, 0.02},
	{"weir of 0.1 m", 1000, 400, 0.01, stairs(500, 0.1, 0), 2, []float64{500}, 0.02},
	{"weir of 1 m on a slope of 0.001", 1000, 400, 0.01, stairs(500, 1, 0.001), 2, []float64{500}, 0.02},
	{"stairs of 8 pools", 2000, 600, 0.02, stairs(250, 0.8, 0), 8, every(250, 2000), 0.03},
	{"stairs of 20 pools, 10 points each", 2000, 200, 0.01, stairs(100, 1, 0), 20, every(100, 2000), 0},
	{"rapids", 1300, 500, 0.01, rapids, 3, nil, 0.02},
	{"slope of 0.001", 1000, 300, 0.01, straight(0.001), 1, nil, 0.01},
	{"slope of 0.001, few points", 1000, 50, 0.01, straight(0.001), 1, nil, 0.05},
	{"slope of 0.02", 1000, 300, 0.02, straight(0.02), 1, nil, 0},
	{"slope of 0.005", 1000, 300, 0.01, straight(0.005), 1, nil, 0.03},
	{"lake", 1000, 300, 0.02, straight(0), 1, nil, 0.02},
}

// survey measures the course: chainages, levels, and which are wrong by 0.1 to 2 m
// upwards.
func (c *course) survey(rng *rand.Rand, blunders float64) (s, z []float64, wrong []bool) {
	for range c.n {
		at := c.long * rng.Float64()
		level := c.level(at) + c.noise*rng.NormFloat64()
		isWrong := rng.Float64() < blunders
		if isWrong {
			level += 0.1 + 1.9*rng.Float64()
		}
		s, z, wrong = append(s, at), append(z, level), append(wrong, isWrong)
	}
	return s, z, wrong
}

// profileAlong fits levels along the x axis, from 0 to long, or with rising true along the
// same line drawn from its end.
func profileAlong(t *testing.T, long float64, s, z []float64, rising bool) *Profile {
	t.Helper()
	lineX := []float64{0, long}
	if rising {
		lineX = []float64{long, 0}
	}
	p, err := NewProfile(lineX, []float64{0, 0}, s, make([]float64, len(s)), z, long)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// between tells whether a chainage lies between a drop and its nearest good point on
// either side, where the place of the step is open.
func (c *course) between(at float64, s []float64, wrong []bool) bool {
	for _, d := range c.drops {
		if at == d || !slices.ContainsFunc(s, func(v float64) bool { return min(at, d) <= v && v <= max(at, d) && !wrong[slices.Index(s, v)] }) {
			return true
		}
	}
	return false
}

// few is how many times the standard error of a mean over a straight part is allowed:
// a line's error is twice that at its ends.
const few = 6

// TestProfileCourses: without blunders the rms error is a few times that of a mean over
// a straight part, and no good point is set aside; with 12 % of them 9 of 10 places
// have no more. Levels fall or rise everywhere, whichever way the line is drawn.
func TestProfileCourses(t *testing.T) {
	for _, c := range courses {
		t.Run(c.name, func(t *testing.T) {
			rng := newRand(t, 111)
			limit := few*c.noise/math.Sqrt(float64(c.n/c.parts)) + 1e-4
			for k := range 10 {
				s, z, wrong := c.survey(rng, 0)
				p := profileAlong(t, c.long, s, z, k%2 == 1)
				if e := rms(c.errors(t, p, s, wrong)); !(e <= limit) {
					t.Errorf("survey %d: rms error %.4f m, want %.4f", k, e, limit)
				}
				if f := p.Fit(); f.SetAside > c.n/200 || f.IsUneven() {
					t.Errorf("survey %d: %d good points set aside, spread %.4f, scatter %.4f", k, f.SetAside, f.Spread, f.Scatter)
				}
			}
		})
	}
}

func TestProfileCoursesWithBlunders(t *testing.T) {
	for _, c := range courses {
		if c.missed == 0 {
			continue
		}
		t.Run(c.name, func(t *testing.T) {
			rng := newRand(t, 112)
			limit := few*c.noise/math.Sqrt(float64(c.n/c.parts)) + 1e-4
			good, aside, bad, missed := 0, 0, 0, 0
			for k := range 10 {
				s, z, wrong := c.survey(rng, 0.12)
				p := profileAlong(t, c.long, s, z, k%2 == 1)
				off := c.errors(t, p, s, wrong)
				slices.Sort(off)
				if e := off[len(off)*9/10]; !(e <= limit) {
					t.Errorf("survey %d: 9 of 10 errors below %.4f m, want %.4f", k, e, limit)
				}
				for i, isAside := range p.Fit().IsAside {
					good, bad = good+count(!wrong[i]), bad+count(wrong[i])
					aside, missed = aside+count(!wrong[i] && isAside), missed+count(wrong[i] && !isAside)
				}
			}
			if float64(aside) > 0.002*float64(good) || float64(missed) > c.missed*float64(bad) {
				t.Errorf("%d of %d good points set aside, %d of %d blunders not", aside, good, missed, bad)
			}
		})
	}
}

// errors returns how far a profile is from the truth (m, magnitudes) at each m from the
// first to the last point, without the places where the step is open.
func (c *course) errors(t *testing.T, p *Profile, s []float64, wrong []bool) (off []float64) {
	t.Helper()
	first, _, _ := p.ask(slices.Min(s), 0)
	last, _, _ := p.ask(slices.Max(s), 0)
	before := first
	for at := math.Ceil(slices.Min(s)); at <= slices.Max(s); at++ {
		level, _, _ := p.ask(at, 0)
		if (level-before)*(last-first) < 0 {
			t.Fatalf("level turns at %g m", at)
		}
		before = level
		if !c.between(at, s, wrong) {
			off = append(off, math.Abs(level-c.level(at)))
		}
	}
	return off
}

func count(is bool) int {
	if is {
		return 1
	}
	return 0
}

func rms(v []float64) float64 {
	sum := 0.0
	for _, e := range v {
		sum += e * e
	}
	return math.Sqrt(sum / float64(len(v)))
}
