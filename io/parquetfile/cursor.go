package parquetfile

import (
	"errors"
	"fmt"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// cursor reads one column of one row group after the other, as many rows at a
// time as it is asked for.
type cursor struct {
	file    *File
	leaf    *leaf
	index   int // of the column
	group   int
	codec   parquet.CompressionCodec
	span    span    // of the chunk, as far as it is not read
	unpaged int64   // rows of the group in pages to come
	left    int     // rows of the page at hand
	step    float64 // coarsest of a FLOAT; 0 is any
	hasNull bool
	levels  hybrid
	spilled bool // the page at hand lies in scratch
	scratch scratch
	stored  bool        // values are handed over as they are stored
	few     cloud.Texts // on their way to it
	hasDict bool
	dict    cloud.Texts

	numbers numbers // the decoder of the page at hand: one of those below
	words   words
	plain   plainNumbers
	bits    plainBooleans
	coded   codedNumbers
	runs    runBooleans
	delta   deltaNumbers
	split   splitNumbers
	texts   struct {
		plain  plainWords
		coded  codedWords
		length lengthWords
		front  frontWords
		stored storedWords
	}

	open       []byte // page data, decompressed
	headBuffer [4 << 10]byte
	levelList  [block]uint64
}

// begin turns to the column's chunk in a row group.
func (c *cursor) begin(group int) error {
	g := c.file.groups[group]
	m := g.Columns[c.index].MetaData
	s, err := chunkSpan(m, c.file.footer)
	if err != nil {
		return c.fail(err)
	}
	c.group, c.codec, c.span = group, m.Codec, s
	c.unpaged, c.left, c.hasDict = g.NumRows, 0, false
	if !knownCodec(m.Codec) {
		return c.fail(fmt.Errorf("is compressed with %s, want none, SNAPPY, GZIP or ZSTD", m.Codec))
	}
	return nil
}

// fail says where in the input an error is.
func (c *cursor) fail(err error) error {
	var scratch *scratchError
	if errors.As(err, &scratch) {
		return fmt.Errorf("%s: %w", c.file.path, err)
	}
	return fmt.Errorf("%s: column %q, row group %d: %w", c.file.path, c.leaf.name, c.group+1, err)
}

// readNumbers decodes the next len(dst) rows; the group has that many left.
func (c *cursor) readNumbers(dst []float64) error {
	for len(dst) > 0 {
		if err := c.needPage(); err != nil {
			return c.fail(err)
		}
		n := min(len(dst), c.left)
		if err := c.takeNumbers(dst[:n]); err != nil {
			return c.fail(err)
		}
		dst = dst[n:]
	}
	return nil
}

// readTexts decodes the next rows; the group has that many left.
func (c *cursor) readTexts(t *cloud.Texts, rows int) error {
	for rows > 0 {
		if err := c.needPage(); err != nil {
			return c.fail(err)
		}
		n := min(rows, c.left)
		if err := c.takeTexts(t, n); err != nil {
			return c.fail(err)
		}
		rows -= n
	}
	return nil
}

// takeNumbers decodes rows of the page at hand.
func (c *cursor) takeNumbers(dst []float64) error {
	c.left -= len(dst)
	if c.spilled {
		return c.scratch.readNumbers(dst)
	}
	if !c.hasNull {
		return c.numbers.next(dst)
	}
	for len(dst) > 0 {
		n := min(len(dst), block)
		set, err := c.nextLevels(n)
		if err != nil {
			return err
		}
		if set > 0 { // a page without values has no decoder
			if err := c.numbers.next(dst[:set]); err != nil {
				return err
			}
		}
		spread(dst[:n], c.levelList[:n], set)
		dst = dst[n:]
	}
	return nil
}

// nextLevels reads up to a block of definition levels and counts those set.
func (c *cursor) nextLevels(n int) (set int, err error) {
	if err := c.levels.next(c.levelList[:n]); err != nil {
		return 0, err
	}
	for _, l := range c.levelList[:n] {
		set += int(l)
	}
	return set, nil
}

// spread moves the first set values to the rows that have one, from the back,
// and puts null into the others.
func spread(dst []float64, levels []uint64, set int) {
	for i := len(dst) - 1; i >= 0; i-- {
		if levels[i] == 0 {
			dst[i] = null
			continue
		}
		set--
		dst[i] = dst[set]
	}
}

// takeTexts decodes rows of the page at hand.
func (c *cursor) takeTexts(t *cloud.Texts, rows int) error {
	c.left -= rows
	if c.spilled {
		return c.scratch.readTexts(t, rows)
	}
	if !c.hasNull {
		return c.words.next(t, rows)
	}
	for rows > 0 {
		n := min(rows, block)
		set, err := c.nextLevels(n)
		if err != nil {
			return err
		}
		from := len(t.Ends)
		if set > 0 {
			if err := c.words.next(t, set); err != nil {
				return err
			}
		}
		spreadEnds(t, from, c.levelList[:n], set)
		rows -= n
	}
	return nil
}

// spreadEnds does for texts what spread does for numbers: a null ends where the
// text before it does.
func spreadEnds(t *cloud.Texts, from int, levels []uint64, set int) {
	t.Ends = append(t.Ends, make([]int, len(levels)-set)...)
	begin := 0
	if from > 0 {
		begin = t.Ends[from-1]
	}
	ends := t.Ends[from:]
	for i := len(ends) - 1; i >= 0; i-- {
		switch {
		case set == 0:
			ends[i] = begin
		case levels[i] == 0:
			ends[i] = ends[set-1]
		default:
			set--
			ends[i] = ends[set]
		}
	}
}
