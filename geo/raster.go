package geo

import "math"

// closed marks a cell that lies wholly in a polygon already: no other one, of
// greater area, is ever looked up there.
const closed = math.MaxInt32

// margin (cells) widens what is burnt, so that rounding cannot leave out a cell
// that an edge touches; newAxis keeps it above the rounding.
const margin = 1.0 / 16

// raster collects the entries of the raster of a PolygonIndex, polygon by polygon.
type raster struct {
	idx     *PolygonIndex
	seen    []int32 // for each cell the last turn that met it with an edge, or closed
	entries []entry
}

// burn enters polygon k, in a turn from 1 on: the cells its edges touch, then the
// others that lie within.
func (r *raster) burn(turn, k int32) {
	edges := r.idx.shapes[k].edges
	left, right, low, high := math.MaxInt, -1, math.MaxInt, -1
	for i := range edges {
		e := &edges[i]
		r.burnEdge(e, turn, 2*k)
		left, right = min(left, r.idx.cols.cell(min(e.x0, e.x1))), max(right, r.idx.cols.cell(max(e.x0, e.x1)))
		low, high = min(low, r.idx.rows.cell(e.y0)), max(high, r.idx.rows.cell(e.y1))
	}
	for row := low; row <= high; row++ {
		r.fillRow(row, left, right, turn, k)
	}
}

// burnEdge enters the item in the cells that an edge touches.
func (r *raster) burnEdge(e *edge, turn, item int32) {
	cols, rows := &r.idx.cols, &r.idx.rows
	wider := cols.at(margin) - cols.min
	bottom, top := rows.cell(e.y0), rows.cell(e.y1)
	for row := bottom; row <= top; row++ {
		a, b := e.x0, e.x1
		if row > bottom {
			a = e.xAt(rows.at(float64(row) - margin))
		}
		if row < top {
			b = e.xAt(rows.at(float64(row) + 1 + margin))
		}
		for col := cols.cell(min(a, b) - wider); col <= cols.cell(max(a, b)+wider); col++ {
			r.enter(row*cols.n+col, turn, item)
		}
	}
}

// enter adds the item to a cell's list, once a turn.
func (r *raster) enter(cell int, turn, item int32) {
	if r.seen[cell] < turn {
		r.seen[cell] = turn
		r.entries = append(r.entries, entry{int32(cell), item})
	}
}

// fillRow closes the cells of a row that lie wholly in polygon k. Neighbours that
// no edge touches lie on one side, so one test serves a run of them.
func (r *raster) fillRow(row, left, right int, turn, k int32) {
	known, inside := false, false
	for col := left; col <= right; col++ {
		cell := row*r.idx.cols.n + col
		if r.seen[cell] >= turn {
			known = false
			continue
		}
		if !known {
			inside = r.idx.shapes[k].contains(r.idx.cols.at(float64(col)+0.5), r.idx.rows.at(float64(row)+0.5))
			known = true
		}
		if inside {
			r.seen[cell] = closed
			r.entries = append(r.entries, entry{int32(cell), 2*k + 1})
		}
	}
}
