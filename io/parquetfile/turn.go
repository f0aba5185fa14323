package parquetfile

import (
	"fmt"
	"sync"

	"github.com/xitongsys/parquet-go/parquet"
)

// giant holds the page buffers that only one page in the process may use at a
// time, so that pages of a hundred megabytes in several files at once stay
// within the memory of one.
var giant struct {
	sync.Mutex
	packed, open []byte
}

// needPage turns to the next page with rows where the one at hand has none left.
func (c *cursor) needPage() error {
	for c.left == 0 {
		if c.span.start >= c.span.end {
			return fmt.Errorf("the pages end %d rows before the group does", c.unpaged)
		}
		h, err := c.readHeader()
		if err != nil {
			return err
		}
		if err := c.turn(h); err != nil {
			return err
		}
	}
	return nil
}

func (c *cursor) turn(h *parquet.PageHeader) error {
	switch h.Type {
	case parquet.PageType_DICTIONARY_PAGE:
		return c.readDictionary(h)
	case parquet.PageType_DATA_PAGE, parquet.PageType_DATA_PAGE_V2:
		if max(h.UncompressedPageSize, h.CompressedPageSize) > spillBytes {
			return c.turnGiant(h)
		}
		return c.turnData(h, &c.file.packed, &c.open)
	case parquet.PageType_INDEX_PAGE:
		c.span.start += int64(h.CompressedPageSize)
		return nil
	}
	return fmt.Errorf("a page is of type %d, which is unknown", h.Type)
}

// turnGiant decodes a page of numbers to the scratch file at once. Texts stay
// in memory, decompressed: they have few large columns.
func (c *cursor) turnGiant(h *parquet.PageHeader) error {
	giant.Lock()
	defer giant.Unlock()
	if c.leaf.kind == texts {
		return c.turnData(h, &giant.packed, &c.open)
	}
	if err := c.turnData(h, &giant.packed, &giant.open); err != nil {
		return err
	}
	return c.spill()
}

// spill decodes the rows of the page at hand to the scratch file and goes on
// from there.
func (c *cursor) spill() error {
	rows := c.left
	c.scratch.rewind()
	for c.left > 0 {
		list := c.scratch.numbers[:min(c.left, len(c.scratch.numbers))]
		if err := c.takeNumbers(list); err != nil {
			return err
		}
		if err := c.scratch.writeNumbers(list); err != nil {
			return err
		}
	}
	c.left, c.spilled = rows, true
	return nil
}

// turnData makes the data page behind its header the one at hand.
func (c *cursor) turnData(h *parquet.PageHeader, packed, open *[]byte) error {
	read := c.bodyV1
	if h.Type == parquet.PageType_DATA_PAGE_V2 {
		read = c.bodyV2
	}
	b, err := read(h, packed, open)
	if err != nil {
		return err
	}
	if b.set > 0 {
		if c.leaf.kind == texts {
			err = c.chooseWords(&b)
		} else {
			err = c.chooseNumbers(&b)
		}
	}
	c.left = b.rows
	c.unpaged -= int64(b.rows)
	c.spilled = false
	c.hasNull = b.set < b.rows
	c.levels.reset(b.levels, 1)
	return err
}

func (c *cursor) unknownEncoding(e parquet.Encoding) error {
	return fmt.Errorf("%s values are encoded as %s, which cannot be read", c.leaf.typ, e)
}

// chooseNumbers sets up the decoder of a page's numbers and checks that their
// size is the one it needs.
func (c *cursor) chooseNumbers(b *body) error {
	k, size := c.leaf.kind, c.leaf.kind.size()
	integer := k != doubles && k != floats && k != booleans
	switch b.encoding {
	case parquet.Encoding_PLAIN_DICTIONARY, parquet.Encoding_RLE_DICTIONARY:
		c.numbers = &c.coded
		return c.chooseCoded(&c.coded.indices, b, len(c.coded.dict))
	case parquet.Encoding_PLAIN:
		return c.choosePlain(b)
	case parquet.Encoding_BYTE_STREAM_SPLIT:
		if k == booleans {
			return c.unknownEncoding(b.encoding)
		}
		c.split.kind, c.split.data, c.split.count, c.split.at = k, b.values, b.set, 0
		c.numbers = &c.split
		return wantBytes(b, b.set*size)
	case parquet.Encoding_DELTA_BINARY_PACKED:
		if !integer {
			return c.unknownEncoding(b.encoding)
		}
		c.delta.kind = k
		c.numbers = &c.delta
		return resetCount(&c.delta.delta, b.values, b.set)
	case parquet.Encoding_RLE:
		if k != booleans {
			return c.unknownEncoding(b.encoding)
		}
		return c.chooseRuns(b)
	}
	return c.unknownEncoding(b.encoding)
}

func (c *cursor) choosePlain(b *body) error {
	if c.leaf.kind == booleans {
		c.bits = plainBooleans{data: b.values}
		c.numbers = &c.bits
		return wantBytes(b, (b.set+7)/8)
	}
	c.plain = plainNumbers{c.leaf.kind, b.values}
	c.numbers = &c.plain
	return wantBytes(b, b.set*c.leaf.kind.size())
}

// chooseRuns begins booleans as runs, which have their length before them.
func (c *cursor) chooseRuns(b *body) error {
	if len(b.values) < 4 {
		return errShort
	}
	c.runs.hybrid.reset(b.values[4:], 1)
	c.numbers = &c.runs
	return nil
}

func (c *cursor) chooseCoded(x *indices, b *body, size int) error {
	if !c.hasDict {
		return fmt.Errorf("values refer to a dictionary, and there is none")
	}
	return x.reset(b.values, size)
}

// chooseWords sets up the decoder of a page's texts.
func (c *cursor) chooseWords(b *body) error {
	t := &c.texts
	switch b.encoding {
	case parquet.Encoding_PLAIN:
		t.plain = plainWords{b.values}
		c.words = &t.plain
		return nil
	case parquet.Encoding_PLAIN_DICTIONARY, parquet.Encoding_RLE_DICTIONARY:
		t.coded.dict = &c.dict
		c.words = &t.coded
		return c.chooseCoded(&t.coded.indices, b, len(c.dict.Ends))
	case parquet.Encoding_DELTA_LENGTH_BYTE_ARRAY:
		c.words = &t.length
		return t.length.reset(b.values, b.set)
	case parquet.Encoding_DELTA_BYTE_ARRAY:
		c.words = &t.front
		return t.front.reset(b.values, b.set)
	}
	return c.unknownEncoding(b.encoding)
}

func wantBytes(b *body, size int) error {
	if len(b.values) != size {
		return fmt.Errorf("%d values have %d bytes, want %d", b.set, len(b.values), size)
	}
	return nil
}
