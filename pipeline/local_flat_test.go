package pipeline

import (
	"fmt"
	"math"
	"testing"
)

// steepSwell runs along x: 2 m high to either side and 40 m long, so 17 degrees steep
// at most, and linear between nodes 1 m apart.
func steepSwell(x, _, _ float64) (z, slopeX, slopeY float64) {
	node := func(x float64) float64 { return 2 * math.Sin(2*math.Pi*x/40) }
	left := math.Floor(x)
	slope := node(left+1) - node(left)
	return node(left) + slope*(x-left), slope, 0
}

// meetFirst steps down the ray from above all crests, 1 cm at a time, until it is below the
// surface, and halves the last step. It also tells how often the straight ray crosses the
// surface down to a depth.
func (c *scene) meetFirst(origin, d vec, depth float64) (entry vec, crossings int) {
	const step = 0.01
	isBelow := func(s float64) bool {
		p := origin.plus(s, d)
		z, _, _ := c.surface(p[0], p[1], 0)
		return p[2] < z
	}
	first, was := 0.0, false
	for s := (2.1 - origin[2]) / d[2]; s < (-depth-origin[2])/d[2]; s += step {
		if isBelow(s) != was {
			was = !was
			if crossings++; crossings == 1 {
				first = s
			}
		}
	}
	low, high := first-step, first
	for range 60 {
		if mid := (low + high) / 2; isBelow(mid) {
			high = mid
		} else {
			low = mid
		}
	}
	return origin.plus(low, d), crossings
}

// Rays at 4 to 20 degrees from the horizontal over swell that is up to 17 degrees steep:
// many cross it three times before they come to the apparent point. A point is corrected
// from the first crossing, or unsolved; from a later one never.
func TestFlatRaysOverSteepSwell(t *testing.T) {
	c, r := scene{surface: steepSwell, sea: standardSea(t)}, newRand(21)
	var shots []shot
	var crossings []int
	for range 3000 {
		turn, elevation := 0.6*(r.Float64()-0.5), (4+16*r.Float64())*math.Pi/180
		d := vec{math.Cos(turn) * math.Cos(elevation), math.Sin(turn) * math.Cos(elevation), -math.Sin(elevation)}
		origin := vec{80 * (r.Float64() - 0.5), 0, 0}.plus(-60/-d[2], d)
		entry, _ := c.meetFirst(origin, d, 2.1)
		s := c.enter(0, origin, d, entry, 0.5+40*r.Float64())
		_, n := c.meetFirst(origin, d, -s.raw[2])
		if z, _, _ := steepSwell(s.raw[0], 0, 0); s.raw[2] < z {
			shots, crossings = append(shots, s), append(crossings, n)
		}
	}
	var nodes [][]float64
	for x := -150.0; x <= 150; x++ {
		z, _, _ := steepSwell(x, 0, 0)
		nodes = append(nodes, []float64{x, -90, z}, []float64{x, 90, z})
	}
	f := files{"raw/a.csv": cloudOf(shots, 40, nil), "swell.csv": lines("x,y,z", nodes...)}
	got := correctFiles(t, f, inNanometres(pulseJob)+seaWater+"[limits]\nmax_incidence = 89.99\n[surface]\nlevel = 0\n[surface.separation]\nfile = \"swell.csv\"\n")
	counts := map[string]int{}
	for i, s := range shots {
		outcome := got.text(t, i, "outcome")
		counts[fmt.Sprintf("%s, several %t", outcome, crossings[i] > 1)]++
		if outcome != "corrected" {
			continue
		}
		for k, name := range []string{"x", "y", "z"} {
			near(t, i, name, got.number(t, i, name), s.bed[k], 1e-5)
		}
	}
	if counts["corrected, several false"] < 1500 || counts["corrected, several true"] < 100 || counts["unsolved, several true"] < 100 {
		t.Errorf("seed %d: by outcome, and whether rays cross several times, there are %v points", seed, counts)
	}
}
