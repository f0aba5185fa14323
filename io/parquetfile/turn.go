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

// end reads what follows the last row, which may be pages without rows alone.
func (c *cursor) end() error {
	for c.span.start < c.span.end {
		h, err := c.readHeader()
		if err != nil {
			return fmt.Errorf("behind the last row: %w", err)
		}
		if err := c.turn(h); err != nil {
			return fmt.Errorf("behind the last row: %w", err)
		}
	}
	return nil
}

func (c *cursor) turn(h *parquet.PageHeader) error {
	isGiant := max(h.UncompressedPageSize, h.CompressedPageSize) > spillBytes
	switch h.Type {
	case parquet.PageType_DICTIONARY_PAGE:
		if isGiant {
			defer useGiant()()
			return c.readDictionary(h, &giant.packed, &giant.open)
		}
		return c.readDictionary(h, &c.file.packed, &c.open)
	case parquet.PageType_DATA_PAGE, parquet.PageType_DATA_PAGE_V2:
		if isGiant {
			return c.turnGiant(h)
		}
		return c.turnData(h, &c.file.packed, &c.open)
	case parquet.PageType_INDEX_PAGE:
		c.span.start += int64(h.CompressedPageSize)
		return nil
	}
	return fmt.Errorf("a page is of type %d, which is unknown", h.Type)
}

// useGiant waits for the giant buffers, and returns what gives them back. Their
// memory is let go each time: it would stay for good for the sake of one page.
func useGiant() (done func()) {
	giant.Lock()
	return func() {
		giant.packed, giant.open = nil, nil
		giant.Unlock()
	}
}

// turnGiant decodes a page to the scratch file at once. Indices of texts stay in
// memory: they have a smaller cap, and their texts may be very long.
func (c *cursor) turnGiant(h *parquet.PageHeader) error {
	defer useGiant()()
	if _, e := headOf(h); c.leaf.kind == texts && isDictionaryCoded(e) {
		return c.turnData(h, &giant.packed, &c.open)
	}
	if err := c.turnData(h, &giant.packed, &giant.open); err != nil {
		return err
	}
	defer c.forget()
	if c.leaf.kind == texts || c.stored {
		return c.spillTexts()
	}
	return c.spill()
}

// forget drops what the decoders know of a page, so that its memory can go.
func (c *cursor) forget() {
	c.levels, c.coded.hybrid, c.runs.hybrid = hybrid{}, hybrid{}, hybrid{}
	c.plain.data, c.bits.data, c.split.data = nil, nil, nil
	c.delta.data, c.delta.widths, c.delta.packed = nil, nil, nil
	c.texts.plain.data, c.texts.length = nil, lengthWords{}
	c.texts.front.prefixes, c.texts.front.suffixes = delta{}, lengthWords{}
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

// spillTexts does for texts what spill does for numbers.
func (c *cursor) spillTexts() error {
	rows := c.left
	c.scratch.rewind()
	for c.left > 0 {
		c.few.Reset()
		if err := c.takeTexts(&c.few, min(c.left, textRows)); err != nil {
			return err
		}
		if err := c.scratch.writeTexts(&c.few); err != nil {
			return err
		}
	}
	c.scratch.beginTexts()
	c.left, c.spilled = rows, true
	return nil
}

// turnData makes the data page behind its header the one at hand.
func (c *cursor) turnData(h *parquet.PageHeader, packed, open *[]byte) error {
	if err := c.checkSize(h); err != nil {
		return err
	}
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
		if c.stored {
			c.chooseStored()
		}
	}
	c.left = b.rows
	c.unpaged -= int64(b.rows)
	c.spilled = false
	c.hasNull = b.set < b.rows
	c.levels.reset(b.levels, 1)
	return err
}

// checkSize refuses a page whose numbers would take more bytes than any encoding
// has for them, before they are decompressed: 8 for a value and 2 for its level
// at most, and a block of differences. Texts may have any length.
func (c *cursor) checkSize(h *parquet.PageHeader) error {
	rows, encoding := headOf(h)
	most := 16*int64(max(rows, 0)) + 1<<16
	if c.leaf.kind == texts {
		if most = maxIndexBytes; !isDictionaryCoded(encoding) {
			return nil
		}
	}
	if int64(h.UncompressedPageSize) > most {
		return fmt.Errorf("a page of %d values has %d bytes, want at most %d", rows, h.UncompressedPageSize, most)
	}
	return nil
}

// headOf returns the values and the encoding of a data page; 0 and PLAIN where
// it does not say.
func headOf(h *parquet.PageHeader) (rows int32, e parquet.Encoding) {
	switch {
	case h.Type == parquet.PageType_DATA_PAGE && h.DataPageHeader != nil:
		return h.DataPageHeader.NumValues, h.DataPageHeader.Encoding
	case h.Type == parquet.PageType_DATA_PAGE_V2 && h.DataPageHeaderV2 != nil:
		return h.DataPageHeaderV2.NumValues, h.DataPageHeaderV2.Encoding
	}
	return 0, parquet.Encoding_PLAIN
}

func isDictionaryCoded(e parquet.Encoding) bool {
	return e == parquet.Encoding_PLAIN_DICTIONARY || e == parquet.Encoding_RLE_DICTIONARY
}
