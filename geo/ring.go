package geo

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"

	"github.com/paulmach/orb"
)

// maxCoordinate bounds the coordinates of polygons, far above any projected
// system in any unit, so that products of differences keep their accuracy.
const maxCoordinate = 1e12

// checkRing returns what is wrong with a ring: fewer than 4 positions, a position
// that is not finite or beyond maxCoordinate, not closed, crossing itself.
func checkRing(ring orb.Ring) error {
	if len(ring) < 4 {
		return fmt.Errorf("%d positions, want at least 4, the last one equal to the first", len(ring))
	}
	for i, p := range ring {
		if !(math.Abs(p[0]) <= maxCoordinate && math.Abs(p[1]) <= maxCoordinate) {
			return fmt.Errorf("position %d is %v, want finite projected coordinates", i+1, p)
		}
	}
	if last := ring[len(ring)-1]; ring[0] != last {
		return fmt.Errorf("not closed: it starts at %v and ends at %v, want the last position equal to the first", ring[0], last)
	}
	return checkCrossing(ring)
}

// checkCrossing returns an error if two edges of the ring cross at a point within
// both. Edges that only touch, overlap or run back on themselves are no fault: the
// inside of the ring is as clear as without. Each band is swept from left to right,
// so the cost stays near that of sorting unless edges are long and crowded aslant.
func checkCrossing(ring orb.Ring) error {
	s := newShape(orb.Polygon{ring})
	sw := sweep{edges: s.edges, noise: 4 * 0x1p-52 * farthest(ring)}
	for band := range s.rows.n {
		if a, b, found := sw.crossing(s.bands.of(band)); found {
			x, y := meet(&s.edges[a], &s.edges[b])
			return fmt.Errorf("edges %d and %d cross near %.3f %.3f, want a ring that does not cross itself",
				min(a, b)+1, max(a, b)+1, x, y)
		}
	}
	return nil
}

// farthest returns the largest coordinate of the ring by magnitude.
func farthest(ring orb.Ring) float64 {
	far := 0.0
	for _, p := range ring {
		far = max(far, math.Abs(p[0]), math.Abs(p[1]))
	}
	return far
}

// sweep looks for crossings among the edges of one band after the other.
type sweep struct {
	edges []edge
	noise float64 // distance (m) within which a point counts as on an edge: 4 roundings of a coordinate
	open  []int32 // the edges that the sweep line may still meet
}

// crossing returns two edges of the band that cross. It sorts the band by the
// edges' left ends.
func (sw *sweep) crossing(band []int32) (a, b int32, found bool) {
	slices.SortFunc(band, func(a, b int32) int {
		return cmp.Or(cmp.Compare(sw.left(a), sw.left(b)), cmp.Compare(a, b))
	})
	sw.open = sw.open[:0]
	for _, b := range band {
		kept := sw.open[:0]
		for _, a := range sw.open {
			if max(sw.edges[a].x0, sw.edges[a].x1) < sw.left(b) {
				continue
			}
			if sw.cross(&sw.edges[a], &sw.edges[b]) {
				return a, b, true
			}
			kept = append(kept, a)
		}
		sw.open = append(kept, b)
	}
	return 0, 0, false
}

// left returns the x of an edge's left end.
func (sw *sweep) left(i int32) float64 { return min(sw.edges[i].x0, sw.edges[i].x1) }

// cross tells whether each edge has its ends on either side of the other.
func (sw *sweep) cross(a, b *edge) bool {
	return a.y0 < b.y1 && b.y0 < a.y1 &&
		sw.side(a, b.x0, b.y0)*sw.side(a, b.x1, b.y1) < 0 &&
		sw.side(b, a.x0, a.y0)*sw.side(b, a.x1, a.y1) < 0
}

// side returns 1 for a point to the left of the edge (seen upwards), -1 to the
// right, 0 where it is on its line but for rounding.
func (sw *sweep) side(e *edge, x, y float64) int {
	dx, dy := e.x1-e.x0, e.y1-e.y0
	area := dx*(y-e.y0) - dy*(x-e.x0)
	near := sw.noise * (math.Abs(dx) + math.Abs(dy))
	switch {
	case area > near:
		return 1
	case area < -near:
		return -1
	}
	return 0
}

// meet returns the point where two edges cross.
func meet(a, b *edge) (x, y float64) {
	ax, ay, bx, by := a.x1-a.x0, a.y1-a.y0, b.x1-b.x0, b.y1-b.y0
	w := ((b.x0-a.x0)*by - (b.y0-a.y0)*bx) / (ax*by - ay*bx)
	return a.x0 + w*ax, a.y0 + w*ay
}

// checkPolygon returns what is wrong with a polygon, with the number of the ring
// (from 1; the first is the outline).
func checkPolygon(poly orb.Polygon) error {
	if len(poly) == 0 {
		return errors.New("polygon is empty, want an outline")
	}
	for i, ring := range poly {
		if err := checkRing(ring); err != nil {
			return fmt.Errorf("ring %d: %w", i+1, err)
		}
	}
	return nil
}
