package geo

import (
	"cmp"
	"slices"
)

// margin (cells) widens what is burnt, so that rounding cannot leave out a cell
// that an edge touches; newAxis keeps it above the rounding.
const margin = 1.0 / 16

// burner burns polygons into the raster of an index, smallest area first.
type burner struct {
	*PolygonIndex
	closed  []bool // cells that lie wholly in a polygon: no greater one is ever looked up there
	entries []entry

	poly  int32 // the polygon being burnt
	shape *shape
	in    []bool // by ring: whether the polygon's reference point is in it
	out   int    // how many rings keep the reference point out
}

// span says that an edge touches the cells from, ..., to of a row.
type span struct{ row, from, to, edge int32 }

// burn enters a polygon row by row.
func (b *burner) burn(s *shape, poly int32) {
	b.poly, b.shape, b.in = poly, s, make([]bool, s.rings)
	spans := b.spans()
	b.edges = append(b.edges, s.edges...)
	for len(spans) > 0 {
		n := 1
		for n < len(spans) && spans[n].row == spans[0].row {
			n++
		}
		b.burnRow(spans[:n])
		spans = spans[n:]
	}
}

// spans returns the spans of all edges, row by row, in each from right to left.
// The edges are numbered as they will be in the index.
func (b *burner) spans() []span {
	var spans []span
	for i := range b.shape.edges {
		spans = b.appendSpans(spans, &b.shape.edges[i], int32(len(b.edges)+i))
	}
	slices.SortFunc(spans, func(p, q span) int {
		return cmp.Or(cmp.Compare(p.row, q.row), cmp.Compare(q.to, p.to))
	})
	return spans
}

// appendSpans appends the spans of one edge.
func (b *burner) appendSpans(spans []span, e *edge, number int32) []span {
	wider := b.cols.at(margin) - b.cols.min
	bottom, top := b.rows.cell(e.y0), b.rows.cell(e.y1)
	for row := bottom; row <= top; row++ {
		start, end := e.x0, e.x1
		if row > bottom {
			start = e.xAt(b.rows.at(float64(row) - margin))
		}
		if row < top {
			end = e.xAt(b.rows.at(float64(row) + 1 + margin))
		}
		from, to := b.cols.cell(min(start, end)-wider), b.cols.cell(max(start, end)+wider)
		spans = append(spans, span{int32(row), int32(from), int32(to), number})
	}
	return spans
}

// burnRow enters the runs of a row from right to left, and the cells between them.
// No edge touches those, so they lie wholly in or out, and a point in them serves as
// reference for the run on their left: of the edges to its right an even or odd
// number passes, whatever the height. Right of the last run there are none.
func (b *burner) burnRow(spans []span) {
	clear(b.in)
	b.out = 1
	row, next := int(spans[0].row), -1
	for len(spans) > 0 {
		from, to, n := spans[0].from, spans[0].to, 1
		for n < len(spans) && spans[n].to >= from-1 {
			from = min(from, spans[n].from)
			n++
		}
		if next >= 0 {
			b.burnGap(row, int(to)+1, next)
		}
		b.burnRun(row, int(from), int(to), spans[:n])
		next, spans = int(from), spans[n:]
	}
}

// burnGap takes its reference point in the cells from, ..., next-1 of a row, and
// closes them if they lie in the polygon.
func (b *burner) burnGap(row, from, next int) {
	b.out = b.shape.against(b.in, b.cols.at(float64(from)+0.5), b.rows.at(float64(row)+0.5))
	if b.out > 0 {
		return
	}
	for col := from; col < next; col++ {
		b.enter(row*b.cols.n+col, 2*b.poly+1)
		b.closed[row*b.cols.n+col] = true
	}
}

// burnRun enters the run of the cells from, ..., to of a row with the spans in it.
// The polygon does not reach the run if a ring that keeps the reference point out has
// no edge in it.
func (b *burner) burnRun(row, from, to int, spans []span) {
	slices.SortFunc(spans, func(p, q span) int { return cmp.Compare(p.edge, q.edge) })
	r := run{poly: b.poly, first: int32(len(b.parts))}
	out := b.out
	for n := 0; n < len(spans); {
		ring := b.edges[spans[n].edge].ring
		p := part{first: int32(len(b.near)), odd: b.in[ring] != (ring == 0)}
		for ; n < len(spans) && b.edges[spans[n].edge].ring == ring; n++ {
			b.near = append(b.near, spans[n].edge)
		}
		p.end = int32(len(b.near))
		b.parts = append(b.parts, p)
		if p.odd {
			out--
		}
	}
	if out > 0 {
		b.near, b.parts = b.near[:b.parts[r.first].first], b.parts[:r.first]
		return
	}
	r.end = int32(len(b.parts))
	for col := from; col <= to; col++ {
		b.enter(row*b.cols.n+col, 2*int32(len(b.runs)))
	}
	b.runs = append(b.runs, r)
}

// enter adds an item to the list of a cell that is not closed.
func (b *burner) enter(cell int, item int32) {
	if !b.closed[cell] {
		b.entries = append(b.entries, entry{int32(cell), item})
	}
}
