package geo

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/paulmach/orb"
)

// newRand returns a random source whose seed is printed if the test fails.
func newRand(t testing.TB, seed uint64) *rand.Rand {
	t.Cleanup(func() {
		if t.Failed() {
			t.Logf("seed: PCG(%d, 7)", seed)
		}
	})
	return rand.New(rand.NewPCG(seed, 7))
}

// star returns a star-shaped ring of n corners around a centre, with random radii
// from low to high.
func star(rng *rand.Rand, centre orb.Point, low, high float64, n int) orb.Ring {
	ring := make(orb.Ring, 0, n+1)
	for i := range n {
		angle := 2 * math.Pi * float64(i) / float64(n)
		r := low + (high-low)*rng.Float64()
		ring = append(ring, orb.Point{centre[0] + r*math.Cos(angle), centre[1] + r*math.Sin(angle)})
	}
	return append(ring, ring[0])
}

// box returns a rectangular ring, counter-clockwise.
func box(x0, y0, x1, y1 float64) orb.Ring {
	return orb.Ring{{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}, {x0, y0}}
}

// ringHolds is the even-odd rule over all edges of a ring, for points off them.
func ringHolds(ring orb.Ring, x, y float64) bool {
	inside := false
	for i := 1; i < len(ring); i++ {
		a, b := ring[i-1], ring[i]
		if (a[1] > y) != (b[1] > y) && x < a[0]+(b[0]-a[0])/(b[1]-a[1])*(y-a[1]) {
			inside = !inside
		}
	}
	return inside
}

// polygonHolds tells whether a point is in the outline and in no hole.
func polygonHolds(poly orb.Polygon, x, y float64) bool {
	for i, ring := range poly {
		if ringHolds(ring, x, y) != (i == 0) {
			return false
		}
	}
	return len(poly) > 0
}

// mustPanic checks that f panics with errLengths.
func mustPanic(t *testing.T, f func()) {
	t.Helper()
	defer func() {
		if got := recover(); got != errLengths {
			t.Errorf("recovered %v, want %q", got, errLengths)
		}
	}()
	f()
}

// wantError checks that err's text contains each of the words.
func wantError(t *testing.T, err error, words ...string) {
	t.Helper()
	if err == nil {
		t.Fatalf("no error, want one with %q", words)
	}
	for _, word := range words {
		if !strings.Contains(err.Error(), word) {
			t.Errorf("error %q, want it to name %q", err, word)
		}
	}
}

// geojson writes a polygon's coordinates.
func geojson(poly orb.Polygon) string {
	text := fmt.Sprintf("%v", poly) // [[[1 2] [3 4]]]
	return strings.ReplaceAll(text, " ", ",")
}
