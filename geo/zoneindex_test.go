package geo

import (
	"testing"

	"github.com/paulmach/orb"
)

// plainZone returns the zone of the smallest area, summed over its polygons, of those
// that hold a point in one of them, by all edges of all.
func plainZone(zones []Zone, x, y float64) int32 {
	found, least := int32(-1), 0.0
	for k, zone := range zones {
		area, holds := 0.0, false
		for _, poly := range zone.Polygons {
			area += shoelace(poly)
			holds = holds || polygonHolds(poly, x, y)
		}
		if holds && (found < 0 || area < least) {
			found, least = int32(k), area
		}
	}
	return found
}

// TestZoneIndexAgainstPlainTest compares zones of up to 4 polygons each, of which some
// overlap each other and themselves, with a look at every edge.
func TestZoneIndexAgainstPlainTest(t *testing.T) {
	rng := newRand(t, 47)
	otherwise := 0 // points that the smallest polygon would give to another zone
	for try := range 40 {
		centre := orb.Point{512000 * float64(try%2), 7012000 * float64(try%2)}
		zones := make([]Zone, 1+rng.IntN(12))
		var polys []orb.Polygon
		var area []float64
		var owner []int32
		for k := range zones {
			for range 1 + rng.IntN(4) {
				at := orb.Point{centre[0] + 300*rng.Float64(), centre[1] + 300*rng.Float64()}
				poly := lagoon(rng, at, 10+90*rng.Float64())
				zones[k].Polygons = append(zones[k].Polygons, poly)
				polys, area, owner = append(polys, poly), append(area, shoelace(poly)), append(owner, int32(k))
			}
		}
		idx := NewZoneIndex(zones)
		for range 1500 {
			x, y := centre[0]-120+540*rng.Float64(), centre[1]-120+540*rng.Float64()
			got, want := findOne(idx, x, y), plainZone(zones, x, y)
			if got != want {
				t.Fatalf("try %d: zone %d at %v %v, want %d", try, got, x, y, want)
			}
			if poly := plainFind(polys, area, x, y); poly >= 0 && owner[poly] != want {
				otherwise++
			}
		}
	}
	if otherwise < 100 {
		t.Errorf("%d points tell zones from polygons, want more", otherwise)
	}
}

// TestZoneIndexByHand has a wide zone with a small island of its own in a middling one:
// the island is part of the wide zone and loses to the middling one, which lies over
// both. Zones of equal area keep their order.
func TestZoneIndexByHand(t *testing.T) {
	zones := []Zone{
		{Name: "wide", Polygons: []orb.Polygon{{box(0, 0, 10, 10)}, {box(12, 2, 13, 3)}}}, // 101
		{Name: "middling", Polygons: []orb.Polygon{{box(8, 0, 16, 10)}}},                  // 80
		{Name: "equal", Polygons: []orb.Polygon{{box(8, 5, 16, 15)}}},                     // 80
		{Name: "small", Polygons: []orb.Polygon{{box(12.5, 2, 14, 3)}}},                   // 1.5
	}
	idx := NewZoneIndex(zones)
	for _, tc := range []struct {
		x, y float64
		want int32
	}{{1, 1, 0}, {9, 1, 1}, {12.2, 2.5, 1}, {12.7, 2.5, 3}, {9, 7, 1}, {9, 12, 2}, {20, 20, -1}} {
		if got := findOne(idx, tc.x, tc.y); got != tc.want {
			t.Errorf("at %v %v zone %d, want %d", tc.x, tc.y, got, tc.want)
		}
	}
	if got := findOne(NewZoneIndex(nil), 0, 0); got != -1 {
		t.Errorf("zone %d of none", got)
	}
}
