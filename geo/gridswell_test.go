package geo

import (
	"math"
	"math/rand/v2"
	"testing"
)

// swell is a made-up wave on deep water: the truth of the grid's tests.
type swell struct{ level, amplitude, length, azimuth, atX, atY float64 }

var testSwell = swell{level: 0.42, amplitude: 0.25, length: 60, azimuth: 0.6, atX: 512000, atY: 7012000}

// at returns level and slopes; the wave travels with the speed of deep water,
// omega^2 = g k (Airy 1845).
func (s swell) at(x, y, t float64) (z, sx, sy float64) {
	k := 2 * math.Pi / s.length
	sin, cos := math.Sincos(s.azimuth)
	phase := k*((x-s.atX)*cos+(y-s.atY)*sin) - math.Sqrt(9.81*k)*t
	slope := s.amplitude * k * math.Cos(phase)
	return s.level + s.amplitude*math.Sin(phase), slope * cos, slope * sin
}

// points returns n surface points over a square of 200 m with 2 cm noise, and a
// share of blunders up to 3 m, upwards only or both ways.
func (s swell) points(rng *rand.Rand, n int, blunders float64, oneSided bool, when func(x float64) float64) (x, y, z, t []float64) {
	for range n {
		px, py := s.atX+200*rng.Float64(), s.atY+200*rng.Float64()
		pt := when(px)
		pz, _, _ := s.at(px, py, pt)
		pz += 0.02 * rng.NormFloat64()
		if rng.Float64() < blunders {
			b := 3 * rng.Float64()
			if !oneSided && rng.Float64() < 0.5 {
				b = -b
			}
			pz += b
		}
		x, y, z, t = append(x, px), append(y, py), append(z, pz), append(t, pt)
	}
	return x, y, z, t
}

// bedError holds root mean square errors (m): of a surface, and of a bed 10 m down seen
// 20 degrees off nadir through it.
type bedError struct{ level, slope, z, plan float64 }

// measureBed compares the bed through the true surface with the bed through the
// grid, for n rays that meet the square at the time that when gives. A laser's ray bends with
// n 1.34 and is ranged with 1.36; Snell's law is solved for the angles here, in
// the plane of ray and normal.
func measureBed(g *Grid, s swell, rng *rand.Rand, n int, when func(x float64) float64) bedError {
	var e bedError
	for range n {
		px, py := s.atX+200*rng.Float64(), s.atY+200*rng.Float64()
		at := when(px)
		z0, sx0, sy0 := s.at(px, py, at)
		tilt, around := 20*math.Pi/180, 2*math.Pi*rng.Float64()
		d := [3]float64{math.Sin(tilt) * math.Cos(around), math.Sin(tilt) * math.Sin(around), -math.Cos(tilt)}
		wet := bend(d, sx0, sy0)
		under := 10 / -wet[2]
		l, sx, sy := g.ask(px, py, at)
		e.level += (l - z0) * (l - z0)
		e.slope += (sx-sx0)*(sx-sx0) + (sy-sy0)*(sy-sy0)
		shift := 0.0 // along the ray from the true entry to the grid's
		for range 30 {
			l, sx, sy = g.ask(px+shift*d[0], py+shift*d[1], at)
			shift = (l - z0) / d[2]
		}
		seen := bend(d, sx, sy)
		left := under - shift/1.36
		var off [3]float64
		for k := range 3 {
			off[k] = shift*d[k] + left*seen[k] - under*wet[k]
		}
		e.z += off[2] * off[2]
		e.plan += off[0]*off[0] + off[1]*off[1]
	}
	for _, v := range []*float64{&e.level, &e.slope, &e.z, &e.plan} {
		*v = math.Sqrt(*v / float64(n))
	}
	return e
}

// bend returns the direction below a surface with the given slopes.
func bend(d [3]float64, sx, sy float64) [3]float64 {
	length := math.Sqrt(1 + sx*sx + sy*sy)
	down := [3]float64{sx / length, sy / length, -1 / length}
	cosIn := d[0]*down[0] + d[1]*down[1] + d[2]*down[2]
	var along [3]float64 // part of d along the surface, of length sin(in)
	for k := range 3 {
		along[k] = d[k] - cosIn*down[k]
	}
	in := math.Acos(cosIn)
	out := math.Asin(math.Sin(in) / 1.34)
	for k := range 3 {
		d[k] = math.Cos(out)*down[k] + along[k]*(math.Sin(out)/math.Sin(in))
	}
	return d
}

// still is the time of points that are all measured at once.
func still(float64) float64 { return 0 }

// pass returns the times of a flight that crosses the square along x in 3.3 s.
func pass(start float64) func(float64) float64 {
	return func(x float64) float64 { return start + (x-testSwell.atX)/60 }
}

// ask returns what Fill gives for one position and time.
func (g *Grid) ask(x, y, t float64) (level, slopeX, slopeY float64) {
	var l, sx, sy [1]float64
	g.Fill(l[:], sx[:], sy[:], []float64{x}, []float64{y}, []float64{t})
	return l[0], sx[0], sy[0]
}

// TestGridSwell holds the bed below swell, where the limits are 5 mm in height and
// 12 mm in the plan, and single blunders have no weight.
func TestGridSwell(t *testing.T) {
	rng := newRand(t, 71)
	for _, tc := range []struct {
		name     string
		blunders float64
		oneSided bool
	}{{"2 % upwards", 0.02, true}, {"2 % both ways", 0.02, false}, {"15 % upwards", 0.15, true}} {
		x, y, z, _ := testSwell.points(rng, 40_000, tc.blunders, tc.oneSided, still)
		g, err := gridOf(x, y, z, nil, GridOptions{})
		if err != nil {
			t.Fatal(err)
		}
		e := measureBed(g, testSwell, rng, 4000, still)
		if !(e.level < 0.005 && e.slope < 0.002 && e.z < 0.0015 && e.plan < 0.005) {
			t.Errorf("%s: rms errors %+v, want within 5 mm, 0.002, 1.5 mm, 5 mm", tc.name, e)
		}
	}
}

// TestGridWavelength holds what patches of a 15th of a wavelength lose of a wave: all
// points without noise.
func TestGridWavelength(t *testing.T) {
	rng := newRand(t, 76)
	var x, y, z []float64
	for range 40_000 {
		px, py := testSwell.atX+200*rng.Float64(), testSwell.atY+200*rng.Float64()
		pz, _, _ := testSwell.at(px, py, 0)
		x, y, z = append(x, px), append(y, py), append(z, pz)
	}
	g, err := gridOf(x, y, z, nil, GridOptions{Cell: testSwell.length / 15})
	if err != nil {
		t.Fatal(err)
	}
	e := measureBed(g, testSwell, rng, 4000, still)
	slope := testSwell.amplitude * 2 * math.Pi / testSwell.length
	if e.level > 0.002*testSwell.amplitude || e.slope > 0.02*slope {
		t.Errorf("rms errors %+v, want within 0.2 %% of the amplitude and 2 %% of the steepest slope", e)
	}
}

// TestGridTwoPasses: 40 s later the swell has gone on by 6.45 wavelengths. In each
// pass the bed holds, and it does not when time is left out of account.
func TestGridTwoPasses(t *testing.T) {
	rng := newRand(t, 73)
	x, y, z, at := testSwell.points(rng, 40_000, 0.02, true, pass(4.1e8))
	x2, y2, z2, at2 := testSwell.points(rng, 40_000, 0.02, true, pass(4.1e8+40))
	x, y, z, at = append(x, x2...), append(y, y2...), append(z, z2...), append(at, at2...)
	g, err := gridOf(x, y, z, at, GridOptions{Cell: 4})
	if err != nil {
		t.Fatal(err)
	}
	mixed, err := gridOf(x, y, z, at, GridOptions{Cell: 4, Window: math.Inf(1)})
	if err != nil {
		t.Fatal(err)
	}
	for _, start := range []float64{4.1e8, 4.1e8 + 40} {
		e := measureBed(g, testSwell, rng, 4000, pass(start))
		if !(e.level < 0.005 && e.z < 0.005 && e.plan < 0.012) {
			t.Errorf("pass at %v: rms errors %+v, want within 5 mm and 12 mm", start, e)
		}
		if e = measureBed(mixed, testSwell, rng, 4000, pass(start)); e.z < 0.015 || e.plan < 0.036 {
			t.Errorf("pass at %v without a window: rms errors %+v, want three times the limits", start, e)
		}
	}
	if level, _, _ := g.ask(testSwell.atX+100, testSwell.atY+100, 4.1e8+20); !math.IsNaN(level) {
		t.Errorf("level %v between the passes, want none", level)
	}
}

// TestGridSigma compares the stated errors with those found.
func TestGridSigma(t *testing.T) {
	rng := newRand(t, 74)
	x, y, z, _ := testSwell.points(rng, 40_000, 0.02, true, still)
	g, err := gridOf(x, y, z, nil, GridOptions{})
	if err != nil {
		t.Fatal(err)
	}
	x, y = x[:5000], y[:5000]
	sigma := make([]float64, len(x))
	g.FillSigma(sigma, x, y, nil)
	sum := 0.0
	for i := range x {
		want, _, _ := testSwell.at(x[i], y[i], 0)
		level, _, _ := g.ask(x[i], y[i], 0)
		sum += (level - want) / sigma[i] * ((level - want) / sigma[i]) / float64(len(x))
	}
	if r := math.Sqrt(sum); r < 0.75 || r > 1.1 { // below 1: sigma is the patches', their blend is better
		t.Errorf("rms error is %.2f of its sigma, want about 0.9", r)
	}
}

// TestGridSlopeChoice compares blended slopes with the derivative of the blended
// level, by differences over 2 mm.
func TestGridSlopeChoice(t *testing.T) {
	rng := newRand(t, 75)
	x, y, z, _ := testSwell.points(rng, 40_000, 0.02, true, still)
	g, err := gridOf(x, y, z, nil, GridOptions{})
	if err != nil {
		t.Fatal(err)
	}
	var blended, derived float64
	for range 5000 {
		px, py := testSwell.atX+20+160*rng.Float64(), testSwell.atY+20+160*rng.Float64()
		_, wantX, wantY := testSwell.at(px, py, 0)
		_, sx, sy := g.ask(px, py, 0)
		blended += (sx-wantX)*(sx-wantX) + (sy-wantY)*(sy-wantY)
		west, _, _ := g.ask(px-0.001, py, 0)
		east, _, _ := g.ask(px+0.001, py, 0)
		south, _, _ := g.ask(px, py-0.001, 0)
		north, _, _ := g.ask(px, py+0.001, 0)
		dx, dy := (east-west)/0.002-wantX, (north-south)/0.002-wantY
		derived += dx*dx + dy*dy
	}
	if !(blended < derived) {
		t.Errorf("rms error of blended slopes %v, of the derivative %v", math.Sqrt(blended/5000), math.Sqrt(derived/5000))
	}
}
