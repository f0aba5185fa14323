package geo

import (
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/paulmach/orb"
)

// comb returns a ring with n long teeth that point along y, or along x, or aslant.
func comb(n int, axis orb.Point) orb.Ring {
	ring := orb.Ring{{-1, -1}}
	for i := range n {
		x := float64(i)
		ring = append(ring, orb.Point{x, -1}, orb.Point{x, 1e5}, orb.Point{x + 0.5, 1e5}, orb.Point{x + 0.5, -1})
	}
	ring = append(ring, orb.Point{float64(n), -1}, orb.Point{float64(n), -2}, orb.Point{-1, -2}, orb.Point{-1, -1})
	for i, p := range ring {
		ring[i] = orb.Point{p[0]*axis[1] + p[1]*axis[0], p[1]*axis[1] - p[0]*axis[0]}
	}
	return ring
}

func TestRingsThatDoNotCross(t *testing.T) {
	rng := newRand(t, 31)
	for _, tc := range []struct {
		name string
		ring orb.Ring
	}{
		{"triangle", orb.Ring{{0, 0}, {1, 0}, {0, 1}, {0, 0}}},
		{"star", star(rng, orb.Point{512000, 7012000}, 1, 900, 2000)},
		{"repeated position", orb.Ring{{0, 0}, {1, 0}, {1, 0}, {1, 1}, {0, 0}}},
		{"one position", orb.Ring{{3, 3}, {3, 3}, {3, 3}, {3, 3}}},
		{"spike", orb.Ring{{0, 0}, {4, 0}, {4, 2}, {9, 2}, {4, 2}, {4, 4}, {0, 0}}},
		{"touches itself at a corner", orb.Ring{{0, 0}, {2, 1}, {4, 0}, {4, 2}, {2, 1}, {0, 2}, {0, 0}}},
		{"touches an edge", orb.Ring{{0, 0}, {4, 0}, {4, 4}, {2, 0}, {0, 4}, {0, 0}}},
		{"touches a sloped edge as well as rounding allows", orb.Ring{{7e6, 7e6}, {7e6 + 3, 7e6 + 1}, {7e6 + 3, 7e6 + 4}, {7e6 + 0.3, 7e6 + 0.1}, {7e6, 7e6 + 4}, {7e6, 7e6}}},
		{"upright comb", comb(2000, orb.Point{0, 1})},
		{"lying comb", comb(2000, orb.Point{1, 0})},
	} {
		if err := checkRing(tc.ring); err != nil {
			t.Errorf("%s: %v", tc.name, err)
		}
	}
}

func TestRingsThatCross(t *testing.T) {
	for _, tc := range []struct {
		name string
		ring orb.Ring
		want []string
	}{
		{"bow tie far from the origin", orb.Ring{{512000, 7012000}, {512002, 7012002}, {512002, 7012000}, {512000, 7012002}, {512000, 7012000}}, []string{"edges 1 and 3", "512001.000 7012001.000"}},
		{"loop", orb.Ring{{0, 0}, {9, 0}, {9, 9}, {4, 9}, {4, -3}, {3, -3}, {3, 9}, {0, 9}, {0, 0}}, []string{"edges 1 and", "0.000"}},
		{"by a millimetre", orb.Ring{{7e6, 7e6}, {7e6 + 4, 7e6}, {7e6 + 4, 7e6 + 4}, {7e6 + 2, 7e6 - 0.001}, {7e6, 7e6 + 4}, {7e6, 7e6}}, []string{"edges 1 and", "7000000.000"}},
	} {
		wantError(t, checkRing(tc.ring), tc.want...)
		slices.Reverse(tc.ring)
		wantError(t, checkRing(tc.ring), "cross")
	}
}

// TestCrossingAgainstAllPairs moves corners of star-shaped rings at random and
// compares with a test of all pairs of edges by a crossing's parameters.
func TestCrossingAgainstAllPairs(t *testing.T) {
	rng := newRand(t, 32)
	crossed := 0
	for try := range 400 {
		ring := star(rng, orb.Point{512000, 7012000}, 60, 100, 8+rng.IntN(60))
		for range rng.IntN(5) {
			k := 1 + rng.IntN(len(ring)-2)
			ring[k][0] += 40 * rng.NormFloat64()
			ring[k][1] += 40 * rng.NormFloat64()
		}
		want := crossesAnywhere(ring)
		if want {
			crossed++
		}
		if err := checkRing(ring); (err != nil) != want {
			t.Fatalf("try %d: %v, want a crossing: %v\n%v", try, err, want, ring)
		}
	}
	if crossed < 100 || crossed > 300 {
		t.Errorf("%d of 400 rings cross, want a fair share of both", crossed)
	}
}

// crossesAnywhere solves for the crossing of every pair of edges.
func crossesAnywhere(ring orb.Ring) bool {
	for i := 1; i < len(ring); i++ {
		for j := 1; j < i; j++ {
			a, b, c, d := ring[i-1], ring[i], ring[j-1], ring[j]
			ux, uy, vx, vy := b[0]-a[0], b[1]-a[1], d[0]-c[0], d[1]-c[1]
			det := ux*vy - uy*vx
			s := ((c[0]-a[0])*vy - (c[1]-a[1])*vx) / det
			u := ((c[0]-a[0])*uy - (c[1]-a[1])*ux) / det
			if s > 1e-9 && s < 1-1e-9 && u > 1e-9 && u < 1-1e-9 {
				return true
			}
		}
	}
	return false
}

func TestRingLimits(t *testing.T) {
	for _, v := range []float64{math.NaN(), math.Inf(1), math.Inf(-1), 1.1e12} {
		ring := box(0, 0, 1, 1)
		ring[2][1] = v
		wantError(t, checkRing(ring), "position 3", "finite")
	}
	if err := checkPolygon(nil); err == nil || !strings.Contains(err.Error(), "empty") {
		t.Errorf("empty polygon: %v", err)
	}
}

func BenchmarkCheckRing(b *testing.B) {
	rng := newRand(b, 33)
	for _, bench := range []struct {
		name string
		ring orb.Ring
	}{
		{"coast", coast(rng, orb.Point{512000, 7012000}, 20000, 100_000)},
		{"upright comb", comb(25_000, orb.Point{0, 1})},
		{"lying comb", comb(25_000, orb.Point{1, 0})},
		{"slanted comb", comb(2_500, orb.Point{0.6, 0.8})},
	} {
		b.Run(bench.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if err := checkRing(bench.ring); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(bench.ring)), "ns/vertex")
		})
	}
}

// coast returns a rugged ring of n corners about a centre: a circle of the radius
// with bays upon bays.
func coast(rng interface{ Float64() float64 }, centre orb.Point, radius float64, n int) orb.Ring {
	var phase [12]float64
	for k := range phase {
		phase[k] = 2 * math.Pi * rng.Float64()
	}
	ring := make(orb.Ring, 0, n+1)
	for i := range n {
		angle, r := 2*math.Pi*float64(i)/float64(n), radius
		for k, p := range phase {
			r += 0.15 * radius * math.Exp2(-0.9*float64(k)) * math.Sin(angle*math.Exp2(float64(k)+1)+p)
		}
		ring = append(ring, orb.Point{centre[0] + r*math.Cos(angle), centre[1] + r*math.Sin(angle)})
	}
	return append(ring, ring[0])
}
