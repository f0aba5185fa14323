package quality

// moved is the same seen from the middle of another cell, which lies at -u, -v.
func (m moments) moved(u, v float64) *moments {
	m.uu += 2*u*m.u + u*u*m.n
	m.uv += u*m.v + v*m.u + u*v*m.n
	m.vv += 2*v*m.v + v*v*m.n
	m.uz += u * m.z
	m.vz += v * m.z
	m.u += u * m.n
	m.v += v * m.n
	return &m
}

// wider has cells of twice the side.
func (o *overlap) wider() *overlap {
	w := &overlap{column: o.column, side: 2 * o.side, lines: o.lines, mask: o.mask, cells: map[lineCell]*moments{}, skipped: o.skipped}
	for _, at := range o.sorted() {
		to := lineCell{at.col >> 1, at.row >> 1, at.line}
		m := o.cells[at].moved((float64(at.col&1)-0.5)*o.side, (float64(at.row&1)-0.5)*o.side)
		if w.cells[to] == nil {
			w.cells[to] = new(moments)
		}
		w.cells[to].join(m)
	}
	return w
}

// widened returns the overlap with the smallest cells that give differences enough, or
// else those that give most.
func (o *overlap) widened() (*overlap, []difference) {
	best, list := o, o.differences()
	for range doublings {
		if len(list) >= enoughCells {
			break
		}
		o = o.wider()
		if more := o.differences(); len(more) > len(list) {
			best, list = o, more
		}
	}
	return best, list
}
