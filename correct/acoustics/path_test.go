package acoustics_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct/acoustics"
)

// The path to where a random ray ended is found, and a ray launched along it for its time ends
// there. A ray that did not turn is the only direct one, so the time is its time.
func TestBetween(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 3))
	turned, direct := 0, 0
	for i := range 6000 {
		p, _, _ := random(t, r, 2+r.IntN(40), acoustics.Interpolation(i%2))
		from, time, angle := 0.5+50*r.Float64(), 1e-4+0.06*r.Float64(), math.Pi*r.Float64()
		if i%3 == 0 {
			angle = 80*degree + 20*degree*r.Float64()
		}
		sin, cos := math.Sincos(angle)
		a := p.Trace(from, sin, cos, time)
		if a.Fate != acoustics.Arrived {
			continue
		}
		path, ok := p.Between(from, a.DepthM, a.RunM)
		if !ok {
			if !a.Turned {
				t.Fatalf("seed %d: no path from %g m at cosine %g to %+v", seed, from, cos, a)
			}
			continue
		}
		if a.Turned {
			turned++
		} else {
			direct++
			near(t, "time", path.TimeS, time, 1e-13)
		}
		b := p.Trace(from, path.Sin, path.Cos, path.TimeS)
		near(t, "length of the direction", math.Hypot(path.Sin, path.Cos), 1, 1e-14)
		near(t, "x", b.RunM, a.RunM, 1e-9)
		near(t, "z", b.DepthM, a.DepthM, 1e-9)
		if t.Failed() {
			t.Fatalf("seed %d: from %g m at cosine %g for %g s, arrival %+v, path %+v", seed, from, cos, time, a, path)
		}
	}
	if turned < 100 || direct < 2000 {
		t.Errorf("seed %d: %d turned and %d direct paths, want 100 and 2000 at least", seed, turned, direct)
	}
}

// Fermat: the direct path is quicker than the straight line and than any detour of it by a
// bend half-way. Times of straight lines are summed over thin slices.
func TestBetweenIsQuickest(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 4))
	straight := func(p *acoustics.Profile, z0, z1, run float64) float64 {
		const slices = 4000
		sum := 0.0
		for i := range slices {
			sum += 1 / p.Speed(z0+(z1-z0)*(float64(i)+0.5)/slices)
		}
		return math.Hypot(z1-z0, run) * sum / slices
	}
	for range 40 {
		p, _, _ := random(t, r, 2+r.IntN(10), acoustics.Linear)
		from, to, run := 1+10*r.Float64(), 25+20*r.Float64(), 30*r.Float64()
		path, ok := p.Between(from, to, run)
		if !ok || path.Turned {
			t.Fatalf("seed %d: no direct path from %g to %g m over %g m", seed, from, to, run)
		}
		for _, off := range []float64{0, -1, 1, 3} {
			way := straight(p, from, (from+to)/2, run/2+off) + straight(p, (from+to)/2, to, run/2-off)
			if !(way > path.TimeS-1e-12) {
				t.Errorf("seed %d: %g s by a bend of %g m, %g s by the path", seed, way, off, path.TimeS)
			}
		}
	}
}

func TestBetweenLevel(t *testing.T) {
	still := profile(t, []float64{0}, []float64{1500}, acoustics.Linear)
	if path, ok := still.Between(7, 7, 30); !ok || path != (acoustics.Path{Sin: 1, TimeS: 0.02}) {
		t.Errorf("path along a layer is %+v, %v", path, ok)
	}
	// One arc of a circle of radius 1 / (p g) about the depth of speed 0: the half chord is
	// 15 m, so that tan of the launch grazing angle is g 15 / c.
	bent := profile(t, []float64{0, 100}, []float64{1500, 1520}, acoustics.Linear)
	path, ok := bent.Between(50, 50, 30)
	graze := math.Atan(0.2 * 15 / 1510)
	if !ok || !path.Turned {
		t.Fatalf("path is %+v, %v, want a turned one", path, ok)
	}
	near(t, "grazing angle", math.Atan2(path.Cos, path.Sin), graze, 1e-14)
	near(t, "time", path.TimeS, 2/0.2*math.Atanh(math.Sin(graze)), 1e-15)
	// The mirror image: the faster water is above.
	bent = profile(t, []float64{0, 100}, []float64{1520, 1500}, acoustics.Linear)
	path, ok = bent.Between(50, 50, 30)
	near(t, "grazing angle upward", math.Atan2(path.Cos, path.Sin), -graze, 1e-14)
	if !ok || !path.Turned {
		t.Errorf("path is %+v, %v, want a turned one", path, ok)
	}
}

// Total reflection at a step makes a mirror: the image of the end lies behind it.
func TestBetweenReflected(t *testing.T) {
	p := profile(t, []float64{0, 10}, []float64{1450, 1500}, acoustics.Steps)
	const run = 60.0
	if path, ok := p.Between(4, 4, run); !ok || path.Turned {
		t.Errorf("path along the layer is %+v, %v", path, ok)
	}
	// From below the step the same points have a way over faster water only: direct.
	path, ok := p.Between(4, 12, run)
	a := p.Trace(4, path.Sin, path.Cos, path.TimeS)
	if !ok || path.Turned {
		t.Fatalf("path is %+v, %v, want a direct one", path, ok)
	}
	near(t, "x", a.RunM, run, 1e-9)
	near(t, "z", a.DepthM, 12, 1e-9)
}

func TestBetweenNone(t *testing.T) {
	p := profile(t, []float64{0, 50}, []float64{1500, 1490}, acoustics.Linear)
	for _, row := range []struct {
		name          string
		from, to, run float64
	}{
		{"the same point", 5, 5, 0},
		{"above the water", -1, 5, 3},
		{"to above the water", 5, -1, 3},
		{"run negative", 5, 7, -3},
		{"depth NaN", nan, 7, 3},
		{"run NaN", 5, 7, nan},
		{"run Inf", 5, 7, inf},
		{"in a shadow", 5, 5.1, 5000},
	} {
		if path, ok := p.Between(row.from, row.to, row.run); ok {
			t.Errorf("%s: path is %+v, want none", row.name, path)
		}
	}
	if _, ok := profile(t, []float64{4}, []float64{1500}, acoustics.Linear).Between(5, 5, 0); ok {
		t.Error("a point has a path to itself")
	}
}

// Two exercises of an ocean-acoustics textbook (testdata/sound_paths.json): the range at which a ray
// turns at the receiver's depth, sqrt(c2^2 - c1^2) / g, and the steepest ray that the axis of a
// channel keeps below its upper edge, acos(c axis / c edge).
func TestTextbookExercises(t *testing.T) {
	p := profile(t, []float64{0, 6000}, []float64{1470, 1560}, acoustics.Linear)
	sin := 1500. / 1530
	cos := math.Sqrt(1 - sin*sin)
	a := p.Trace(2000, sin, cos, math.Atanh(cos)/0.015)
	near(t, "range at the vertex", a.RunM, 20099.751242241782, 1e-6)
	near(t, "depth of the vertex", a.DepthM, 4000, 1e-6)

	channel := profile(t, []float64{0, 800, 1400, 5400}, []float64{1500, 1514, 1470, 1562}, acoustics.Linear)
	for _, row := range []struct {
		graze float64
		kept  bool
	}{{13.846, true}, {13.849, false}} {
		sin, cos := math.Sincos((90 + row.graze) * degree)
		highest := inf
		for time := 1.0; time < 6; time += 0.05 {
			if a := channel.Trace(1400, sin, cos, time); a.Fate == acoustics.Surfaced {
				highest = 0
			} else {
				highest = min(highest, a.DepthM)
			}
		}
		if kept := highest > 800; kept != row.kept {
			t.Errorf("grazing angle %g degrees: kept is %v, want %v", row.graze, kept, row.kept)
		}
	}
}
