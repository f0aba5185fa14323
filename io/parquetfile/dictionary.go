package parquetfile

import (
	"fmt"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// readDictionary reads the values that later pages of the chunk refer to.
func (c *cursor) readDictionary(h *parquet.PageHeader, packed, open *[]byte) error {
	d := h.DictionaryPageHeader
	switch {
	case d == nil:
		return fmt.Errorf("a dictionary page lacks its own header")
	case c.hasDict:
		return fmt.Errorf("there are two dictionaries, want one")
	case d.Encoding != parquet.Encoding_PLAIN && d.Encoding != parquet.Encoding_PLAIN_DICTIONARY:
		return fmt.Errorf("the dictionary is encoded as %s, want PLAIN", d.Encoding)
	case h.UncompressedPageSize > maxDictBytes:
		return fmt.Errorf("the dictionary has %d bytes, want at most %d", h.UncompressedPageSize, maxDictBytes)
	case d.NumValues < 0:
		return fmt.Errorf("the dictionary has %d values", d.NumValues)
	}
	data, err := c.load(h, 0, c.codec != parquet.CompressionCodec_UNCOMPRESSED, packed, open)
	if err != nil {
		return err
	}
	c.hasDict = true
	if c.leaf.kind == texts {
		return c.dictWords(data, int(d.NumValues))
	}
	return c.dictNumbers(data, int(d.NumValues))
}

func (c *cursor) dictNumbers(data []byte, count int) error {
	if c.leaf.kind == booleans || len(data) != count*c.leaf.kind.size() {
		return fmt.Errorf("the dictionary of %d values has %d bytes", count, len(data))
	}
	c.coded.dict = cloud.Grow(c.coded.dict, count)
	convert(c.coded.dict, data, c.leaf.kind)
	return nil
}

func (c *cursor) dictWords(data []byte, count int) error {
	if int64(count) > int64(len(data)/4) {
		return fmt.Errorf("the dictionary of %d texts has %d bytes", count, len(data))
	}
	c.dict.Reset()
	list := plainWords{data}
	return list.next(&c.dict, count)
}
