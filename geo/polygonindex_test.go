package geo

import (
	"math"
	"math/rand/v2"
	"sync"
	"testing"

	"github.com/paulmach/orb"
	"github.com/paulmach/orb/planar"
)

// findOne returns the polygon of one point.
func findOne(idx *PolygonIndex, x, y float64) int32 {
	var found [1]int32
	idx.Find(found[:], []float64{x}, []float64{y})
	return found[0]
}

// plainFind returns the smallest polygon that holds a point, by all edges of all.
func plainFind(polys []orb.Polygon, area []float64, x, y float64) int32 {
	found := int32(-1)
	for k, poly := range polys {
		if polygonHolds(poly, x, y) && (found < 0 || area[k] < area[found]) {
			found = int32(k)
		}
	}
	return found
}

// shoelace returns the area of the outline less those of the holes.
func shoelace(poly orb.Polygon) float64 {
	total := 0.0
	for i, ring := range poly {
		sum := 0.0
		for k := 1; k < len(ring); k++ {
			a, b, c := ring[0], ring[k-1], ring[k]
			sum += (b[0]-a[0])*(c[1]-a[1]) - (c[0]-a[0])*(b[1]-a[1])
		}
		if i == 0 {
			total = math.Abs(sum) / 2
		} else {
			total -= math.Abs(sum) / 2
		}
	}
	return total
}

// lagoon returns a star-shaped polygon with up to 4 holes; two of them overlap.
func lagoon(rng *rand.Rand, centre orb.Point, r float64) orb.Polygon {
	poly := orb.Polygon{star(rng, centre, 0.6*r, r, 3+rng.IntN(60))}
	for k := range rng.IntN(5) {
		angle := 0.9 * math.Pi * float64(k)
		at := orb.Point{centre[0] + 0.2*r*math.Cos(angle), centre[1] + 0.2*r*math.Sin(angle)}
		poly = append(poly, star(rng, at, 0.03*r, 0.15*r, 3+rng.IntN(20)))
	}
	return poly
}

// TestFindAgainstPlainTest compares the index with the even-odd rule over all edges
// and, for single polygons, with the planar geometry library.
func TestFindAgainstPlainTest(t *testing.T) {
	rng := newRand(t, 41)
	for try := range 60 {
		centre := orb.Point{512000 * float64(try%2), 7012000 * float64(try%2)}
		var polys []orb.Polygon
		var area []float64
		for range 1 + rng.IntN(30) {
			at := orb.Point{centre[0] + 300*rng.Float64(), centre[1] + 300*rng.Float64()}
			polys = append(polys, lagoon(rng, at, 10+90*rng.Float64()))
			area = append(area, shoelace(polys[len(polys)-1]))
		}
		idx := NewPolygonIndex(polys)
		const n = 1500
		x, y, got := make([]float64, n), make([]float64, n), make([]int32, n)
		for i := range n {
			x[i], y[i] = centre[0]-120+540*rng.Float64(), centre[1]-120+540*rng.Float64()
			if i%3 == 0 { // near a corner
				ring := polys[rng.IntN(len(polys))][0]
				p := ring[rng.IntN(len(ring))]
				x[i], y[i] = p[0]+1e-3*rng.NormFloat64(), p[1]+1e-3*rng.NormFloat64()
			}
		}
		idx.Find(got, x, y)
		for i := range got {
			if want := plainFind(polys, area, x[i], y[i]); got[i] != want {
				t.Fatalf("try %d: polygon %d at %v %v, want %d", try, got[i], x[i], y[i], want)
			}
			if got[i] >= 0 && !planar.PolygonContains(polys[got[i]], orb.Point{x[i], y[i]}) {
				t.Fatalf("try %d: %v %v is not in polygon %d by planar", try, x[i], y[i], got[i])
			}
		}
	}
}

func TestFindAgainstPlanar(t *testing.T) {
	rng := newRand(t, 42)
	islands := orb.Polygon{star(rng, orb.Point{512000, 7012000}, 800, 900, 300)}
	for k := range 225 {
		at := orb.Point{511500 + 70*float64(k%15), 7011500 + 70*float64(k/15)}
		islands = append(islands, star(rng, at, 20, 45, 40)) // some overlap
	}
	for _, poly := range []orb.Polygon{
		{comb(60, orb.Point{0, 1})},
		{comb(60, orb.Point{1, 0})},
		{comb(60, orb.Point{0.6, 0.8})},
		{coast(rng, orb.Point{512000, 7012000}, 900, 5000)},
		islands,
	} {
		idx, bound := NewPolygonIndex([]orb.Polygon{poly}), poly.Bound()
		inside := 0
		for range 3000 {
			p := orb.Point{bound.Min[0] + rng.Float64()*(bound.Max[0]-bound.Min[0]), bound.Min[1] + rng.Float64()*(bound.Max[1]-bound.Min[1])}
			want := planar.PolygonContains(poly, p)
			if want {
				inside++
			}
			if got := findOne(idx, p[0], p[1]) == 0; got != want {
				t.Fatalf("%v inside: %v, want %v", p, got, want)
			}
		}
		if inside == 0 || inside == 3000 {
			t.Errorf("%d of 3000 points inside, want some of both", inside)
		}
	}
}

func TestFindOrder(t *testing.T) {
	polys := []orb.Polygon{
		{box(0, 0, 100, 100)},
		{box(20, 20, 60, 60)},
		{box(20, 20, 60, 60), box(30, 30, 50, 50)}, // smaller by its hole
		{box(20, 20, 60, 60)},
		{box(0, 0, 100, 100), box(10, 10, 90, 90)},
		{},
	}
	idx := NewPolygonIndex(polys)
	for _, tc := range []struct {
		name string
		x, y float64
		want int32
	}{
		{"in the largest only", 15, 50, 0},
		{"ring is smaller than disc", 5, 50, 4},
		{"smallest of four", 25, 25, 2},
		{"in the hole of the smallest: the first of equal ones", 40, 40, 1},
		{"outside", 101, 50, -1},
	} {
		if got := findOne(idx, tc.x, tc.y); got != tc.want {
			t.Errorf("%s: polygon %d, want %d", tc.name, got, tc.want)
		}
	}
}

// TestHolesAreTakenOut has holes as careless data have them: overlapping, within
// each other, over the outline. A point in any of them is out.
func TestHolesAreTakenOut(t *testing.T) {
	poly := orb.Polygon{box(0, 0, 10, 10), box(1, 1, 5, 5), box(4, 4, 6, 6), box(2, 2, 3, 3), box(8, 8, 12, 12), box(20, 0, 21, 1)}
	idx := NewPolygonIndex([]orb.Polygon{poly})
	for _, p := range []orb.Point{{1.5, 1.5}, {4.5, 4.5}, {2.5, 2.5}, {9, 9}, {11, 11}, {20.5, 0.5}} {
		if got := findOne(idx, p[0], p[1]); got != -1 {
			t.Errorf("%v: polygon %d, want none", p, got)
		}
	}
	for _, p := range []orb.Point{{0.5, 0.5}, {7, 7}, {9, 1}} {
		if got := findOne(idx, p[0], p[1]); got != 0 {
			t.Errorf("%v: polygon %d, want 0", p, got)
		}
	}
}

// TestRingsFarFromTheOthers has holes within a hole and outside the outline, where
// cells that only their edges touch lie deep within another ring, or in none.
func TestRingsFarFromTheOthers(t *testing.T) {
	rng := newRand(t, 45)
	poly := orb.Polygon{
		star(rng, orb.Point{0, 0}, 950, 1000, 500),
		star(rng, orb.Point{0, 0}, 600, 650, 500),
		star(rng, orb.Point{0, 100}, 80, 120, 500),
		star(rng, orb.Point{1900, 0}, 250, 300, 500),
	}
	idx := NewPolygonIndex([]orb.Polygon{poly})
	for k, ring := range poly {
		for _, p := range ring {
			x, y := p[0]+rng.NormFloat64(), p[1]+rng.NormFloat64()
			if got, want := findOne(idx, x, y) == 0, planar.PolygonContains(poly, orb.Point{x, y}); got != want {
				t.Fatalf("%v %v near ring %d inside: %v, want %v", x, y, k, got, want)
			}
		}
	}
}

// TestHalfOpen lays unit squares side by side: the corners and edge centres belong
// to the square above and to the right, also where a step is one rounding.
func TestHalfOpen(t *testing.T) {
	for _, tc := range []struct{ origin, step float64 }{{0, 1}, {7012000, 1}, {7012000, 2 * 0x1p-30}} {
		var polys []orb.Polygon
		for k := range 16 {
			x, y := tc.origin+tc.step*float64(k%4), tc.origin+tc.step*float64(k/4)
			polys = append(polys, orb.Polygon{box(x, y, x+tc.step, y+tc.step)})
		}
		idx := NewPolygonIndex(polys)
		for i := -2; i <= 10; i++ {
			for j := -2; j <= 10; j++ {
				want := int32(i/2 + j/2*4)
				if i < 0 || j < 0 || i >= 8 || j >= 8 {
					want = -1
				}
				x, y := tc.origin+tc.step*float64(i)/2, tc.origin+tc.step*float64(j)/2
				if got := findOne(idx, x, y); got != want {
					t.Errorf("origin %v step %v: %d at %d %d, want %d", tc.origin, tc.step, got, i, j, want)
				}
			}
		}
	}
}

// TestSharedEdges cuts a star into triangles about its centre; points on the inner
// edges, as rounding lets them lie, and all other inner points are in exactly one.
func TestSharedEdges(t *testing.T) {
	rng := newRand(t, 43)
	centre := orb.Point{512000.123, 7012000.456}
	ring := star(rng, centre, 50, 100, 40)
	var parts []*PolygonIndex
	for i := 1; i < len(ring); i++ {
		tri := orb.Ring{ring[i-1], ring[i], centre, ring[i-1]}
		if i%2 == 0 {
			tri = orb.Ring{centre, ring[i], ring[i-1], centre}
		}
		parts = append(parts, NewPolygonIndex([]orb.Polygon{{tri}}))
	}
	for range 4000 {
		corner, w := ring[rng.IntN(len(ring))], rng.Float64()*0.5
		x, y := centre[0]+w*(corner[0]-centre[0]), centre[1]+w*(corner[1]-centre[1])
		count := 0
		for _, part := range parts {
			count += int(findOne(part, x, y)) + 1
		}
		if count != 1 {
			t.Fatalf("%v %v is in %d triangles, want 1", x, y, count)
		}
	}
	count := 0
	for _, part := range parts {
		count += int(findOne(part, centre[0], centre[1])) + 1
	}
	if count != 1 {
		t.Errorf("the centre is in %d triangles, want 1", count)
	}
}

func TestFindLimits(t *testing.T) {
	none := NewPolygonIndex(nil)
	flat := NewPolygonIndex([]orb.Polygon{{{{0, 0}, {4, 0}, {4, 0}, {0, 0}}, {{0, 1}, {4, 1}, {4, 1}, {0, 1}}}, {{{9, 9}, {9, 9}, {9, 9}, {9, 9}}}})
	whole := NewPolygonIndex([]orb.Polygon{{box(-1e12, -1e12, 1e12, 1e12)}})
	for _, tc := range []struct {
		name string
		idx  *PolygonIndex
		x, y float64
		want int32
	}{
		{"no polygons", none, 0, 0, -1},
		{"on a flat polygon", flat, 2, 0, -1},
		{"polygon of one position", flat, 9, 9, -1},
		{"within", whole, 3, -4, 0},
		{"x NaN", whole, math.NaN(), 0, -1},
		{"y NaN", whole, 0, math.NaN(), -1},
		{"x infinite", whole, math.Inf(1), 0, -1},
		{"y infinite", whole, 0, math.Inf(-1), -1},
	} {
		if got := findOne(tc.idx, tc.x, tc.y); got != tc.want {
			t.Errorf("%s: %d, want %d", tc.name, got, tc.want)
		}
	}
	none.Find(nil, nil, nil)
	mustPanic(t, func() { none.Find(make([]int32, 2), make([]float64, 2), make([]float64, 3)) })
	mustPanic(t, func() { none.Find(make([]int32, 2), make([]float64, 1), make([]float64, 2)) })
}

func TestFindShared(t *testing.T) {
	rng := newRand(t, 44)
	idx := NewPolygonIndex([]orb.Polygon{lagoon(rng, orb.Point{0, 0}, 100), lagoon(rng, orb.Point{50, 0}, 100)})
	const n = 4096
	x, y, want := make([]float64, n), make([]float64, n), make([]int32, n)
	for i := range n {
		x[i], y[i] = 300*rng.Float64()-150, 300*rng.Float64()-150
	}
	idx.Find(want, x, y)
	var wait sync.WaitGroup
	for range 4 {
		wait.Go(func() {
			got := make([]int32, n)
			idx.Find(got, x, y)
			for i := range got {
				if got[i] != want[i] {
					t.Errorf("point %d: %d, alone %d", i, got[i], want[i])
				}
			}
		})
	}
	wait.Wait()
	if got := testing.AllocsPerRun(5, func() { idx.Find(want, x, y) }); got != 0 {
		t.Errorf("%v allocations a chunk, want 0", got)
	}
}
