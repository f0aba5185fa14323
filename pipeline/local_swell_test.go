package pipeline

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

// swell is 0.25 m high to either side and 60 m long, over 0.42 m; it travels with the
// speed of waves on deep water, omega^2 = g k (Airy 1845). Speed 0 stops it.
func swell(speed float64) func(x, y, utc float64) (float64, float64, float64) {
	k, omega := 2*math.Pi/60, speed*math.Sqrt(9.81*2*math.Pi/60)
	sin, cos := math.Sincos(0.6)
	return func(x, y, utc float64) (float64, float64, float64) {
		phase := k*(x*cos+y*sin) - omega*utc
		slope := 0.25 * k * math.Cos(phase)
		return 0.42 + 0.25*math.Sin(phase), slope * cos, slope * sin
	}
}

// flyOver is one pass over a square of 200 m: n surface points of class 41 with
// 2 cm noise and 2 % blunders of up to 3 m, and 4000 points of a bed 10 m down, 20
// degrees off nadir, at the times that when gives. The surface points come first.
func (c *scene) flyOver(r *rand.Rand, n int, when func(x float64) float64) (surface, bed []shot) {
	for range n {
		p := vec{200 * r.Float64(), 200 * r.Float64()}
		at := when(p[0])
		p[2], _, _ = c.surface(p[0], p[1], at)
		p[2] += 0.02 * r.NormFloat64()
		if r.Float64() < 0.02 {
			p[2] += 6*r.Float64() - 3
		}
		surface = append(surface, shot{time: at, raw: p, origin: vec{p[0], p[1], 400}})
	}
	for range 4000 {
		x, y, turn := 200*r.Float64(), 200*r.Float64(), 2*math.Pi*r.Float64()
		away, at := 400*math.Tan(20*math.Pi/180), when(x)
		z, _, _ := c.surface(x, y, at)
		bed = append(bed, c.fire(at, vec{x + away*math.Cos(turn), y + away*math.Sin(turn), z + 400}, vec{x, y, z}, 10))
	}
	return surface, bed
}

// rms returns the root mean square errors of the last rows, in z and in the plan.
func rms(t *testing.T, got table, bed []shot) (z, plan float64) {
	t.Helper()
	first := len(got.rows) - len(bed)
	for i, s := range bed {
		if outcome := got.text(t, first+i, "outcome"); outcome != "corrected" {
			t.Fatalf("seed %d: bed point %d is %s, want corrected", seed, i, outcome)
		}
		dx, dy, dz := got.number(t, first+i, "x")-s.bed[0], got.number(t, first+i, "y")-s.bed[1], got.number(t, first+i, "z")-s.bed[2]
		z += dz * dz
		plan += dx*dx + dy*dy
	}
	n := float64(len(bed))
	return math.Sqrt(z / n), math.Sqrt(plan / n)
}

// together is one cloud of surface points and bed points.
func together(surface, bed []shot) string {
	_, rest, _ := strings.Cut(cloudOf(bed, 40, asUTC), "\n")
	return cloudOf(surface, 41, asUTC) + rest
}

const swellJob = pulseJob + seaWater + "[surface.grid]\nclasses = [41]\n"

// inUTC has the cloud's times in UTC.
func inUTC(job string) string {
	return strings.Replace(job, "[output]\n", "time = \"utc\"\n[output]\n", 1)
}

func isWithin(z, plan float64) bool { return z < 0.005 && plan < 0.012 }

// 40 000 surface points hold the bed 10 m below swell within 5 mm in height and 12 mm
// in the plan.
func TestGridOfClassesUnderSwell(t *testing.T) {
	c := scene{surface: swell(0), sea: standardSea(t)}
	surface, bed := c.flyOver(newRand(2), 40_000, func(float64) float64 { return 1.9e9 })
	got := correctFiles(t, files{"raw/a.csv": together(surface, bed)}, inUTC(swellJob))
	if z, plan := rms(t, got, bed); !isWithin(z, plan) {
		t.Errorf("seed %d: the bed is %.4f m off in z and %.4f m in the plan, want within 0.005 and 0.012", seed, z, plan)
	}
	flat := correctFiles(t, files{"raw/a.csv": together(surface, bed)}, inUTC(pulseJob+seaWater+"[surface]\nlevel = 0.42\n"))
	if z, plan := rms(t, flat, bed); z < 0.03 || plan < 0.03 {
		t.Errorf("seed %d: without the swell the bed is %.4f m off in z and %.4f m in the plan, so this test shows nothing", seed, z, plan)
	}
}

// Two passes at 60 m/s, 40 s apart, over swell that moves on in between: each meets
// its own waves. A window that takes both passes together fails the same bound.
func TestGridWindowParts(t *testing.T) {
	c, r := scene{surface: swell(1), sea: standardSea(t)}, newRand(3)
	pass := func(start float64) func(float64) float64 {
		return func(x float64) float64 { return start + x/60 }
	}
	surface, bed := c.flyOver(r, 30_000, pass(1.9e9))
	surface2, bed2 := c.flyOver(r, 30_000, pass(1.9e9+40))
	cloud := together(append(surface, surface2...), append(bed, bed2...))
	for _, test := range []struct {
		window string
		want   bool
	}{{"", true}, {"window = 1e6\n", false}} {
		got := correctFiles(t, files{"raw/a.csv": cloud}, inUTC(swellJob+test.window))
		z, plan := rms(t, got, append(bed, bed2...))
		if isWithin(z, plan) != test.want {
			t.Errorf("seed %d, %q: the bed is %.4f m off in z and %.4f m in the plan, want that within 0.005 and 0.012: %t", seed, test.window, z, plan, test.want)
		}
	}
}
