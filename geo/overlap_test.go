package geo

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/paulmach/orb"
)

// zonesOf returns one zone for each polygon.
func zonesOf(polys ...orb.Polygon) []Zone {
	zones := make([]Zone, len(polys))
	for k, poly := range polys {
		zones[k] = Zone{Name: fmt.Sprint(k), Polygons: []orb.Polygon{poly}}
	}
	return zones
}

// moved turns polygons by an angle and moves them.
func moved(polys []orb.Polygon, angle, east, north float64) []orb.Polygon {
	sin, cos := math.Sincos(angle)
	out := make([]orb.Polygon, len(polys))
	for k, poly := range polys {
		out[k] = poly.Clone()
		for _, ring := range out[k] {
			for i, p := range ring {
				ring[i] = orb.Point{east + p[0]*cos - p[1]*sin, north + p[0]*sin + p[1]*cos}
			}
		}
	}
	return out
}

func TestOverlapsByHand(t *testing.T) {
	square := orb.Polygon{box(0, 0, 2, 2)}
	frame := orb.Polygon{box(-1, -1, 3, 3), box(0, 0, 2, 2)}
	for _, tc := range []struct {
		name string
		a, b orb.Polygon
		want bool
	}{
		{"apart", square, orb.Polygon{box(3, 0, 4, 1)}, false},
		{"bounds meet", orb.Polygon{{{0, 0}, {9, 0}, {0, 9}, {0, 0}}}, orb.Polygon{{{9, 9}, {9, 1}, {1, 9}, {9, 9}}}, false},
		{"common edge", square, orb.Polygon{box(2, 0, 4, 2)}, false},
		{"part of an edge", square, orb.Polygon{box(2, 0.5, 4, 5)}, false},
		{"corner", square, orb.Polygon{box(2, 2, 4, 4)}, false},
		{"corner on an edge", square, orb.Polygon{{{2, 1}, {3, 0}, {3, 2}, {2, 1}}}, false},
		{"island that fills a hole", square, frame, false},
		{"island in a hole", orb.Polygon{box(0.5, 0.5, 1, 1)}, frame, false},
		{"island beyond a hole", orb.Polygon{box(0, 0, 2, 2.1)}, frame, true},
		{"edges cross", square, orb.Polygon{box(1, 1, 3, 3)}, true},
		{"cross", orb.Polygon{box(0, 1, 3, 2)}, orb.Polygon{box(1, 0, 2, 3)}, true},
		{"inside", square, orb.Polygon{box(0.5, 0.5, 1, 1)}, true},
		{"inside on an edge", square, orb.Polygon{box(0.5, 0, 1, 1)}, true},
		{"half", square, orb.Polygon{box(0, 0, 1, 2)}, true},
		{"the same", square, orb.Polygon{box(0, 0, 2, 2)}, true},
		{"the same, run backwards", square, orb.Polygon{{{2, 2}, {2, 0}, {0, 0}, {0, 2}, {2, 2}}}, true},
		{"the same with other corners", square, orb.Polygon{{{0, 0}, {0.3, 0}, {2, 0}, {2, 0.7}, {2, 2}, {0, 2}, {0, 0}}}, true},
		{"through two corners", square, orb.Polygon{{{-1, -1}, {3, 3}, {3, -1}, {-1, -1}}}, true},
		{"along a diagonal", square, orb.Polygon{{{0, 0}, {2, 2}, {4, 0}, {0, 0}}}, true},
		{"a hole less", frame, orb.Polygon{box(-1, -1, 3, 3)}, true},
		{"hole beyond the outline", orb.Polygon{box(0, 0, 2, 2), box(1, 0.5, 6, 1.5)}, orb.Polygon{box(4, 0, 5, 3)}, false},
		{"no area", square, orb.Polygon{{{1, 1}, {1, 1}, {1, 1}, {1, 1}}}, false},
		{"a line", square, orb.Polygon{{{-1, 1}, {3, 1}, {-1, 1}, {-1, 1}}}, false},
		{"0.1 mm", square, orb.Polygon{box(1.9999, 0, 3, 2)}, true},
	} {
		for _, angle := range []float64{0, 0.5, 2} {
			polys := moved([]orb.Polygon{tc.a, tc.b}, angle, 512000, 7012000)
			for _, zones := range [][]Zone{zonesOf(polys...), zonesOf(polys[1], polys[0])} {
				if got := len(Overlaps(zones)) == 1; got != tc.want {
					t.Errorf("%s, turned by %v: overlap is %t, want %t", tc.name, angle, got, tc.want)
				}
			}
		}
	}
}

func TestOverlapsNamesPairsOnce(t *testing.T) {
	a, b, c := orb.Polygon{box(0, 0, 4, 4)}, orb.Polygon{box(1, 1, 2, 2)}, orb.Polygon{box(3, 3, 5, 5)}
	zones := []Zone{
		{Name: "parts", Polygons: []orb.Polygon{c, b, b}}, // overlapping parts are no fault
		{Name: "far", Polygons: []orb.Polygon{{box(90, 90, 91, 91)}}},
		{Name: "whole", Polygons: []orb.Polygon{a}},
		{Name: "corner", Polygons: []orb.Polygon{{box(4.5, 4.5, 6, 6)}}},
	}
	if got, want := Overlaps(zones), [][2]int{{0, 2}, {0, 3}}; !slices.Equal(got, want) {
		t.Errorf("got %v, want %v", got, want)
	}
	if got := Overlaps(nil); len(got) != 0 {
		t.Errorf("got %v of no zones", got)
	}
}

// latticeTriangle returns a triangle with area whose corners have whole coordinates.
func latticeTriangle(rng *rand.Rand, size int) [3][2]int {
	for {
		var c [3][2]int
		for k := range c {
			c[k] = [2]int{rng.IntN(size), rng.IntN(size)}
		}
		if doubleArea(c[0], c[1], c[2]) != 0 {
			return c
		}
	}
}

func doubleArea(a, b, c [2]int) int {
	return (b[0]-a[0])*(c[1]-a[1]) - (b[1]-a[1])*(c[0]-a[0])
}

// separable tells whether a line along an edge of a has b on the other side: of two
// convex polygons without area in common one has such an edge. Whole numbers are exact.
func separable(a, b [3][2]int) bool {
	for k := range a {
		from, to, third := a[k], a[(k+1)%3], a[(k+2)%3]
		apart := true
		for _, p := range b {
			if doubleArea(from, to, p)*doubleArea(from, to, third) > 0 {
				apart = false
			}
		}
		if apart {
			return true
		}
	}
	return false
}

// TestOverlapsOfTriangles compares triangles with the separating line, exact in whole
// numbers, where many touch at corners and along edges.
func TestOverlapsOfTriangles(t *testing.T) {
	rng := newRand(t, 131)
	counts := map[bool]int{}
	for range 20_000 {
		a, b := latticeTriangle(rng, 6), latticeTriangle(rng, 6)
		var polys []orb.Polygon
		for _, c := range [][3][2]int{a, b} {
			var ring orb.Ring
			for _, k := range []int{0, 1, 2, 0} {
				ring = append(ring, orb.Point{float64(c[k][0]), float64(c[k][1])})
			}
			polys = append(polys, orb.Polygon{ring})
		}
		want := !separable(a, b) && !separable(b, a)
		counts[want]++
		angle := 7 * rng.Float64()
		if got := len(Overlaps(zonesOf(moved(polys, angle, 512000, 7012000)...))) == 1; got != want {
			t.Fatalf("%v and %v, turned by %v: overlap is %t, want %t", a, b, angle, got, want)
		}
	}
	if counts[true] < 2000 || counts[false] < 2000 {
		t.Errorf("%v cases, want many of both", counts)
	}
}

// TestOverlapsOfCells compares boxes of whole cells, some with holes, with the cells
// that they have in common; turned, their corners on each other's edges are rounded.
func TestOverlapsOfCells(t *testing.T) {
	const size = 12
	rng := newRand(t, 132)
	for range 300 {
		var polys []orb.Polygon
		var cells [][size * size]bool
		for range 8 {
			x, y, w, h := rng.IntN(size-4), rng.IntN(size-4), 1+rng.IntN(4), 1+rng.IntN(4)
			poly := orb.Polygon{box(float64(x), float64(y), float64(x+w), float64(y+h))}
			inHole := func(int, int) bool { return false }
			if w > 2 && h > 2 && rng.IntN(3) > 0 {
				poly = append(poly, box(float64(x+1), float64(y+1), float64(x+w-1), float64(y+h-1)))
				inHole = func(i, j int) bool { return i > x && i < x+w-1 && j > y && j < y+h-1 }
			}
			var held [size * size]bool
			for i := x; i < x+w; i++ {
				for j := y; j < y+h; j++ {
					held[i*size+j] = !inHole(i, j)
				}
			}
			polys, cells = append(polys, poly), append(cells, held)
		}
		var want [][2]int
		for a := range cells {
			for b := a + 1; b < len(cells); b++ {
				common := false
				for k := range cells[a] {
					common = common || cells[a][k] && cells[b][k]
				}
				if common {
					want = append(want, [2]int{a, b})
				}
			}
		}
		angle := 7 * rng.Float64()
		if got := Overlaps(zonesOf(moved(polys, angle, 512000, 7012000)...)); !slices.Equal(got, want) {
			t.Fatalf("%v, turned by %v: got %v, want %v", polys, angle, got, want)
		}
	}
}

// TestOverlapsOfStars compares ragged zones with points all over them: a point in both
// is an overlap, and where there is none the common area is small or nothing.
func TestOverlapsOfStars(t *testing.T) {
	rng := newRand(t, 133)
	for range 300 {
		a := orb.Polygon{star(rng, orb.Point{512000, 7012000}, 40, 100, 40)}
		b := orb.Polygon{star(rng, orb.Point{512000 + 400*rng.Float64() - 200, 7012000}, 10, 100, 30), nil}
		b[1] = star(rng, b[0].Bound().Center(), 2, 6, 5)
		common := 0
		for range 4000 {
			x, y := 511900+200*rng.Float64(), 7011900+200*rng.Float64()
			if polygonHolds(a, x, y) && polygonHolds(b, x, y) {
				common++
			}
		}
		got := len(Overlaps(zonesOf(a, b))) == 1
		if common > 0 && !got || common == 0 && got && distance(a[0], b[0]) > 0 {
			t.Fatalf("overlap is %t with %d points in both:\n%v\n%v", got, common, a, b)
		}
	}
}

// distance is how far the bounds of two rings are apart along x, 0 if they are not.
func distance(a, b orb.Ring) float64 {
	return max(0, b.Bound().Min[0]-a.Bound().Max[0], a.Bound().Min[0]-b.Bound().Max[0])
}

// coastAndZones are a big coast and zones along it.
func coastAndZones(b *testing.B) []orb.Polygon { return append(bigCoast(b), manyZones(b)...) }

// diagonalStrips returns 2000 strips aslant that touch each other, whose bounds
// nearly all meet.
func diagonalStrips(*testing.B) []orb.Polygon {
	var polys []orb.Polygon
	for k := range 2000 {
		polys = append(polys, orb.Polygon{box(0, float64(k), 8000, float64(k+1))})
	}
	return moved(polys, math.Pi/4, 512000, 7012000)
}

func BenchmarkOverlaps(b *testing.B) {
	all := append(slices.Clone(polygonBenches), []struct {
		name  string
		polys func(*testing.B) []orb.Polygon
	}{{"coast and zones", coastAndZones}, {"strips", diagonalStrips}}...)
	for _, bench := range all {
		b.Run(bench.name, func(b *testing.B) {
			zones := zonesOf(bench.polys(b)...)
			b.ReportAllocs()
			pairs := 0
			for b.Loop() {
				pairs = len(Overlaps(zones))
			}
			b.ReportMetric(float64(pairs), "pairs")
		})
	}
}
