package main

import (
	"context"
	"encoding/binary"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"
)

// Files of the engine (testdata/parquet/README.md): 2500 rows in groups of 2048,
// which the engine stores as one page a column; the first 20 rows in one.
func TestShapeOfTheEnginesFiles(t *testing.T) {
	for name, want := range map[string]shape{
		"none.parquet": {2, 2048, 2048},
		"v2.parquet":   {2, 2048, 2048},
		"lz4.parquet":  {1, 20, 20},
	} {
		got, err := readShape(filepath.Join("..", "..", "testdata", "parquet", name))
		if err != nil {
			t.Fatal(err)
		}
		if got != want {
			t.Errorf("%s: shape is %+v, want %+v", name, got, want)
		}
	}
}

// Two columns by hand: pages of both versions, and a dictionary, which holds no
// rows. The column of the smaller pages counts, with its largest.
func TestShapeOfPagesByHand(t *testing.T) {
	small := handColumn{dictionary(t, 9000), slices.Concat(page(t, 300), pageV2(t, 500), page(t, 200))}
	large := handColumn{nil, slices.Concat(page(t, 900), page(t, 100))}
	path := handFile(t, 1000, small, large)
	got, err := readShape(path)
	if err != nil {
		t.Fatal(err)
	}
	if want := (shape{1, 1000, 500}); got != want {
		t.Errorf("shape is %+v, want %+v", got, want)
	}
	if text := got.String(); text != "1 group, pages of 500" {
		t.Errorf("shape is written as %q", text)
	}
}

func TestShapeOfNoFile(t *testing.T) {
	cut := file(t, "cut.parquet", "PAR1")
	noPage := handFile(t, 1, handColumn{pages: []byte{0xff, 0xff, 0xff}})
	for path, fault := range map[string]string{
		filepath.Join(t.TempDir(), "none.parquet"): "no such file",
		cut:    "footer",
		noPage: "column [a]: page at byte 4",
	} {
		if _, err := readShape(path); err == nil || !strings.Contains(err.Error(), fault) {
			t.Errorf("error is %v, want one with %q", err, fault)
		}
	}
}

// handColumn is a column's pages as stored; the dictionary may be missing.
type handColumn struct{ dictionary, pages []byte }

// handFile writes one row group of columns a, b, ...
func handFile(t *testing.T, rows int64, columns ...handColumn) string {
	t.Helper()
	b := []byte("PAR1")
	group := &parquet.RowGroup{NumRows: rows}
	for i, column := range columns {
		at := int64(len(b))
		b = slices.Concat(b, column.dictionary, column.pages)
		c := &parquet.ColumnMetaData{
			PathInSchema: []string{string(rune('a' + i))}, NumValues: rows, Encodings: []parquet.Encoding{},
			DataPageOffset: at + int64(len(column.dictionary)), TotalCompressedSize: int64(len(b)) - at,
		}
		if column.dictionary != nil {
			c.DictionaryPageOffset = &at
		}
		group.Columns = append(group.Columns, &parquet.ColumnChunk{MetaData: c})
	}
	footer := encode(t, &parquet.FileMetaData{
		Schema: []*parquet.SchemaElement{}, RowGroups: []*parquet.RowGroup{group}, NumRows: rows,
	})
	b = binary.LittleEndian.AppendUint32(append(b, footer...), uint32(len(footer)))
	return file(t, "hand.parquet", string(b)+"PAR1")
}

func page(t *testing.T, values int32) []byte {
	return withBody(t, &parquet.PageHeader{
		Type: parquet.PageType_DATA_PAGE, DataPageHeader: &parquet.DataPageHeader{NumValues: values},
	})
}

func pageV2(t *testing.T, values int32) []byte {
	return withBody(t, &parquet.PageHeader{
		Type: parquet.PageType_DATA_PAGE_V2, DataPageHeaderV2: &parquet.DataPageHeaderV2{NumValues: values},
	})
}

func dictionary(t *testing.T, values int32) []byte {
	return withBody(t, &parquet.PageHeader{
		Type: parquet.PageType_DICTIONARY_PAGE, DictionaryPageHeader: &parquet.DictionaryPageHeader{NumValues: values},
	})
}

// withBody is a header and the 100 bytes that it speaks of.
func withBody(t *testing.T, h *parquet.PageHeader) []byte {
	h.CompressedPageSize = 100
	return append(encode(t, h), make([]byte, 100)...)
}

func encode(t *testing.T, s thrift.TStruct) []byte {
	t.Helper()
	b := thrift.NewTMemoryBuffer()
	if err := s.Write(context.Background(), thrift.NewTCompactProtocolConf(b, nil)); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}
