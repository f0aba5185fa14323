package geo

import (
	"cmp"
	"math"
	"slices"

	"github.com/paulmach/orb"
	"github.com/paulmach/orb/planar"
)

// PolygonIndex finds the polygon that holds a point. A raster over all polygons
// knows the cells that lie wholly in a polygon or in none; only points in cells
// that an edge touches are tested, against the edges in one level band of the
// polygon. It does not change once made, so goroutines may share it.
type PolygonIndex struct {
	shapes     []shape
	cols, rows axis
	cells      lists // of 2*polygon, +1 where the cell lies wholly in it; smallest area first
}

// maxCells bounds the raster, and with it the memory: 1 MB and 4 bytes an entry.
const maxCells = 1 << 18

// NewPolygonIndex returns an index of polygons as ParsePolygons gives them: closed
// rings with finite coordinates (m), the first ring the outline, others holes. It
// copies what it needs. It takes time and memory for the edges, and for the cells
// that each polygon covers.
func NewPolygonIndex(polys []orb.Polygon) *PolygonIndex {
	idx := &PolygonIndex{shapes: make([]shape, len(polys))}
	for k, poly := range polys {
		idx.shapes[k] = newShape(poly)
	}
	idx.layRaster()
	r := raster{idx: idx, seen: make([]int32, idx.cols.n*idx.rows.n)}
	for turn, k := range byArea(polys) {
		r.burn(int32(turn+1), int32(k))
	}
	idx.cells = newLists(r.entries, len(r.seen))
	return idx
}

// byArea returns the numbers of the polygons, smallest area first, in their order
// where areas are equal.
func byArea(polys []orb.Polygon) []int {
	order, area := make([]int, len(polys)), make([]float64, len(polys))
	for k, poly := range polys {
		order[k], area[k] = k, planar.Area(poly)
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(area[a], area[b]) })
	return order
}

// layRaster chooses the cells: about four for each edge, nearly square.
func (idx *PolygonIndex) layRaster() {
	low, high := [2]float64{math.Inf(1), math.Inf(1)}, [2]float64{math.Inf(-1), math.Inf(-1)}
	count := 0
	for k := range idx.shapes {
		count += len(idx.shapes[k].edges)
		for _, e := range idx.shapes[k].edges {
			low[0], high[0] = min(low[0], e.x0, e.x1), max(high[0], e.x0, e.x1)
			low[1], high[1] = min(low[1], e.y0), max(high[1], e.y1)
		}
	}
	cells := float64(min(4*count, maxCells))
	wide, tall := high[0]-low[0], high[1]-low[1]
	across := 1.0
	if wide > 0 && tall > 0 {
		across = min(max(math.Sqrt(cells*(wide/tall)), 1), cells)
	}
	idx.cols = newAxis(low[0], high[0], int(across))
	idx.rows = newAxis(low[1], high[1], int(cells/across))
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
		if item&1 == 1 || idx.shapes[item>>1].contains(x, y) {
			return item >> 1
		}
	}
	return -1
}
