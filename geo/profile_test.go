package geo

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// winding returns a centreline of n vertices that winds along x, from 0 to long (m).
func winding(n int, long float64) (x, y []float64) {
	for i := range n {
		at := long * float64(i) / float64(n-1)
		x, y = append(x, 512000+at), append(y, 7012000+60*math.Sin(at/90))
	}
	return x, y
}

// riverLevel is the truth of the profile's tests: steep above, flat below, with a
// curve between; s is the chainage (m).
func riverLevel(s float64) float64 { return 30 + 1.5*math.Exp(-s/400) - 0.0002*s }

// riverSlope is its derivative.
func riverSlope(s float64) float64 { return -1.5/400*math.Exp(-s/400) - 0.0002 }

// levelPoints returns n level points within 20 m of the line, with noise and the
// share wrong by 0 to 2 m upwards.
func levelPoints(rng *rand.Rand, lineX, lineY []float64, n int, noise, wrong float64) (x, y, z []float64) {
	for range n {
		i, share := rng.IntN(len(lineX)-1), rng.Float64()
		px := lineX[i] + share*(lineX[i+1]-lineX[i]) + 10*(rng.Float64()-0.5)
		py := lineY[i] + share*(lineY[i+1]-lineY[i]) + 40*(rng.Float64()-0.5)
		s, _, _ := footOf(lineX, lineY, px, py)
		pz := riverLevel(s) + noise*rng.NormFloat64()
		if rng.Float64() < wrong {
			pz += 2 * rng.Float64()
		}
		x, y, z = append(x, px), append(y, py), append(z, pz)
	}
	return x, y, z
}

// ask returns what Fill gives for one position.
func (p *Profile) ask(x, y float64) (level, slopeX, slopeY float64) {
	var l, sx, sy [1]float64
	p.Fill(l[:], sx[:], sy[:], []float64{x}, []float64{y})
	return l[0], sx[0], sy[0]
}

// TestProfileRiver compares with the river's truth, at positions found by looking at
// all segments; positions lie between the first and last level point. The profile's
// straight reaches follow the curve to what the noise hides, 1 mm at least.
func TestProfileRiver(t *testing.T) {
	lineX, lineY := winding(400, 1500)
	for _, tc := range []struct {
		name               string
		n                  int
		noise, wrong       float64
		level, slope       float64 // greatest rms error
		asideLow, asideTop int
	}{
		{"no noise", 300, 0, 0, 1e-3, 2.5e-4, 0, 0},
		{"1 cm", 300, 0.01, 0, 0.006, 4e-4, 0, 3},
		{"4 mm and 12 % blunders", 400, 0.004, 0.12, 0.004, 5e-4, 30, 65},
		{"2 cm and 15 %", 2500, 0.02, 0.15, 0.006, 3e-4, 300, 400},
		{"2 cm and 15 %, few points", 200, 0.02, 0.15, 0.015, 5e-4, 20, 40},
	} {
		t.Run(tc.name, func(t *testing.T) {
			rng := newRand(t, 91)
			x, y, z := levelPoints(rng, lineX, lineY, tc.n, tc.noise, tc.wrong)
			p, err := NewProfile(lineX, lineY, x, y, z, 100)
			if err != nil {
				t.Fatal(err)
			}
			var level, slope float64
			const n = 2000
			for count := 0; count < n; {
				px, py := 512000+1500*rng.Float64(), 7012000+60*(rng.Float64()-0.5)
				s, _, seg := footOf(lineX, lineY, px, py)
				if s < p.fit.First || s > p.fit.Last {
					continue
				}
				count++
				l, sx, sy := p.ask(px, py)
				long := math.Hypot(lineX[seg+1]-lineX[seg], lineY[seg+1]-lineY[seg])
				dx, dy := sx-riverSlope(s)*(lineX[seg+1]-lineX[seg])/long, sy-riverSlope(s)*(lineY[seg+1]-lineY[seg])/long
				level += (l - riverLevel(s)) * (l - riverLevel(s)) / n
				slope += (dx*dx + dy*dy) / n
			}
			if f := p.Fit(); !f.Falling || f.Beyond != 0 || f.SetAside < tc.asideLow || f.SetAside > tc.asideTop || f.Sigma > 1.4*tc.noise+scaleFloor {
				t.Errorf("falling %v, beyond %d, set aside %d, sigma %v", f.Falling, f.Beyond, f.SetAside, f.Sigma)
			}
			if e, s := math.Sqrt(level), math.Sqrt(slope); e > tc.level || s > tc.slope {
				t.Errorf("rms error of level %.5f, slope %.6f, want within %v, %v", e, s, tc.level, tc.slope)
			}
		})
	}
}

// TestProfileSlope: along a curve that 400 points with 1 cm of noise hide, reaches meet in
// bends and not in steps of a few metres, which would be steeper than the river.
func TestProfileSlope(t *testing.T) {
	rng := newRand(t, 113)
	c := course{long: 1500, n: 400, noise: 0.01, level: riverLevel}
	var off []float64
	for range 20 {
		along, z, _ := c.survey(rng, 0)
		p := profileAlong(t, c.long, along, z, false)
		for at := 10.5; at < 1490; at++ {
			_, slope, _ := p.ask(at, 0)
			off = append(off, slope-riverSlope(at))
		}
	}
	if r := rms(off); r > 2.5e-4 {
		t.Errorf("rms error of slope %.6f, want within 0.00025", r)
	}
}

// TestProfileSigma compares the stated errors with those found over many surveys: they
// are right where the river falls evenly, and half of the true ones where its fall
// changes all the way, since they do not know of what is not straight.
func TestProfileSigma(t *testing.T) {
	for _, tc := range []struct {
		name      string
		level     func(s float64) float64
		low, high float64
	}{
		{"even", straight(0.001), 0.8, 1.2},
		{"changing", riverLevel, 0.8, 2.2},
	} {
		rng := newRand(t, 92)
		var off []float64
		for range 40 {
			c := course{long: 1500, n: 200, noise: 0.01, level: tc.level}
			along, z, _ := c.survey(rng, 0)
			p := profileAlong(t, c.long, along, z, false)
			for at := 100.0; at < 1400; at += 100 {
				level, _, _ := p.ask(at, 0)
				var sigma [1]float64
				p.FillSigma(sigma[:], []float64{at}, []float64{0})
				off = append(off, (level-tc.level(at))/sigma[0])
			}
		}
		if r := rms(off); r < tc.low || r > tc.high {
			t.Errorf("%s: rms error is %.2f of its sigma, want %g to %g", tc.name, r, tc.low, tc.high)
		}
	}
}

// TestProfileByHand has a line that runs 100 m east, then 100 m north, and levels
// that fall by 1 in 100, then by 2 in 100; drawn from below it rises.
func TestProfileByHand(t *testing.T) {
	lineX, lineY := []float64{0, 100, 100, 100}, []float64{0, 0, 0, 100}
	x, y, z := []float64{0, 50, 100, 100, 100, 90, 50}, []float64{3, 0, -4, 50, 100, 100, 500}, []float64{10, 9.5, 9, 8, 7, 7, 3}
	none := math.NaN()
	for _, up := range []bool{false, true} {
		if up {
			lineX, lineY = []float64{100, 100, 0}, []float64{100, 0, 0}
		}
		p, err := NewProfile(lineX, lineY, x, y, z, 30)
		if err != nil {
			t.Fatal(err)
		}
		for _, tc := range []struct {
			name                string
			x, y, level, sx, sy float64
		}{
			{"on the line", 25, 0, 9.75, -0.01, 0},
			{"off the line", 25, -30, 9.75, -0.01, 0},
			{"just farther than reach", 25, -30.001, none, none, none},
			{"second part", 110, 75, 7.5, 0, -0.02},
			{"before its start, within reach", -18, 24, 10, 0, 0},
			{"before its start, farther", -18.01, 24, none, none, none},
			{"after its end", 100, 130, 7, 0, 0},
			{"after its end, farther", 100, 130.01, none, none, none},
			{"NaN", none, 5, none, none, none},
			{"infinite", 5, math.Inf(-1), none, none, none},
		} {
			level, sx, sy := p.ask(tc.x, tc.y)
			if !near(level, tc.level, 1e-12) || !near(sx, tc.sx, 1e-12) || !near(sy, tc.sy, 1e-12) {
				t.Errorf("%s (rising %v): %v %v %v, want %v %v %v", tc.name, up, level, sx, sy, tc.level, tc.sx, tc.sy)
			}
			var sigma [1]float64
			p.FillSigma(sigma[:], []float64{tc.x}, []float64{tc.y})
			if math.IsNaN(sigma[0]) != math.IsNaN(tc.level) {
				t.Errorf("%s: sigma %v", tc.name, sigma[0])
			}
		}
		f := p.Fit()
		if f.Falling == up || f.Beyond != 1 || f.SetAside != 0 || f.Knots != 6 || !math.IsNaN(f.Residuals[6]) || !math.IsNaN(f.Chainage[6]) {
			t.Errorf("fit %+v", f)
		}
		for i, r := range f.Residuals[:6] {
			if math.Abs(r) > 1e-12 {
				t.Errorf("point %d: residual %v", i, r)
			}
		}
	}
}

// near tells whether two numbers differ by no more than within, or are both NaN.
func near(a, b, within float64) bool {
	return math.Abs(a-b) <= within || math.IsNaN(a) && math.IsNaN(b)
}

// TestProfileTies: inside a bend, at equal distances, the part nearer to the start
// counts, and at a vertex the segment before it, whatever was asked before.
func TestProfileTies(t *testing.T) {
	p, err := NewProfile([]float64{0, 100, 100}, []float64{0, 0, 100}, []float64{0, 100, 100}, []float64{0, 0, 100}, []float64{10, 9, 7}, 50)
	if err != nil {
		t.Fatal(err)
	}
	x, y := []float64{80, 100, 60, 80, 110, 100, 110}, []float64{20, 60, 0, 20, -10, 70, -10}
	level, sx, sy := make([]float64, 7), make([]float64, 7), make([]float64, 7)
	p.Fill(level, sx, sy, x, y)
	for _, i := range []int{0, 3} { // 20 m from either part: chainage 80
		if want, _, _ := p.ask(80, 0); level[i] != want || sy[i] != 0 || sx[i] >= 0 {
			t.Errorf("inside the bend: %v %v %v, want level %v and a slope along x", level[i], sx[i], sy[i], want)
		}
	}
	for _, i := range []int{4, 6} {
		if level[i] != 9 || sy[i] != 0 || sx[i] >= 0 {
			t.Errorf("outside the bend: %v %v %v, want level 9 and a slope along x", level[i], sx[i], sy[i])
		}
	}
}

// TestProfileLevelEnds: levels hold for reach along the line, then there is none.
func TestProfileLevelEnds(t *testing.T) {
	p, err := NewProfile([]float64{0, 1000}, []float64{0, 0}, []float64{400, 600}, []float64{0, 0}, []float64{3, 2}, 50)
	if err != nil {
		t.Fatal(err)
	}
	for _, tc := range []struct{ x, level float64 }{
		{349.9, math.NaN()}, {350, 3}, {400, 3}, {500, 2.5}, {600, 2}, {650, 2}, {650.1, math.NaN()},
	} {
		if level, _, _ := p.ask(tc.x, 0); !near(level, tc.level, 1e-12) {
			t.Errorf("at %v: %v, want %v", tc.x, level, tc.level)
		}
	}
}

// TestProfileShapes: a lake is level, and a weir between few points keeps its drop.
func TestProfileShapes(t *testing.T) {
	rng := newRand(t, 93)
	lineX, lineY := []float64{0, 1000}, []float64{0, 0}
	var x, y, z []float64
	for range 500 {
		x, y, z = append(x, 1000*rng.Float64()), append(y, 0), append(z, 12+0.01*rng.NormFloat64())
	}
	lake, err := NewProfile(lineX, lineY, x, y, z, 50)
	if err != nil {
		t.Fatal(err)
	}
	for at := 0.0; at <= 1000; at += 50 {
		if level, sx, _ := lake.ask(at, 10); math.Abs(level-12) > 0.006 || math.Abs(sx) > 3e-4 {
			t.Errorf("lake at %v: level %v, slope %v", at, level, sx)
		}
	}
	x, z = []float64{100, 300, 498, 502, 700}, []float64{10, 9.9, 9.8, 6.5, 6.4}
	weir, err := NewProfile(lineX, lineY, x, make([]float64, 5), z, 500)
	if err != nil {
		t.Fatal(err)
	}
	for i := range x {
		if level, _, _ := weir.ask(x[i], 0); math.Abs(level-z[i]) > 1e-12 {
			t.Errorf("weir at %v: level %v, want %v", x[i], level, z[i])
		}
	}
	last := math.Inf(1)
	for at := 0.0; at <= 1000; at++ {
		level, _, _ := weir.ask(at, 0)
		if level > last {
			t.Errorf("weir rises at %v", at)
		}
		last = level
	}
}

func TestNewProfileRefuses(t *testing.T) {
	lineX, lineY := []float64{0, 100}, []float64{0, 0}
	x, y, z := []float64{10, 20, 30}, []float64{0, 0, 90}, []float64{3, 2, 1}
	for _, tc := range []struct {
		name         string
		lineX, lineY []float64
		n            int
		reach        float64
		words        []string
	}{
		{"no reach", lineX, lineY, 3, 0, []string{"reach is 0 m"}},
		{"reach NaN", lineX, lineY, 3, math.NaN(), []string{"reach is NaN"}},
		{"endless reach", lineX, lineY, 3, math.Inf(1), []string{"reach is +Inf"}},
		{"one vertex", lineX[:1], lineY[:1], 3, 50, []string{"less than 2 different vertices"}},
		{"no vertex", nil, nil, 3, 50, []string{"less than 2 different vertices"}},
		{"one vertex twice", []float64{5, 5}, []float64{5, 5}, 3, 50, []string{"less than 2 different vertices"}},
		{"vertex NaN", []float64{5, math.NaN()}, lineY, 3, 50, []string{"vertex 2", "not finite"}},
		{"no points", lineX, lineY, 0, 50, []string{"0 of 0 level points", "at least 2"}},
		{"one point", lineX, lineY, 1, 50, []string{"1 of 1 level points"}},
		{"one point in reach", lineX, lineY, 3, 15, nil},
	} {
		_, err := NewProfile(tc.lineX, tc.lineY, x[:tc.n], y[:tc.n], z[:tc.n], tc.reach)
		if tc.words == nil {
			if err != nil {
				t.Errorf("%s: %v", tc.name, err)
			}
			continue
		}
		if err == nil {
			t.Errorf("%s: no error", tc.name)
			continue
		}
		wantError(t, err, tc.words...)
	}
	z[1] = math.Inf(1)
	_, err := NewProfile(lineX, lineY, x, y, z, 50)
	var fault *RecordError
	if !errors.As(err, &fault) || fault.Index != 1 {
		t.Errorf("error %v, want record 2 named", err)
	}
	mustPanic(t, func() { _, _ = NewProfile(lineX, lineY[:1], x, y, z, 50) })
	mustPanic(t, func() { _, _ = NewProfile(lineX, lineY, x, y, z[:2], 50) })
	p := new(Profile)
	mustPanic(t, func() { p.Fill(x, y, z, x, y[:1]) })
	mustPanic(t, func() { p.FillSigma(x, y, z[:1]) })
}

func TestProfileAllocations(t *testing.T) {
	rng := newRand(t, 95)
	lineX, lineY := winding(400, 1500)
	x, y, z := levelPoints(rng, lineX, lineY, 300, 0.01, 0)
	p, err := NewProfile(lineX, lineY, x, y, z, 100)
	if err != nil {
		t.Fatal(err)
	}
	level, sx, sy := make([]float64, len(x)), make([]float64, len(x)), make([]float64, len(x))
	if n := testing.AllocsPerRun(10, func() { p.Fill(level, sx, sy, x, y); p.FillSigma(level, x, y) }); n != 0 {
		t.Errorf("%v allocations, want 0", n)
	}
}
