package geo

import (
	"cmp"
	"math"
	"slices"

	"github.com/paulmach/orb"
	"github.com/paulmach/orb/planar"
)

// PolygonIndex finds the polygon that holds a point. A raster over all polygons
// knows the cells that lie wholly in a polygon or in none. Where edges touch the
// cells of a row, the run of such cells keeps the few edges that can tell; so a
// point costs a look at its cell and, near an edge, a test of the edges beside it.
// An index does not change once made, so goroutines may share it.
type PolygonIndex struct {
	cols, rows axis
	cells      lists // of 2*polygon + 1 where the cell lies wholly in it, else 2*run; smallest area first
	runs       []run
	parts      []part
	near       []int32 // edges by number, one piece for each part
	edges      []edge
}

// run is a row's run of cells that edges of one polygon touch, between cells that
// none touches. A point in it is in the polygon if every part agrees.
type run struct{ poly, first, end int32 }

// part holds the edges near[first:end] of one ring in a run. A point of the run is
// on the side of the ring that the polygon wants if it has an odd number of them to
// its right (odd) or an even one: those of other runs to the right are accounted for.
type part struct {
	first, end int32
	odd        bool
}

// maxCells bounds the raster and with it the memory: 4 MiB, and 4 bytes an entry.
const maxCells = 1 << 20

// NewPolygonIndex returns an index of polygons as ParsePolygons gives them: closed
// rings with finite coordinates (m), the first ring the outline, others holes. It
// copies what it needs. It takes time and memory for the edges, and for the cells
// that each polygon covers.
func NewPolygonIndex(polys []orb.Polygon) *PolygonIndex {
	all := make([]numbered, len(polys))
	for k, poly := range polys {
		all[k] = numbered{newShape(poly), int32(k), planar.Area(poly)}
	}
	return newIndex(all)
}

// NewZoneIndex returns an index of zones, whose numbers Find gives in place of those
// of polygons: of zones that overlap, that with the smallest area, which is the sum
// over its polygons. So all parts of a zone win or lose together.
func NewZoneIndex(zones []Zone) *PolygonIndex {
	var all []numbered
	for k, zone := range zones {
		area := planar.Area(orb.MultiPolygon(zone.Polygons))
		for _, poly := range zone.Polygons {
			all = append(all, numbered{newShape(poly), int32(k), area})
		}
	}
	return newIndex(all)
}

// numbered is a polygon with the number that stands for it and the area by which it
// competes.
type numbered struct {
	*shape
	number int32
	area   float64
}

// newIndex returns an index of polygons, which it sorts by area; where areas are equal
// they keep their order.
func newIndex(all []numbered) *PolygonIndex {
	idx := &PolygonIndex{}
	idx.layRaster(all)
	b := burner{PolygonIndex: idx, closed: make([]bool, idx.cols.n*idx.rows.n)}
	slices.SortStableFunc(all, func(a, b numbered) int { return cmp.Compare(a.area, b.area) })
	for _, p := range all {
		b.burn(p.shape, p.number)
	}
	idx.cells = newLists(b.entries, len(b.closed))
	return idx
}

// layRaster chooses the cells: about four for each edge, nearly square.
func (idx *PolygonIndex) layRaster(shapes []numbered) {
	left, right, low, high := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	count := 0
	for _, s := range shapes {
		count += len(s.edges)
		for _, e := range s.edges {
			left, right = min(left, e.x0, e.x1), max(right, e.x0, e.x1)
			low, high = min(low, e.y0), max(high, e.y1)
		}
	}
	cells, across := float64(min(4*count, maxCells)), 1.0
	if right > left && high > low {
		across = min(max(math.Sqrt(cells*((right-left)/(high-low))), 1), cells)
	}
	idx.cols = newAxis(left, right, int(across))
	idx.rows = newAxis(low, high, int(cells/across))
}

// Find fills dst with the number of the polygon that contains each point x, y (m):
// the one with the smallest area where several do (the first of equal ones), -1
// where none does or a coordinate is NaN. A point in a hole is not in the polygon.
// The three slices have one length; otherwise it panics.
//
// Boundaries are half-open: a point on an edge belongs to the polygon to the right
// of it (greater x), on a level edge to the one above it. So of polygons
// that share an edge, corner for corner, exactly one holds a point of it.
func (idx *PolygonIndex) Find(dst []int32, x, y []float64) {
	if len(x) != len(dst) || len(y) != len(dst) {
		panic(errLengths)
	}
	for i := range dst {
		dst[i] = idx.find(x[i], y[i])
	}
}

// find returns the number of the polygon that contains one point.
func (idx *PolygonIndex) find(x, y float64) int32 {
	if !idx.cols.holds(x) || !idx.rows.holds(y) {
		return -1
	}
	for _, item := range idx.cells.of(idx.rows.cell(y)*idx.cols.n + idx.cols.cell(x)) {
		if item&1 == 1 {
			return item >> 1
		}
		if r := &idx.runs[item>>1]; idx.inside(r, x, y) {
			return r.poly
		}
	}
	return -1
}

// inside tells whether a point of a run is in the run's polygon.
func (idx *PolygonIndex) inside(r *run, x, y float64) bool {
	for _, p := range idx.parts[r.first:r.end] {
		odd := false
		for _, i := range idx.near[p.first:p.end] {
			if idx.edges[i].rightOf(x, y) {
				odd = !odd
			}
		}
		if odd != p.odd {
			return false
		}
	}
	return true
}
