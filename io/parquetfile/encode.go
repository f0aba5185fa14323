package parquetfile

import (
	"fmt"
	"math"
	"slices"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// encoder is what the encoding of a piece needs beside its pages.
type encoder struct {
	levels []uint8
	codes  []uint8
	names  []uint32 // codes of a label held by row
	coded  []byte   // levels, encoded
	runs   []byte   // codes, encoded
	merged []float64
}

// Encode makes one page of every new column.
func (f *File) Encode(c *cloud.Chunk) error {
	p := pieceOf(c)
	if err := f.out.encode(c, p); err != nil {
		return fmt.Errorf("%s: %w", f.path, err)
	}
	return nil
}

func (o *output) encode(c *cloud.Chunk, p *piece) error {
	g := &p.pages
	g.bytes, g.ends, g.stats = slices.Grow(g.bytes[:0], o.pieceBytes(c.Rows)), g.ends[:0], g.stats[:0]
	g.counts = [256]int64{}
	for _, class := range c.Class[:c.Rows] {
		g.counts[class]++
	}
	for class := len(o.layout.Moved); class < len(g.counts); class++ {
		if g.counts[class] > 0 {
			return fmt.Errorf("a row has class %d, want below %d", class, len(o.layout.Moved))
		}
	}
	for k := range p.raw {
		if err := o.encodeCoordinate(c, p, k); err != nil {
			return err
		}
	}
	for i := range o.layout.Added {
		if err := o.encodeAdded(c, p, i); err != nil {
			return err
		}
	}
	return nil
}

// pieceBytes is about what the new pages of a piece take: memory that grows by
// steps would be copied as often.
func (o *output) pieceBytes(rows int) int {
	byRow := len(o.layout.XYZ)
	for _, a := range o.layout.Added {
		if a.ByClass == nil {
			byRow++
		}
	}
	return byRow*(8*rows+rows/8) + 64*(3+len(o.layout.Added))
}

// encodeCoordinate takes new coordinates where the class says so and raw ones
// elsewhere.
func (o *output) encodeCoordinate(c *cloud.Chunk, p *piece, k int) error {
	var moved [256]bool
	copy(moved[:], o.layout.Moved)
	e := &p.work
	e.merged = cloud.Grow(e.merged, c.Rows)
	raw, now := p.raw[k][:c.Rows], c.XYZ[k]
	for i, class := range c.Class[:c.Rows] {
		switch v := now[i]; {
		case !moved[class]:
			e.merged[i] = raw[i]
		case v != v:
			e.merged[i] = null
		default:
			e.merged[i] = v
		}
	}
	return e.numbers(&p.pages, e.merged, cloud.Float, isMarked)
}

func (o *output) encodeAdded(c *cloud.Chunk, p *piece, i int) error {
	a, d := &o.layout.Added[i], o.dictionaries[i]
	var err error
	switch {
	case a.ByClass != nil:
		return p.work.classes(&p.pages, c.Class[:c.Rows], d)
	case a.Type == cloud.Label:
		err = p.work.labels(&p.pages, c.Added[i][:c.Rows], d)
	default:
		err = p.work.numbers(&p.pages, c.Added[i][:c.Rows], a.Type, isNaN)
	}
	if err != nil {
		return fmt.Errorf("column %q: %w", a.Name, err)
	}
	return nil
}

// isNaN is the null of columns that were computed, isMarked that of columns
// which may repeat a NaN of the input.
func isNaN(v float64) bool    { return v != v }
func isMarked(v float64) bool { return math.Float64bits(v) == nullBits }

// numbers encodes one page by row: DOUBLE or INT32, PLAIN, with null where the
// predicate holds.
func (e *encoder) numbers(g *pages, list []float64, t cloud.Type, isNull func(float64) bool) error {
	s := statsOf(list)
	set := list
	e.coded = e.coded[:0]
	if s.nulls > 0 {
		set = e.dropNulls(list, isNull)
	}
	nulls := int64(len(list) - len(set))
	s.nulls, s.nans = nulls, s.nulls-nulls
	e.coded = e.appendLevels(e.coded, len(list), len(set))
	size := 8
	if t == cloud.Count {
		size = 4
	}
	if err := g.header(parquet.Encoding_PLAIN, len(list), len(e.coded)+size*len(set)); err != nil {
		return err
	}
	g.bytes = append(g.bytes, e.coded...)
	if t == cloud.Count {
		if err := g.appendCounts(set); err != nil {
			return err
		}
	} else {
		g.appendFloats(set)
	}
	g.close(s)
	return nil
}

// dropNulls sets the levels and returns the values that are set; they lie in
// merged, which may be the list itself.
func (e *encoder) dropNulls(list []float64, isNull func(float64) bool) []float64 {
	e.levels = cloud.Grow(e.levels, len(list))
	e.merged = cloud.Grow(e.merged, len(list))
	n := 0
	for i, v := range list {
		if v == v || !isNull(v) {
			e.levels[i] = 1
			e.merged[n] = v
			n++
		} else {
			e.levels[i] = 0
		}
	}
	return e.merged[:n]
}
