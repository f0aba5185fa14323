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
	var rows int32
	switch {
	case h.Type == parquet.PageType_DATA_PAGE && h.DataPageHeader != nil:
		rows = h.DataPageHeader.NumValues
	case h.Type == parquet.PageType_DATA_PAGE_V2 && h.DataPageHeaderV2 != nil:
		rows = h.DataPageHeaderV2.NumValues
	}
	most := 16*int64(max(rows, 0)) + 1<<16
	if c.leaf.kind != texts && int64(h.UncompressedPageSize) > most {
		return fmt.Errorf("a page of %d values has %d bytes, want at most %d", rows, h.UncompressedPageSize, most)
	}
	return nil
}
