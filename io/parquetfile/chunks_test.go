package parquetfile

import (
	"bytes"
	"context"
	"slices"
	"strings"
	"testing"

	"bentray/io/cloud"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"
)

// pagesOf reads the page headers of a chunk by the format's structures alone, and
// returns the bytes of all pages with their headers, opened.
func pagesOf(t *testing.T, chunk []byte) (headers []*parquet.PageHeader, open int64) {
	t.Helper()
	for len(chunk) > 0 {
		b := &thrift.TMemoryBuffer{Buffer: bytes.NewBuffer(chunk)}
		h := parquet.NewPageHeader()
		if err := h.Read(context.Background(), thrift.NewTCompactProtocolConf(b, nil)); err != nil {
			t.Fatal(err)
		}
		open += int64(len(chunk)-b.Len()) + int64(h.UncompressedPageSize)
		chunk = chunk[len(chunk)-b.Len()+int(h.CompressedPageSize):]
		headers = append(headers, h)
	}
	return headers, open
}

// TestNewChunks holds what the footer says of new chunks to their pages.
func TestNewChunks(t *testing.T) {
	path := buildFile(t, survey(70_000), []int{70_000}, nil)
	out, err := rewrite(path, Options{}, cloud.Request{Numbers: []int{1, 2, 3}}, surveyLayout(), 1, fillSurvey)
	if err != nil {
		t.Fatal(err)
	}
	f, _ := reopen(t, out)
	for i, c := range f.groups[0].Columns {
		m, name := c.MetaData, f.leaves[i].name
		if strings.HasSuffix(name, "_raw") || slices.Contains([]string{"note", "class", "price"}, name) {
			continue // copied
		}
		headers, open := pagesOf(t, chunkBytes(t, f, 0, i))
		if m.TotalUncompressedSize != open {
			t.Errorf("%s: %d bytes decompressed, want %d as the pages have", name, m.TotalUncompressedSize, open)
		}
		used, values := map[parquet.Encoding]bool{}, int64(0)
		for _, h := range headers {
			if d := h.DataPageHeader; d != nil {
				used[d.Encoding], used[d.DefinitionLevelEncoding] = true, true
				values += int64(d.NumValues)
			} else {
				used[h.DictionaryPageHeader.Encoding] = true
			}
		}
		if values != m.NumValues || len(used) != len(m.Encodings) {
			t.Errorf("%s: %d values in %v, want %d in %v as the pages have", name, m.NumValues, m.Encodings, values, used)
		}
		for _, e := range m.Encodings {
			if !used[e] {
				t.Errorf("%s: the footer names %s, which no page has", name, e)
			}
		}
	}
}

// TestFieldIDs keeps the number of a field with the name that readers ask for,
// and gives none to its raw copy.
func TestFieldIDs(t *testing.T) {
	m := rewritten(t, 20, Options{}, func(m *parquet.FileMetaData) {
		for i, e := range m.Schema[1:] {
			e.FieldID = pointer(int32(100 + i))
		}
	})
	want := map[string]int32{"note": 100, "x": 101, "y": 102, "z": 103, "class": 104, "price": 105}
	for _, e := range m.Schema[1:] {
		id, has := want[e.Name]
		if (e.FieldID != nil) != has || has && *e.FieldID != id {
			t.Errorf("field id of %s is %v, want %d (any: %v)", e.Name, e.FieldID, id, has)
		}
	}
}

// TestFallback reads a chunk that goes on PLAIN where its dictionary was full.
func TestFallback(t *testing.T) {
	coded := func(v ...byte) []byte { return append([]byte{1}, v...) }
	cases := []struct {
		column built
		dict   []any
		plain  []any
		want   []any
	}{
		{built{name: "v", typ: parquet.Type_DOUBLE, required: true}, []any{1.5, 2.5}, []any{7.0, 8.0}, []any{1.5, 1.5, 2.5, 7.0, 8.0, 2.5}},
		{built{name: "v", typ: parquet.Type_BYTE_ARRAY, required: true}, []any{"a", "bc"}, []any{"", "def"}, []any{"a", "a", "bc", "", "def", "bc"}},
	}
	for _, c := range cases {
		page := func(e parquet.Encoding, values int32, data []byte) []byte {
			return pageOf(t, e, int32(len(data)), values, data)
		}
		chunk := bytes.Join([][]byte{
			dictOf(t, 2, plainBytes(c.dict)),
			page(parquet.Encoding_RLE_DICTIONARY, 3, coded(4, 0, 2, 1)), // runs of 2 zeros and of 1 one
			page(parquet.Encoding_PLAIN, 2, plainBytes(c.plain)),
			page(parquet.Encoding_RLE_DICTIONARY, 1, coded(2, 1)),
		}, nil)
		c.column.values = c.want
		checkColumns(t, []built{c.column}, writeFile(t, chunkFile(t, c.column, 6, chunk)))
	}
}

// TestLongFooter refuses in Begin what Finish could not write.
func TestLongFooter(t *testing.T) {
	o := Options{Metadata: map[string]string{"long": strings.Repeat("v", maxFooterBytes)}}
	f, err := Open(buildFile(t, survey(5), []int{5}, nil), o)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	err = f.Begin(cloud.Request{}, surveyLayout(), discard{})
	if err == nil || !strings.Contains(err.Error(), "the output's footer would have about 6710") {
		t.Errorf("got error %v, want the footer refused", err)
	}
}
