package pipeline

import (
	"bytes"
	"cmp"
	"slices"

	"bentray/io/cloud"
)

// deviation is a value of an output that is not the one computed.
type deviation struct {
	row       int64 // from 1; in a chunk from 0
	line      int64 // of a text; else 0
	column    int   // x y z, then the added ones
	got, want string
}

// deviations are those of a run of rows.
type deviations struct {
	counts []int64     // by column
	list   []deviation // the first ones
	near   int64       // values that are not equal to the bit, and yet agree
}

// mostDeviations of a file are told one by one.
const mostDeviations = 10

// compare holds the values of a corrected chunk against those that the output has.
func (c *recheck) compare(s *slot) {
	if s.found == nil {
		s.found = &deviations{}
	}
	d := s.found
	d.counts = cloud.Grow(d.counts, len(c.columns))
	clear(d.counts)
	d.list, d.near = d.list[:0], 0
	for k, at := range c.xyz {
		c.compareNumbers(d, k, s.chunk.Numbers[at], s.chunk.XYZ[k], &s.chunk)
	}
	for i, at := range c.added {
		column, a := len(c.xyz)+i, &c.layout.Added[i]
		switch {
		case a.Type == cloud.Label:
			c.compareLabels(d, column, &s.chunk.Texts[at], &s.chunk)
		case a.ByClass != nil:
			c.compareClasses(d, column, s.chunk.Numbers[at], &s.chunk)
		default:
			c.compareNumbers(d, column, s.chunk.Numbers[at], s.chunk.Added[i], &s.chunk)
		}
	}
	slices.SortFunc(d.list, func(a, b deviation) int {
		return cmp.Or(cmp.Compare(a.row, b.row), cmp.Compare(a.column, b.column))
	})
}

// compareNumbers compares numbers that differ from row to row. A coordinate of a point
// that is not corrected repeats its raw value.
func (c *recheck) compareNumbers(d *deviations, column int, got, want []float64, chunk *cloud.Chunk) {
	g, isCoordinate := &c.columns[column], column < len(c.xyz)
	for i, v := range got {
		w := want[i]
		if v == w {
			continue
		}
		isRaw := isCoordinate && !c.layout.Moved[chunk.Class[i]]
		switch {
		case isRaw && (v == v || w == w), !isRaw && !g.holds(v, w):
			if d.isNext(column) {
				d.add(i, column, showNumber(v), g.show(w))
			}
		case !g.isText && v == v:
			d.near++
		}
	}
}

func (c *recheck) compareClasses(d *deviations, column int, got []float64, chunk *cloud.Chunk) {
	g := &c.columns[column]
	for i, v := range got {
		w := g.byClass[chunk.Class[i]]
		switch {
		case v == w:
		case !g.holds(v, w):
			if d.isNext(column) {
				d.add(i, column, showNumber(v), g.show(w))
			}
		case v == v:
			d.near++
		}
	}
}

func (c *recheck) compareLabels(d *deviations, column int, got *cloud.Texts, chunk *cloud.Chunk) {
	g := &c.columns[column]
	codes := chunk.Added[column-len(c.xyz)]
	for i := range chunk.Rows {
		var want []byte
		if g.byClass != nil {
			want = g.labels[chunk.Class[i]]
		} else if code := codes[i]; code == code {
			want = g.labels[int(code)]
		}
		if text := got.At(i); !bytes.Equal(text, want) && d.isNext(column) {
			d.add(i, column, showText(text), showText(want))
		}
	}
}

// isNext counts a deviation in a column, and tells whether it is one of the first.
func (d *deviations) isNext(column int) bool {
	d.counts[column]++
	return d.counts[column] <= mostDeviations
}

func (d *deviations) add(row, column int, got, want string) {
	d.list = append(d.list, deviation{row: int64(row), column: column, got: got, want: want})
}

// join adds the deviations of the chunk behind so many rows, whose lines a text tells.
func (d *deviations) join(o *deviations, rows int64, line func(row int) int64) {
	for k, n := range o.counts {
		d.counts[k] += n
	}
	d.near += o.near
	for _, one := range o.list[:min(len(o.list), mostDeviations-len(d.list))] {
		one.line = line(int(one.row))
		one.row += rows + 1
		d.list = append(d.list, one)
	}
}

func (d *deviations) total() (n int64) {
	for _, k := range d.counts {
		n += k
	}
	return n
}
