package correct_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct"
	"bentray/correct/acoustics"
)

// checkTruth checks all points against the simulation.
func (s *soundings) checkTruth(t *testing.T, tol float64) {
	t.Helper()
	for i, o := range s.out {
		if o != correct.Corrected {
			t.Fatalf("seed %d: point %d is %s", seed, i, o)
		}
		near(t, "x", s.dst.X[i], s.truth.X[i], tol)
		near(t, "y", s.dst.Y[i], s.truth.Y[i], tol)
		near(t, "z", s.dst.Z[i], s.truth.Z[i], tol)
		level := s.planes.Level[i] + s.planes.SlopeX[i]*(s.truth.X[i]-s.raw.X[i]) + s.planes.SlopeY[i]*(s.truth.Y[i]-s.raw.Y[i])
		near(t, "water level", s.dst.WaterLevel[i], level, tol)
		near(t, "depth", s.dst.Depth[i], s.dst.WaterLevel[i]-s.dst.Z[i], 0)
		if !math.IsNaN(s.dst.EntryLevel[i]) {
			t.Errorf("entry level is %g, want NaN", s.dst.EntryLevel[i])
		}
		if t.Failed() {
			t.Fatalf("seed %d: point %d", seed, i)
		}
	}
}

// 4001 samples of the smooth sea are within 4e-5 m/s of it.
const fine = 4001

func TestSoundingReturnsTruth(t *testing.T) {
	const n = 300
	spring, summer := springSea.profile(t, fine, acoustics.Linear), summerSea.profile(t, fine, acoustics.Linear)
	for _, row := range []struct {
		name      string
		isAssumed bool
	}{{"assumed speed", false}, {"assumed profile", true}} {
		t.Run(row.name, func(t *testing.T) {
			s, r := newSoundings(n), rand.New(rand.NewPCG(seed, 11))
			s.sound.Profiles = []*acoustics.Profile{summer, spring}
			s.sound.Profile = make([]int32, n)
			if row.isAssumed {
				s.sound.Assumed, s.sound.AssumedSpeed = spring, make([]float64, n)
			}
			for i := range n {
				p, water := randomPing(r), summerSea
				if i%4 == 0 {
					s.sound.Profile[i], water = 1, springSea
				}
				raw := vec{}.plus(p.time*p.assumed, p.dir)
				if row.isAssumed {
					raw = springSea.follow(p.depth, p.dir, p.time)
				}
				s.set(i, p, raw, water.follow(p.depth, p.dir, p.time))
			}
			s.run()
			s.checkTruth(t, 1e-5)
			s.checkAngles(t)
		})
	}
}

// checkAngles checks speeds and angles at both ends by Snell's law in the smooth sea.
func (s *soundings) checkAngles(t *testing.T) {
	t.Helper()
	for i := range s.out {
		water := summerSea
		if s.sound.Profile[i] == 1 {
			water = springSea
		}
		level := s.planes.Level[i] + s.planes.SlopeX[i]*(s.origin.X[i]-s.raw.X[i]) + s.planes.SlopeY[i]*(s.origin.Y[i]-s.raw.Y[i])
		head, _ := water.speed(level - s.origin.Z[i])
		bed, _ := water.speed(level - s.truth.Z[i])
		near(t, "speed at the head", s.dst.HeadSpeed[i], head, 1e-4)
		near(t, "speed at the bed", s.dst.BedSpeed[i], bed, 1e-4)
		near(t, "Snell's law", math.Sin(s.dst.RefractionRad[i])/bed, math.Sin(s.dst.IncidenceRad[i])/head, 1e-9)
	}
}

// Beams that were steered to sines along two axes of a tilted face, at the assumed speed: the sines
// change with the speed, the third component follows.
func TestSoundingSteered(t *testing.T) {
	const n = 300
	s, r := newSoundings(n), rand.New(rand.NewPCG(seed, 12))
	summer := summerSea.profile(t, fine, acoustics.Linear)
	s.sound.Profiles = []*acoustics.Profile{summer}
	face := newXYZ(n)
	s.sound.Face = &face
	for i := range n {
		p := randomPing(r)
		p.dir = vec{0.9 * p.dir[0], 0.9 * p.dir[1], p.dir[2]}
		p.dir = vec{}.plus(1/p.dir.length(), p.dir)
		roll, pitch, heading := 0.2*r.NormFloat64(), 0.2*r.NormFloat64(), 2*math.Pi*r.Float64()
		normal := correct.FaceNormal(roll, pitch, heading)
		face.X[i], face.Y[i], face.Z[i] = normal.X, normal.Y, normal.Z
		u := vec{normal.X, normal.Y, normal.Z}
		a := vec{0, 0, 1}.plus(-u[2], u)
		a = vec{}.plus(1/a.length(), a)
		b := vec{u[1]*a[2] - u[2]*a[1], u[2]*a[0] - u[0]*a[2], u[0]*a[1] - u[1]*a[0]}
		if p.dir.dot(u) < 0.4 {
			p.dir = u
		}
		p.time = (1 + 40*r.Float64()) / 1500
		c, _ := summerSea.speed(p.depth)
		sa, sb := p.dir.dot(a)*c/p.assumed, p.dir.dot(b)*c/p.assumed
		dir := vec{}.plus(sa, a).plus(sb, b).plus(math.Sqrt(1-sa*sa-sb*sb), u)
		s.set(i, p, vec{}.plus(p.time*p.assumed, p.dir), summerSea.follow(p.depth, dir, p.time))
	}
	s.run()
	s.checkTruth(t, 2e-5)
}

// The frame of a vessel, by hand.
func TestFaceNormal(t *testing.T) {
	const half = math.Pi / 2
	for _, row := range []struct {
		name                 string
		roll, pitch, heading float64
		want                 vec
	}{
		{"level", 0, 0, 1.234, vec{0, 0, -1}},
		{"starboard down, bow north: the face looks west", half, 0, 0, vec{-1, 0, 0}},
		{"starboard down, bow east: it looks north", half, 0, half, vec{0, 1, 0}},
		{"bow up, north: it looks north", 0, half, 0, vec{0, 1, 0}},
		{"bow up, east: it looks east", 0, half, half, vec{1, 0, 0}},
		{"port down 30 degrees, bow north", -math.Pi / 6, 0, 0, vec{0.5, 0, -math.Sqrt(3) / 2}},
	} {
		got := correct.FaceNormal(row.roll, row.pitch, row.heading)
		if (vec{got.X, got.Y, got.Z}).plus(-1, row.want).length() > 1e-15 {
			t.Errorf("%s: got %v, want %v", row.name, got, row.want)
		}
	}
}

// Where the assumption was true nothing moves, also with steered beams, turned rays and
// coordinates of millions of metres.
func TestSoundingMovesNothing(t *testing.T) {
	const n = 2000
	constant, err := acoustics.NewProfile([]float64{0, 9, 40}, []float64{1481.5, 1481.5, 1481.5}, acoustics.Linear)
	if err != nil {
		t.Fatal(err)
	}
	coarse := summerSea.profile(t, 40, acoustics.Linear)
	steps := springSea.profile(t, 40, acoustics.Steps)
	for _, row := range []struct {
		name          string
		true, assumed *acoustics.Profile
		isFlat        bool
	}{
		{"constant speed", constant, nil, false},
		{"profile", coarse, coarse, false},
		{"steps", steps, steps, false},
		{"turned rays", coarse, coarse, true},
	} {
		t.Run(row.name, func(t *testing.T) {
			s, r := newSoundings(n), rand.New(rand.NewPCG(seed, 13))
			face := newXYZ(n)
			s.sound = correct.Sound{Profiles: []*acoustics.Profile{row.true}, Assumed: row.assumed, AssumedSpeed: s.sound.AssumedSpeed, Face: &face}
			for i := range n {
				p := randomPing(r)
				p.head, p.assumed, p.sx, p.sy = vec{5e5, 6.1e6}, 1481.5, 0, 0
				raw := vec{}.plus(p.time*p.assumed, p.dir)
				if row.isFlat {
					p.depth = 20 + 5*r.Float64()
					raw = vec{60 + 60*r.Float64(), 0, 1e-3 * r.Float64()}
				}
				s.set(i, p, raw, raw)
				face.Z[i] = -1
				if row.isFlat {
					face.X[i], face.Z[i] = 1, 0
				}
			}
			s.run()
			s.checkTruth(t, 2e-9)
			turned := 0
			for _, passage := range s.dst.Passage {
				if passage&correct.Turned != 0 {
					turned++
				}
			}
			if want := map[bool]int{true: n / 2}[row.isFlat]; turned < want || !row.isFlat && turned > 0 {
				t.Errorf("seed %d: %d rays turned", seed, turned)
			}
		})
	}
}

func TestSoundingOutcomes(t *testing.T) {
	p := ping{depth: 1, dir: vec{0.6, 0, -0.8}, time: 0.02, assumed: 1500, level: 0.5}
	up := vec{0.6, 0, 0.8}
	for _, row := range []struct {
		name  string
		spoil func(s *soundings)
		want  correct.Outcome
	}{
		{"good", func(s *soundings) {}, correct.Corrected},
		{"head on the surface", func(s *soundings) { s.origin.Z[0] = 0.5 }, correct.Corrected},
		{"x NaN", func(s *soundings) { s.raw.X[0] = nan }, correct.Invalid},
		{"level NaN", func(s *soundings) { s.planes.Level[0] = nan }, correct.NoSurface},
		{"above the water", func(s *soundings) { s.raw.Z[0] = 0.6 }, correct.Dry},
		{"head above the water", func(s *soundings) { s.origin.Z[0] = 0.51 }, correct.NoOrigin},
		{"head above a tilted level", func(s *soundings) { s.planes.SlopeX[0] = 0.1 }, correct.NoOrigin},
		{"head NaN", func(s *soundings) { s.origin.Y[0] = nan }, correct.NoOrigin},
		{"head Inf", func(s *soundings) { s.origin.Z[0] = -inf }, correct.NoOrigin},
		{"no profile", func(s *soundings) { s.sound.Profile = []int32{-1} }, correct.NoWater},
		{"no profile, head above the water", func(s *soundings) { s.sound.Profile, s.origin.Z[0] = []int32{-1}, 2 }, correct.NoOrigin},
		{"up through the surface", func(s *soundings) {
			s.set(0, p, vec{}.plus(1.2, up), vec{})
			s.sound.AssumedSpeed[0] = 500 // in truth it goes three times as far
		}, correct.Grazing},
		{"ends above a tilted level", func(s *soundings) {
			s.planes.SlopeX[0], s.planes.Level[0] = -2, -12
			s.raw.Z[0], s.sound.AssumedSpeed[0] = -12.5, 1300
		}, correct.Grazing},
		{"raw point at the head", func(s *soundings) { s.raw.X[0], s.raw.Z[0] = s.origin.X[0], s.origin.Z[0] }, correct.Unsolved},
		{"speed 0", func(s *soundings) { s.sound.AssumedSpeed[0] = 0 }, correct.Unsolved},
		{"speed negative", func(s *soundings) { s.sound.AssumedSpeed[0] = -1500 }, correct.Unsolved},
		{"speed NaN", func(s *soundings) { s.sound.AssumedSpeed[0] = nan }, correct.Unsolved},
		{"head 20 km deep", func(s *soundings) { s.origin.Z[0] = -2e4 }, correct.Unsolved},
		{"range 1e200 m", func(s *soundings) { s.raw.Z[0] = -1e200 }, correct.Unsolved},
		{"assumed profile, no path", func(s *soundings) {
			s.sound.Assumed = springSea.profile(t, 5, acoustics.Linear)
			s.raw.X[0] = 1e6
		}, correct.Unsolved},
		{"behind the face", func(s *soundings) { s.sound.Face = &correct.XYZ{X: []float64{-1}, Y: []float64{0}, Z: []float64{0}} }, correct.Unsolved},
		{"beam beyond the face's plane", func(s *soundings) {
			s.sound.AssumedSpeed[0] = 800
			s.sound.Face = &correct.XYZ{X: []float64{0}, Y: []float64{0}, Z: []float64{-1}}
		}, correct.Unsolved},
	} {
		t.Run(row.name, func(t *testing.T) {
			s := newSoundings(1)
			s.sound.Profiles = []*acoustics.Profile{summerSea.profile(t, 30, acoustics.Linear)}
			s.set(0, p, vec{}.plus(p.time*p.assumed, p.dir), vec{})
			row.spoil(s)
			s.run()
			if s.out[0] != row.want {
				t.Fatalf("outcome is %s, want %s", s.out[0], row.want)
			}
			if s.out[0] != correct.Corrected {
				s.checkKept(t, row.want)
			}
		})
	}
}

// checkKept checks that point 0 kept its raw position, and that nothing was computed but what its
// outcome tells.
func (s *soundings) checkKept(t *testing.T, o correct.Outcome) {
	t.Helper()
	for k, c := range [][2]float64{{s.dst.X[0], s.raw.X[0]}, {s.dst.Y[0], s.raw.Y[0]}, {s.dst.Z[0], s.raw.Z[0]}} {
		if c[0] != c[1] && !(math.IsNaN(c[0]) && math.IsNaN(c[1])) {
			t.Errorf("coordinate %d is %g, want %g", k, c[0], c[1])
		}
	}
	for _, c := range []struct {
		name  string
		got   float64
		isSet bool
	}{
		{"depth", s.dst.Depth[0], o == correct.Dry},
		{"water level", s.dst.WaterLevel[0], o == correct.Dry},
		{"incidence", s.dst.IncidenceRad[0], o == correct.Grazing},
		{"speed at the head", s.dst.HeadSpeed[0], o == correct.Grazing},
		{"refraction", s.dst.RefractionRad[0], false},
		{"speed at the bed", s.dst.BedSpeed[0], false},
	} {
		if math.IsNaN(c.got) == c.isSet {
			t.Errorf("%s is %g", c.name, c.got)
		}
	}
	if s.dst.Passage[0] != 0 {
		t.Errorf("passage is %d, want 0", s.dst.Passage[0])
	}
}

// MarkNoHead agrees with the kernel.
func TestMarkNoHead(t *testing.T) {
	s := straight(t, 6, 40)
	s.origin.Z[1], s.origin.X[2], s.out[3] = 50, nan, correct.Invalid
	s.origin.Z[3] = nan
	correct.MarkNoHead(s.out, s.raw, s.origin, s.planes)
	want := []correct.Outcome{0, correct.NoOrigin, correct.NoOrigin, correct.Invalid, 0, 0}
	for i, o := range s.out {
		if o != want[i] {
			t.Errorf("point %d is %s, want %s", i, o, want[i])
		}
	}
}

// A ray that ends below the last sample says so.
func TestSoundingPassage(t *testing.T) {
	s := straight(t, 200, 40)
	shallow, err := acoustics.NewProfile([]float64{0, 15}, []float64{1500, 1495}, acoustics.Linear)
	if err != nil {
		t.Fatal(err)
	}
	s.sound.Profiles[0] = shallow
	s.run()
	for i, passage := range s.dst.Passage {
		level := s.planes.Level[i] + s.planes.SlopeX[i]*(s.origin.X[i]-s.raw.X[i]) + s.planes.SlopeY[i]*(s.origin.Y[i]-s.raw.Y[i])
		if want := level-s.dst.Z[i] > 15; (passage&correct.Beyond != 0) != want {
			t.Errorf("seed %d: point %d: beyond is %v at %g m", seed, i, !want, level-s.dst.Z[i])
		}
	}
}
