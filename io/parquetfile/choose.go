package parquetfile

import (
	"fmt"

	"github.com/xitongsys/parquet-go/parquet"
)

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
