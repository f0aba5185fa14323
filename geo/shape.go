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

// xAt returns where an edge that is not level has the height y, held between its
// ends.
func (e *edge) xAt(y float64) float64 {
	w := min(max((y-e.y0)/(e.y1-e.y0), 0), 1)
	return e.x0 + w*(e.x1-e.x0)
}

// shape holds the edges of one polygon, ring by ring, in level bands: the band of a
// height lists the edges that may pass it.
type shape struct {
	edges []edge
	rings int
	rows  axis
	bands lists
}

// newShape returns the shape of a polygon.
func newShape(poly orb.Polygon) *shape {
	s := &shape{rings: len(poly)}
	for number, ring := range poly {
		s.edges = appendEdges(s.edges, ring, number)
	}
	s.rows = bandAxis(s.edges)
	var entries []entry
	for i := range s.edges {
		top := s.rows.cell(s.edges[i].y1)
		for band := s.rows.cell(s.edges[i].y0); band <= top; band++ {
			entries = append(entries, entry{int32(band), int32(i)})
		}
	}
	s.bands = newLists(entries, s.rows.n)
	return s
}

// bandAxis chooses the bands. A height is passed by as many edges as the sum of
// their heights over the whole height, on average; bands in which half as many again
// may end are read fast and cost no more than three entries an edge.
func bandAxis(edges []edge) axis {
	low, high, sum := math.Inf(1), math.Inf(-1), 0.0
	for i := range edges {
		low, high = min(low, edges[i].y0), max(high, edges[i].y1)
		sum += edges[i].y1 - edges[i].y0
	}
	return newAxis(low, high, int(float64(len(edges))*min(2*(high-low)/sum, 1)))
}

// against returns how many rings keep a point out of the polygon: the outline
// (ring 0) if the point is not in it, and each hole that the point is in. It fills
// in with one flag a ring: whether the point is in it, by the even-odd rule.
func (s *shape) against(in []bool, x, y float64) int {
	clear(in)
	for _, i := range s.bands.of(s.rows.cell(y)) {
		if e := &s.edges[i]; e.rightOf(x, y) {
			in[e.ring] = !in[e.ring]
		}
	}
	count := 0
	for ring := range in {
		if in[ring] != (ring == 0) {
			count++
		}
	}
	return count
}
