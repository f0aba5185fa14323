package parquetfile

import (
	"bytes"
	"compress/gzip"
	"encoding/binary"
	"math"
	"os"
	"path/filepath"
	"sync"
	"testing"

	"github.com/klauspost/compress/s2"
	"github.com/klauspost/compress/zstd"
	"github.com/xitongsys/parquet-go/parquet"
)

// The encoders of this file are an independent second opinion on the format:
// plain and slow, written from its specification, and sharing nothing with the
// code under test but the structures of headers and footer.

// built is a column of a file made by hand. A value is nil for null, else a
// float64, float32, int32, int64, bool or string as its type says.
type built struct {
	name     string
	typ      parquet.Type
	required bool
	mark     func(*parquet.SchemaElement) // adds annotations
	values   []any
	encoding parquet.Encoding
	codec    parquet.CompressionCodec
	version  int   // of data pages: 1 or 2
	pages    []int // rows of the pages of a group; the last one takes the rest
	style    style // of levels and indices
	checksum bool
	stats    *parquet.Statistics
}

// style says how runs are made where the format leaves a choice.
type style int

const (
	runsOnly style = iota
	packedOnly
	mixed
)

// buildFile writes a file with the given rows in each row group and returns its
// path. Change, if not nil, sees the footer before it is written.
func buildFile(t testing.TB, columns []built, groups []int, change func(*parquet.FileMetaData)) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "made.parquet")
	if err := os.WriteFile(path, buildBytes(t, columns, groups, change), 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

func buildBytes(t testing.TB, columns []built, groups []int, change func(*parquet.FileMetaData)) []byte {
	t.Helper()
	out := []byte("PAR1")
	n := int32(len(columns))
	meta := &parquet.FileMetaData{Version: 1, Schema: []*parquet.SchemaElement{{Name: "root", NumChildren: &n}}}
	for _, c := range columns {
		meta.Schema = append(meta.Schema, c.element())
		meta.ColumnOrders = append(meta.ColumnOrders, &parquet.ColumnOrder{TYPE_ORDER: parquet.NewTypeDefinedOrder()})
	}
	row := 0
	for _, rows := range groups {
		g := &parquet.RowGroup{NumRows: int64(rows)}
		for _, c := range columns {
			var chunk *parquet.ColumnChunk
			chunk, out = c.chunk(t, out, c.values[row:row+rows])
			g.Columns = append(g.Columns, chunk)
		}
		row += rows
		meta.NumRows += int64(rows)
		meta.RowGroups = append(meta.RowGroups, g)
	}
	if change != nil {
		change(meta)
	}
	return appendFooter(t, out, meta)
}

func appendFooter(t testing.TB, out []byte, meta *parquet.FileMetaData) []byte {
	footer := thriftBytes(t, meta)
	out = append(out, footer...)
	out = binary.LittleEndian.AppendUint32(out, uint32(len(footer)))
	return append(out, "PAR1"...)
}

func (c *built) element() *parquet.SchemaElement {
	repetition := parquet.FieldRepetitionType_OPTIONAL
	if c.required {
		repetition = parquet.FieldRepetitionType_REQUIRED
	}
	e := &parquet.SchemaElement{Name: c.name, Type: &c.typ, RepetitionType: &repetition}
	if c.mark != nil {
		c.mark(e)
	}
	return e
}

func (c *built) chunk(t testing.TB, out []byte, values []any) (*parquet.ColumnChunk, []byte) {
	t.Helper()
	m := &parquet.ColumnMetaData{
		Type: c.typ, Encodings: []parquet.Encoding{c.encoding}, PathInSchema: []string{c.name},
		Codec: c.codec, NumValues: int64(len(values)), Statistics: c.stats,
	}
	start := int64(len(out))
	var dict []any
	if isDictionary(c.encoding) {
		dict = distinct(values)
		out = append(out, c.dictionaryPage(t, dict)...)
		m.DictionaryPageOffset = &start
	}
	m.DataPageOffset = int64(len(out))
	for i := 0; len(values) > 0 || i == 0; i++ {
		n := len(values)
		if i < len(c.pages) {
			n = min(n, c.pages[i])
		}
		out = append(out, c.page(t, values[:n], dict)...)
		values = values[n:]
	}
	m.TotalCompressedSize = int64(len(out)) - start
	m.TotalUncompressedSize = m.TotalCompressedSize // not quite, and nobody asks
	return &parquet.ColumnChunk{MetaData: m}, out
}

func isDictionary(e parquet.Encoding) bool {
	return e == parquet.Encoding_PLAIN_DICTIONARY || e == parquet.Encoding_RLE_DICTIONARY
}

func distinct(values []any) (list []any) {
	seen := map[any]bool{}
	for _, v := range values {
		if v != nil && !seen[v] {
			seen[v] = true
			list = append(list, v)
		}
	}
	return list
}

func (c *built) dictionaryPage(t testing.TB, dict []any) []byte {
	data := plainBytes(dict)
	packed := deflate(t, data, c.codec)
	h := &parquet.PageHeader{
		Type: parquet.PageType_DICTIONARY_PAGE, UncompressedPageSize: int32(len(data)), CompressedPageSize: int32(len(packed)),
		DictionaryPageHeader: &parquet.DictionaryPageHeader{NumValues: int32(len(dict)), Encoding: parquet.Encoding_PLAIN},
	}
	return append(thriftBytes(t, h), packed...)
}

// page encodes a data page with its header.
func (c *built) page(t testing.TB, values, dict []any) []byte {
	var levels []uint64
	var set []any
	for _, v := range values {
		if v == nil {
			levels = append(levels, 0)
		} else {
			levels = append(levels, 1)
			set = append(set, v)
		}
	}
	var coded []byte
	if !c.required {
		coded = hybridBytes(levels, 1, c.style)
	}
	data := c.encode(set, dict)
	h := &parquet.PageHeader{}
	var body []byte
	if c.version == 2 {
		body = c.pageV2(t, h, values, set, coded, data)
	} else {
		body = c.pageV1(t, h, values, coded, data)
	}
	if c.checksum {
		crc := int32(crcOf(body))
		h.Crc = &crc
	}
	return append(thriftBytes(t, h), body...)
}

func (c *built) pageV1(t testing.TB, h *parquet.PageHeader, values []any, levels, data []byte) []byte {
	var all []byte
	if !c.required {
		all = binary.LittleEndian.AppendUint32(all, uint32(len(levels)))
		all = append(all, levels...)
	}
	all = append(all, data...)
	packed := deflate(t, all, c.codec)
	h.Type = parquet.PageType_DATA_PAGE
	h.UncompressedPageSize, h.CompressedPageSize = int32(len(all)), int32(len(packed))
	h.DataPageHeader = &parquet.DataPageHeader{
		NumValues: int32(len(values)), Encoding: c.encoding,
		DefinitionLevelEncoding: parquet.Encoding_RLE, RepetitionLevelEncoding: parquet.Encoding_RLE,
	}
	return packed
}

func (c *built) pageV2(t testing.TB, h *parquet.PageHeader, values, set []any, levels, data []byte) []byte {
	packed := deflate(t, data, c.codec)
	h.Type = parquet.PageType_DATA_PAGE_V2
	h.UncompressedPageSize, h.CompressedPageSize = int32(len(levels)+len(data)), int32(len(levels)+len(packed))
	h.DataPageHeaderV2 = &parquet.DataPageHeaderV2{
		NumValues: int32(len(values)), NumNulls: int32(len(values) - len(set)), NumRows: int32(len(values)), Encoding: c.encoding,
		DefinitionLevelsByteLength: int32(len(levels)), IsCompressed: c.codec != parquet.CompressionCodec_UNCOMPRESSED,
	}
	return append(append([]byte(nil), levels...), packed...)
}

var zstdWriter = sync.OnceValues(func() (*zstd.Encoder, error) { return zstd.NewWriter(nil, zstd.WithEncoderConcurrency(1)) })

func deflate(t testing.TB, data []byte, codec parquet.CompressionCodec) []byte {
	t.Helper()
	switch codec {
	case parquet.CompressionCodec_SNAPPY:
		return s2.EncodeSnappy(nil, data)
	case parquet.CompressionCodec_GZIP:
		var b bytes.Buffer
		w, err := gzip.NewWriterLevel(&b, gzip.BestSpeed)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := w.Write(data); err != nil {
			t.Fatal(err)
		}
		if err := w.Close(); err != nil {
			t.Fatal(err)
		}
		return b.Bytes()
	case parquet.CompressionCodec_ZSTD:
		w, err := zstdWriter()
		if err != nil {
			t.Fatal(err)
		}
		return w.EncodeAll(data, nil)
	}
	return data
}

// plainBytes encodes values as PLAIN.
func plainBytes(values []any) (b []byte) {
	var bit int
	for _, v := range values {
		switch v := v.(type) {
		case float64:
			b = binary.LittleEndian.AppendUint64(b, math.Float64bits(v))
		case float32:
			b = binary.LittleEndian.AppendUint32(b, math.Float32bits(v))
		case int64:
			b = binary.LittleEndian.AppendUint64(b, uint64(v))
		case int32:
			b = binary.LittleEndian.AppendUint32(b, uint32(v))
		case string:
			b = append(binary.LittleEndian.AppendUint32(b, uint32(len(v))), v...)
		case bool:
			if bit%8 == 0 {
				b = append(b, 0)
			}
			if v {
				b[bit/8] |= 1 << (bit % 8)
			}
			bit++
		}
	}
	return b
}
