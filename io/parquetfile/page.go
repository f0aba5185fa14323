package parquetfile

import (
	"encoding/binary"
	"fmt"
	"hash/crc32"

	"github.com/xitongsys/parquet-go/parquet"
)

// body is a data page whose head was checked and whose data are decompressed.
type body struct {
	rows     int // values, with nulls
	set      int // of them, those not null
	encoding parquet.Encoding
	levels   []byte // definition levels as runs of width 1; empty where all are set
	values   []byte
}

// readHeader reads the page header at the cursor and steps over it. Pages are
// found in no other way, so a header that lies ends the chunk.
func (c *cursor) readHeader() (*parquet.PageHeader, error) {
	left := min(c.span.end-c.span.start, maxHeaderBytes)
	for n := min(left, int64(len(c.headBuffer))); ; n = min(8*n, left) {
		b := c.headBuffer[:]
		if n > int64(len(b)) {
			b = make([]byte, n)
		}
		if err := readAt(c.file.input, b[:n], c.span.start); err != nil {
			return nil, err
		}
		h := parquet.NewPageHeader()
		used, err := readThrift(b[:n], h)
		if err == nil {
			c.span.start += int64(used)
			return h, c.checkHeader(h)
		}
		if n == left {
			return nil, fmt.Errorf("a page header is damaged: %w", err)
		}
	}
}

// checkHeader checks the sizes before anything is allocated for them.
func (c *cursor) checkHeader(h *parquet.PageHeader) error {
	packed, size := int64(h.CompressedPageSize), int64(h.UncompressedPageSize)
	switch left := c.span.end - c.span.start; {
	case packed < 0 || packed > left:
		return fmt.Errorf("a page says it has %d bytes, want at most the %d that are left of the chunk", packed, left)
	case size < 0 || size > maxPageBytes || packed > maxPageBytes:
		return fmt.Errorf("a page has %d bytes, %d decompressed, want at most %d; write the file with smaller pages", packed, size, maxPageBytes)
	}
	return nil
}

// load reads and decompresses the page behind its header, of which the first
// plain bytes are stored as they are. The result may lie in either buffer.
func (c *cursor) load(h *parquet.PageHeader, plain int, compressed bool, packed, open *[]byte) ([]byte, error) {
	stored, size := int(h.CompressedPageSize), int(h.UncompressedPageSize)
	if plain > stored || plain > size {
		return nil, fmt.Errorf("a page has %d bytes of levels, want at most its %d bytes", plain, min(stored, size))
	}
	if !compressed {
		packed = open
	}
	room(packed, stored)
	if err := readAt(c.file.input, *packed, c.span.start); err != nil {
		return nil, err
	}
	c.span.start += int64(stored)
	if h.Crc != nil && crc32.ChecksumIEEE(*packed) != uint32(*h.Crc) {
		return nil, fmt.Errorf("the checksum of a page is %08x, want %08x; the file is damaged", crc32.ChecksumIEEE(*packed), uint32(*h.Crc))
	}
	if !compressed {
		if stored != size {
			return nil, fmt.Errorf("a page that is not compressed has %d bytes, want %d as it says", stored, size)
		}
		return *packed, nil
	}
	room(open, size)
	copy(*open, (*packed)[:plain])
	if size == plain {
		return *open, nil // some writers store nothing, others a codec's empty frame
	}
	return *open, c.file.inflater.inflate((*open)[plain:], (*packed)[plain:], c.codec)
}

// room makes b a slice of n bytes, the same memory where that is large enough.
// New memory is a little larger, as the next page may be, but not where it is much.
func room(b *[]byte, n int) {
	if cap(*b) >= n {
		*b = (*b)[:n]
		return
	}
	spare := n / 8
	if n > spillBytes {
		spare = 0
	}
	*b = nil // before the new memory is taken
	*b = make([]byte, n, n+spare)
}

// bodyV1 opens a data page of version 1: levels lie before the values, with
// their length, and are compressed with them.
func (c *cursor) bodyV1(h *parquet.PageHeader, packed, open *[]byte) (body, error) {
	d := h.DataPageHeader
	if d == nil {
		return body{}, fmt.Errorf("a data page lacks its own header")
	}
	b := body{rows: int(d.NumValues), encoding: d.Encoding}
	data, err := c.load(h, 0, c.codec != parquet.CompressionCodec_UNCOMPRESSED, packed, open)
	if err != nil {
		return body{}, err
	}
	if c.leaf.optional && b.rows > 0 {
		if d.DefinitionLevelEncoding != parquet.Encoding_RLE {
			return body{}, fmt.Errorf("definition levels are encoded as %s, want RLE", d.DefinitionLevelEncoding)
		}
		if len(data) < 4 {
			return body{}, errShort
		}
		n := int64(binary.LittleEndian.Uint32(data))
		if n > int64(len(data)-4) {
			return body{}, fmt.Errorf("a page has %d bytes of levels, want at most its %d bytes", n, len(data)-4)
		}
		b.levels, data = data[4:4+n], data[4+n:]
	}
	b.values = data
	return b, c.count(&b)
}

// bodyV2 opens a data page of version 2: levels lie before the values and are
// never compressed. Some writers store repetition levels, all 0, of flat columns
// too; they come first.
func (c *cursor) bodyV2(h *parquet.PageHeader, packed, open *[]byte) (body, error) {
	d := h.DataPageHeaderV2
	if d == nil {
		return body{}, fmt.Errorf("a data page lacks its own header")
	}
	defined, repeated := int64(d.DefinitionLevelsByteLength), int64(d.RepetitionLevelsByteLength)
	n := repeated + defined
	if defined < 0 || repeated < 0 || n > int64(h.CompressedPageSize) {
		return body{}, fmt.Errorf("a page has %d and %d bytes of levels, want at most its %d bytes", repeated, defined, h.CompressedPageSize)
	}
	compressed := d.IsCompressed && c.codec != parquet.CompressionCodec_UNCOMPRESSED
	data, err := c.load(h, int(n), compressed, packed, open)
	if err != nil {
		return body{}, err
	}
	b := body{rows: int(d.NumValues), encoding: d.Encoding, values: data[n:]}
	if c.leaf.optional {
		b.levels = data[repeated:n]
	}
	if err := c.count(&b); err != nil {
		return body{}, err
	}
	if b.rows-b.set != int(d.NumNulls) {
		return body{}, fmt.Errorf("a page has %d nulls, want %d as it says", b.rows-b.set, d.NumNulls)
	}
	return b, nil
}

// count finds how many values are set, and drops levels that say all are.
func (c *cursor) count(b *body) (err error) {
	if b.rows < 0 || int64(b.rows) > c.unpaged {
		return fmt.Errorf("a page has %d values, want at most the %d that are left of the group", b.rows, c.unpaged)
	}
	b.set = b.rows
	if c.leaf.optional {
		var h hybrid
		h.reset(b.levels, 1)
		if b.set, err = h.ones(b.rows); err != nil {
			return fmt.Errorf("definition levels: %w", err)
		}
	}
	if b.set == b.rows {
		b.levels = nil
	}
	return nil
}
