package demo

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/optimize"
)

// finds calls f with points of the pool and how they were found, some hundred of them.
func finds(t *testing.T, f func(m *matcher, found *find)) {
	t.Helper()
	m, err := newMatcher()
	if err != nil {
		t.Fatal(err)
	}
	for u := 1.0; u < poolLengthM; u += 6 {
		for v := 1.0; v < poolWidthM; v += 4 {
			if found, ok := m.match(u, v); ok {
				f(m, &found)
			}
		}
	}
}

// minimise returns where f is least near 0, by a simplex that knows values alone.
func minimise(t *testing.T, f func(x []float64) float64, dimensions int) []float64 {
	t.Helper()
	settings := &optimize.Settings{Converger: &optimize.FunctionConverge{Absolute: 1e-18, Iterations: 60}, MajorIterations: 2000}
	found, err := optimize.Minimize(optimize.Problem{Func: f}, make([]float64, dimensions), settings, &optimize.NelderMead{SimplexSize: 0.5})
	if err != nil {
		t.Fatal(err)
	}
	return found.X
}

// A second opinion, by minimisation alone: the ray enters the water where its optical
// path is least of all ways, and the software puts the point where the squared distances
// in the images are least.
func TestFindsByMinimisation(t *testing.T) {
	checked := 0
	finds(t, func(m *matcher, f *find) {
		if f.outcome != "corrected" || f.depth < 0.3 {
			return
		}
		checked++
		var seen []sighting
		for _, c := range f.views {
			path := func(x []float64) float64 {
				at := f.bed.plus(1, vec{x[0], x[1], 0})
				at.z = poolSurface.z(at.x, at.y)
				return m.light.airPhase*at.minus(c.centre).length() + m.light.waterPhase*f.bed.minus(at).length()
			}
			off := minimise(t, path, 2)
			at := f.bed.plus(1, vec{off[0], off[1], 0})
			at.z = poolSurface.z(at.x, at.y)
			near(t, "distance of the entries", at.minus(m.light.entry(poolSurface, c.centre, f.bed)).length(), 0, 1e-6)
			seen = append(seen, c.see(at))
		}
		misses := func(x []float64) (sum float64) {
			p := f.bed.plus(1, vec{x[0], x[1], x[2]})
			for _, s := range seen {
				u, v, _ := s.camera.project(p)
				sum += squareSum(1e4*(u-s.x), 1e4*(v-s.y))
			}
			return sum
		}
		off := minimise(t, misses, 3)
		near(t, "distance of the points", f.bed.plus(1, vec{off[0], off[1], off[2]}).minus(triangulate(m.sightings, f.bed)).length(), 0, 1e-5)
	})
	if checked < 50 {
		t.Errorf("only %d points were checked", checked)
	}
}

// Sightings of one place lead back to it, from a start some metres off.
func TestTriangulateMeetsRaysThatMeet(t *testing.T) {
	t.Logf("seed %d", seed)
	r := rand.New(rand.NewPCG(seed, 3))
	cameras := poolCameras()
	for range 500 {
		p := vec{poolX + poolLengthM*r.Float64(), poolY + poolWidthM*r.Float64(), poolSurface.at.z - 5*r.Float64()}
		var sightings []sighting
		for i := range cameras {
			if cameras[i].shows(p) {
				sightings = append(sightings, cameras[i].see(p))
			}
		}
		if len(sightings) < 2 {
			t.Fatalf("%d images show %+v, want 2 or more", len(sightings), p)
		}
		start := p.plus(1, vec{2*r.Float64() - 1, 2*r.Float64() - 1, 2*r.Float64() - 1})
		near(t, "distance", triangulate(sightings, start).minus(p).length(), 0, 1e-7)
	}
}

// Straight down in one image a bed seems as deep as the indices say in the limit of small
// angles: depth over their ratio. Two images 4 m apart and 60 m up come close to that.
func TestTriangulateSeesShallow(t *testing.T) {
	m, err := newMatcher()
	if err != nil {
		t.Fatal(err)
	}
	level := plane{at: poolSurface.at}
	bed := level.at.plus(-3, vec{z: 1})
	var sightings []sighting
	for _, east := range []float64{-2, 2} {
		c := &camera{centre: level.at.plus(1, vec{east, 0, 60}), right: vec{x: 1}, top: vec{y: 1}, back: vec{z: 1}}
		sightings = append(sightings, c.see(m.light.entry(level, c.centre, bed)))
	}
	p := triangulate(sightings, bed)
	near(t, "depth", level.at.z-p.z, 3*m.light.airPhase/m.light.waterPhase, 0.002)
	near(t, "way in plan", math.Hypot(p.x-bed.x, p.y-bed.y), 0, 1e-9)
}

// Points have three views or more, none flatter than the matching takes, but for those
// of a single image; beds seem shallower than they are, and land is where it is.
func TestFinds(t *testing.T) {
	tiles, cameras, err := fillPool()
	if err != nil {
		t.Fatal(err)
	}
	if len(cameras) != 60 || len(tiles) != 2 || tiles[0].rows < 10_000 || tiles[1].rows < 10_000 {
		t.Errorf("%d cameras and %d tiles, want 60 and two with 10000 points or more each", len(cameras), len(tiles))
	}
	seen := map[string]int{}
	finds(t, func(m *matcher, f *find) {
		seen[f.outcome]++
		switch {
		case len(f.views) < leastViews && f.outcome != "few_rays":
			t.Errorf("a point that is %s has %d views", f.outcome, len(f.views))
		case f.depth > 0.1 && f.apparent.z <= f.bed.z:
			t.Errorf("a bed %g m deep seems %g m deeper", f.depth, f.bed.z-f.apparent.z)
		case f.depth < 0:
			near(t, "way of land", f.apparent.minus(f.bed).length(), 0, 0.00087) // rounding: half a millimetre times sqrt 3
		}
		for _, c := range f.views {
			if angle := c.offNadirDeg(f.bed); angle > maxOffNadirDeg+2 { // the bent ray is a little steeper
				t.Errorf("%s sees a point %g degrees off nadir", c.id, angle)
			}
		}
	})
	if seen["corrected"] < 50 || seen["dry"] < 20 {
		t.Errorf("outcomes are %v, want more", seen)
	}
}
