package quality

import (
	"cmp"
	"maps"
	"math"
	"slices"
)

// overlap adds points up by cell and flight line, to compare lines in the cells that
// they share. Where cells are many it keeps a share of them, chosen by chance in blocks,
// so that they can be made wider.
type overlap struct {
	column  string  // that tells lines apart
	side    float64 // of a cell
	lines   *names
	mask    uint64
	cells   map[lineCell]*moments
	skipped int64 // points of too many lines
}

// lineCell is a square cell as one line saw it.
type lineCell struct {
	col, row int64
	line     int32
}

// moments are sums over points, with plan offsets from the middle of the cell.
type moments struct {
	n, u, v, z, uu, uv, vv, uz, vz float64
	depth, incidence               float64
}

const (
	maxLineCells = 1 << 17 // cells times lines that are kept
	maxLines     = 1 << 12
	leastPoints  = 3   // of a line in a cell
	doublings    = 4   // of a cell's side, at most
	enoughCells  = 100 // differences, for which cells need not be wider
)

func newOverlap(side float64) *overlap {
	return &overlap{side: side, lines: newNames(), cells: map[lineCell]*moments{}}
}

// takes tells whether a cell is among those kept.
func (o *overlap) takes(col, row int64) bool {
	return o.mask == 0 || mix(mix(uint64(col>>doublings))^uint64(row>>doublings))&o.mask == 0
}

// add takes a corrected point of a line.
func (o *overlap) add(line []byte, x, y, z, depth, incidence float64) {
	if !isBinned(x) || !isBinned(y) {
		return
	}
	col, row := int64(math.Floor(x/o.side)), int64(math.Floor(y/o.side))
	if !o.takes(col, row) {
		return
	}
	number := o.lines.of(line)
	if number >= maxLines {
		o.lines.forget(maxLines)
		o.skipped++
		return
	}
	m := o.at(lineCell{col, row, int32(number)})
	m.add(x-(float64(col)+0.5)*o.side, y-(float64(row)+0.5)*o.side, z)
	m.depth += depth
	m.incidence += incidence
}

// at returns the moments of a cell, which are new where it was empty.
func (o *overlap) at(at lineCell) *moments {
	m := o.cells[at]
	if m == nil {
		m = new(moments)
		o.cells[at] = m
		for len(o.cells) > maxLineCells {
			o.setMask(o.mask<<1 | 1)
		}
	}
	return m
}

func (o *overlap) setMask(mask uint64) {
	o.mask = mask
	maps.DeleteFunc(o.cells, func(at lineCell, _ *moments) bool { return !o.takes(at.col, at.row) })
}

func (m *moments) add(u, v, z float64) {
	m.n++
	m.u += u
	m.v += v
	m.z += z
	m.uu += u * u
	m.uv += u * v
	m.vv += v * v
	m.uz += u * z
	m.vz += v * z
}

func (m *moments) join(o *moments) {
	m.n += o.n
	m.u += o.u
	m.v += o.v
	m.z += o.z
	m.uu += o.uu
	m.uv += o.uv
	m.vv += o.vv
	m.uz += o.uz
	m.vz += o.vz
	m.depth += o.depth
	m.incidence += o.incidence
}

// join adds the cells of another file, whose lines have other numbers.
func (o *overlap) join(other *overlap) {
	mask := max(o.mask, other.mask)
	o.setMask(mask)
	other.setMask(mask)
	for _, at := range other.sorted() {
		to := at
		to.line = int32(o.lines.of([]byte(other.lines.list[at.line])))
		if to.line >= maxLines {
			o.lines.forget(maxLines)
			o.skipped += int64(other.cells[at].n)
		} else if o.takes(to.col, to.row) {
			o.at(to).join(other.cells[at])
		}
	}
	o.skipped += other.skipped
	o.column = cmp.Or(o.column, other.column)
}

// sorted lists the cells by place, then by line.
func (o *overlap) sorted() []lineCell {
	return slices.SortedFunc(maps.Keys(o.cells), func(a, b lineCell) int {
		return cmp.Or(cmp.Compare(a.row, b.row), cmp.Compare(a.col, b.col), cmp.Compare(a.line, b.line))
	})
}

// slopes are those that several lines share in a cell: least squares about each line's
// own mean. False where the points do not give them.
func slopes(lines []*moments) (sx, sy float64, ok bool) {
	var uu, uv, vv, uz, vz, n float64
	for _, m := range lines {
		uu += m.uu - m.u*m.u/m.n
		uv += m.uv - m.u*m.v/m.n
		vv += m.vv - m.v*m.v/m.n
		uz += m.uz - m.u*m.z/m.n
		vz += m.vz - m.v*m.z/m.n
		n += m.n - 1
	}
	det := uu*vv - uv*uv
	if n < 3 || !(det > 0.01*uu*vv) {
		return 0, 0, false
	}
	return (uz*vv - vz*uv) / det, (vz*uu - uz*uv) / det, true
}

// height is that of a line in the middle of the cell, with the given slopes.
func (m *moments) height(sx, sy float64) float64 { return (m.z - sx*m.u - sy*m.v) / m.n }
