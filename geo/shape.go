package geo

import (
	"math"

	"github.com/paulmach/orb"
)

// edge is one edge of a ring from its lower end x0, y0 to its upper end x1, y1, so
// that two polygons with a common edge, run in either direction, compute the same.
type edge struct {
	x0, y0, x1, y1 float64
	ring           int32
}

// appendEdges appends the edges of a ring; edge i joins positions i and i+1.
func appendEdges(edges []edge, ring orb.Ring, number int) []edge {
	for i := 1; i < len(ring); i++ {
		low, high := ring[i-1], ring[i]
		if low[1] > high[1] {
			low, high = high, low
		}
		edges = append(edges, edge{low[0], low[1], high[0], high[1], int32(number)})
	}
	return edges
}

// rightOf tells whether the edge passes the height y to the right of x: the test
// of the even-odd rule, half-open in y and in x.
func (e *edge) rightOf(x, y float64) bool {
	return e.y0 <= y && y < e.y1 && (x-e.x0)*(e.y1-e.y0) < (e.x1-e.x0)*(y-e.y0)
}

// xAt returns where a line through an edge that is not level has the height y,
// held between its ends.
func (e *edge) xAt(y float64) float64 {
	w := min(max((y-e.y0)/(e.y1-e.y0), 0), 1)
	return e.x0 + w*(e.x1-e.x0)
}

// shape holds the edges of one polygon or ring in level bands: the band of a height
// lists the edges that may pass it, in the order of the rings.
type shape struct {
	edges []edge
	rows  axis
	bands lists
}

// newShape returns the shape of a polygon.
func newShape(poly orb.Polygon) shape {
	var edges []edge
	for number, ring := range poly {
		edges = appendEdges(edges, ring, number)
	}
	s := shape{edges: edges, rows: bandAxis(edges)}
	var entries []entry
	for i := range edges {
		top := s.rows.cell(edges[i].y1)
		for band := s.rows.cell(edges[i].y0); band <= top; band++ {
			entries = append(entries, entry{int32(band), int32(i)})
		}
	}
	s.bands = newLists(entries, s.rows.n)
	return s
}

// bandAxis chooses the bands. A height is passed by the sum of the edges' heights
// over the whole height, on average; bands so high that as many edges again may
// end within one are listed in few entries (3 an edge) and read fast.
func bandAxis(edges []edge) axis {
	low, high, sum := math.Inf(1), math.Inf(-1), 0.0
	for i := range edges {
		low, high = min(low, edges[i].y0), max(high, edges[i].y1)
		sum += edges[i].y1 - edges[i].y0
	}
	return newAxis(low, high, int(float64(len(edges))*min(2*(high-low)/sum, 1)))
}

// contains tells whether a point is in the first ring and in none of the others,
// each by the even-odd rule. The edges of a band come ring by ring.
func (s *shape) contains(x, y float64) bool {
	ring, inside := int32(0), false
	for _, i := range s.bands.of(s.rows.cell(y)) {
		e := &s.edges[i]
		if e.ring != ring {
			if inside != (ring == 0) {
				return false
			}
			ring, inside = e.ring, false
		}
		if e.rightOf(x, y) {
			inside = !inside
		}
	}
	return inside == (ring == 0)
}
