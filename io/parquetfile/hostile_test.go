package parquetfile

import (
	"bytes"
	"encoding/binary"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// allocated returns the bytes that a call allocates in all.
func allocated(call func()) uint64 {
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	call()
	runtime.ReadMemStats(&after)
	return after.TotalAlloc - before.TotalAlloc
}

// refuse reads a file whole and wants an error that begins with the file and
// contains the given words, and no allocation beyond 4 MiB.
func refuse(t *testing.T, path, words string) {
	t.Helper()
	var err error
	bytes := allocated(func() {
		_, _, err = readAll(path, Options{}, cloud.Request{Numbers: []int{0}})
	})
	if err == nil || !strings.HasPrefix(err.Error(), path+": ") || !strings.Contains(err.Error(), words) {
		t.Errorf("got error %v, want the file and %q", err, words)
	}
	if bytes > 4<<20 {
		t.Errorf("allocated %d bytes", bytes)
	}
}

func writeFile(t *testing.T, b []byte) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "made.parquet")
	if err := os.WriteFile(path, b, 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

func simple() built {
	c := built{name: "v", typ: parquet.Type_DOUBLE}
	for i := range 100 {
		c.values = append(c.values, float64(i%7))
	}
	return c
}

// TestNotParquet refuses files by their ends.
func TestNotParquet(t *testing.T) {
	good := buildBytes(t, []built{simple()}, []int{100}, nil)
	replace := func(at int, s string) []byte {
		b := bytes.Clone(good)
		copy(b[(at+len(b))%len(b):], s)
		return b
	}
	cases := []struct {
		name  string
		bytes []byte
		words string
	}{
		{"empty", nil, "has 0 bytes, want a Parquet file"},
		{"text", []byte("x,y,z\n1,2,3\n"), `begins with "x,y,", want "PAR1"`},
		{"cut", good[:len(good)-5], "want \"PAR1\"; the file is cut short"},
		{"encrypted", replace(-4, "PARE"), "is encrypted"},
		{"long footer", replace(-8, "\xff\xff\xff\x7f"), "says its footer has 2147483647 bytes, want at most"},
		{"short footer", replace(-8, "\x05\x00\x00\x00"), "the footer is damaged"},
		{"damaged footer", replace(-60, strings.Repeat("\xff", 40)), "the footer is damaged"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) { refuse(t, writeFile(t, c.bytes), c.words) })
	}
}

// TestFooterLies refuses footers that do not fit the file.
func TestFooterLies(t *testing.T) {
	meta := func(m *parquet.FileMetaData) *parquet.ColumnMetaData { return m.RowGroups[0].Columns[0].MetaData }
	cases := []struct {
		name   string
		change func(*parquet.FileMetaData)
		words  string
	}{
		{"rows of the file", func(m *parquet.FileMetaData) { m.NumRows++ }, "the row groups have 100 rows, want 101"},
		{"rows of a group", func(m *parquet.FileMetaData) { m.RowGroups[0].NumRows = -1 }, "row group 1 has -1 rows"},
		{"values", func(m *parquet.FileMetaData) { meta(m).NumValues = 99 }, `column "v", row group 1: has 99 values, want 100`},
		{"no columns", func(m *parquet.FileMetaData) { m.RowGroups[0].Columns = nil }, "row group 1 has 0 columns, want 1"},
		{"no description", func(m *parquet.FileMetaData) { m.RowGroups[0].Columns[0].MetaData = nil }, `column "v", row group 1: has no description`},
		{"another type", func(m *parquet.FileMetaData) { meta(m).Type = parquet.Type_INT64 }, "is stored as INT64, want DOUBLE"},
		{"unknown type", func(m *parquet.FileMetaData) { *m.Schema[1].Type = 77; meta(m).Type = 77 }, `column "v" is of type 77, which is unknown`},
		{"another name", func(m *parquet.FileMetaData) { meta(m).PathInSchema = []string{"w"} }, `is called "[w]" there`},
		{"size", func(m *parquet.FileMetaData) { meta(m).TotalCompressedSize = 1 << 62 }, "want it between 4 and the footer"},
		{"negative size", func(m *parquet.FileMetaData) { meta(m).TotalCompressedSize = -5 }, "want it between 4 and the footer"},
		{"place", func(m *parquet.FileMetaData) { meta(m).DataPageOffset = 2 }, "lies at byte 2"},
		{"short chunk", func(m *parquet.FileMetaData) { meta(m).TotalCompressedSize = 30 }, `column "v", row group 1: a page says it has`},
		{"empty chunk", func(m *parquet.FileMetaData) { meta(m).TotalCompressedSize = 0 }, "the pages end 100 rows before the group does"},
		{"two groups, one chunk", func(m *parquet.FileMetaData) {
			m.RowGroups = append(m.RowGroups, m.RowGroups[0])
			m.NumRows = 200
		}, "two column chunks share the bytes from 4 to"},
		{"another file", func(m *parquet.FileMetaData) { m.RowGroups[0].Columns[0].FilePath = pointer("b.parquet") }, `lies in another file, "b.parquet"`},
		{"encrypted column", func(m *parquet.FileMetaData) { m.RowGroups[0].Columns[0].EncryptedColumnMetadata = []byte{1} }, "is encrypted"},
		{"encrypted", func(m *parquet.FileMetaData) {
			m.EncryptionAlgorithm = &parquet.EncryptionAlgorithm{AES_GCM_V1: parquet.NewAesGcmV1()}
		}, "is encrypted"},
		{"children", func(m *parquet.FileMetaData) { *m.Schema[0].NumChildren = 2 }, "the schema has 2 elements, want more"},
		{"too few children", func(m *parquet.FileMetaData) { *m.Schema[0].NumChildren = 0 }, "the schema has 2 elements, want 1"},
		{"no root", func(m *parquet.FileMetaData) { m.Schema[0].NumChildren = nil }, "the schema has no root"},
		{"deep", func(m *parquet.FileMetaData) {
			for range 50 {
				m.Schema = append(m.Schema[:1], append([]*parquet.SchemaElement{{Name: "g", NumChildren: pointer(int32(1))}}, m.Schema[1:]...)...)
			}
		}, "nested more than 32 deep"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) { refuse(t, buildFile(t, []built{simple()}, []int{100}, c.change), c.words) })
	}
}

// chunkFile makes a file of one column whose only chunk is the given bytes.
func chunkFile(t testing.TB, c built, rows int64, chunk []byte) []byte {
	n := int32(1)
	meta := &parquet.FileMetaData{
		Version: 1, NumRows: rows, Schema: []*parquet.SchemaElement{{Name: "root", NumChildren: &n}, c.element()},
		RowGroups: []*parquet.RowGroup{{NumRows: rows, Columns: []*parquet.ColumnChunk{{MetaData: &parquet.ColumnMetaData{
			Type: c.typ, Encodings: []parquet.Encoding{}, PathInSchema: []string{c.name}, Codec: c.codec, NumValues: rows,
			DataPageOffset: 4, TotalCompressedSize: int64(len(chunk)),
		}}}}},
	}
	return appendFooter(t, append([]byte("PAR1"), chunk...), meta)
}

// pageOf makes one data page of 100 required values.
func pageOf(t testing.TB, e parquet.Encoding, open, values int32, data []byte) []byte {
	return append(thriftBytes(t, &parquet.PageHeader{
		Type: parquet.PageType_DATA_PAGE, UncompressedPageSize: open, CompressedPageSize: int32(len(data)),
		DataPageHeader: &parquet.DataPageHeader{NumValues: values, Encoding: e, DefinitionLevelEncoding: parquet.Encoding_RLE},
	}), data...)
}

func dictOf(t testing.TB, count int32, data []byte) []byte {
	return append(thriftBytes(t, &parquet.PageHeader{
		Type: parquet.PageType_DICTIONARY_PAGE, UncompressedPageSize: int32(len(data)), CompressedPageSize: int32(len(data)),
		DictionaryPageHeader: &parquet.DictionaryPageHeader{NumValues: count},
	}), data...)
}

// TestPageLies refuses pages whose headers or data do not hold together.
func TestPageLies(t *testing.T) {
	const plain, coded, packed, split = parquet.Encoding_PLAIN, parquet.Encoding_RLE_DICTIONARY, parquet.Encoding_DELTA_BINARY_PACKED, parquet.Encoding_BYTE_STREAM_SPLIT
	eight := make([]byte, 800)
	dict := dictOf(t, 2, make([]byte, 16))
	page := func(e parquet.Encoding, data ...byte) []byte { return pageOf(t, e, int32(len(data)), 100, data) }
	join := func(parts ...[]byte) []byte { return bytes.Join(parts, nil) }
	delta := func(block, minis, count uint64, rest ...byte) []byte {
		b := binary.AppendUvarint(nil, block)
		b = binary.AppendUvarint(b, minis)
		return page(packed, append(binary.AppendUvarint(b, count), rest...)...)
	}
	double, integer := built{name: "v", typ: parquet.Type_DOUBLE, required: true}, built{name: "v", typ: parquet.Type_INT64, required: true}
	optional := built{name: "v", typ: parquet.Type_DOUBLE}
	cases := []struct {
		name   string
		column built
		chunk  []byte
		words  string
	}{
		{"no header", double, []byte{0xff, 0xff, 0xff}, "a page header is damaged"},
		{"compressed size", double, pageOf(t, plain, 800, 100, eight)[:700], "a page says it has 800 bytes, want at most"},
		{"page size", double, pageOf(t, plain, 900, 100, eight), "a page that is not compressed has 800 bytes, want 900"},
		{"huge page", double, pageOf(t, plain, 1<<30, 100, eight), "want at most 134217728; write the file with smaller pages"},
		{"negative size", double, pageOf(t, plain, -1, 100, eight), "a page has 800 bytes, -1 decompressed"},
		{"too many values", double, pageOf(t, plain, 800, 101, eight), "a page has 101 values, want at most the 100"},
		{"negative values", double, pageOf(t, plain, 800, -1, eight), "a page has -1 values"},
		{"shorter page", double, pageOf(t, plain, 800, 99, eight[:792]), "a page that is not compressed has 792 bytes, want 800"},
		{"too few values", double, pageOf(t, plain, 792, 99, eight[:792]), "the pages end 1 rows before the group does"},
		{"bytes missing", double, page(plain, eight[:792]...), "100 values have 792 bytes, want 800"},
		{"split bytes missing", double, page(split, eight[:792]...), "100 values have 792 bytes, want 800"},
		{"page type", double, thriftBytes(t, &parquet.PageHeader{Type: 9}), "a page is of type 9, which is unknown"},
		{"no data header", double, thriftBytes(t, &parquet.PageHeader{Type: parquet.PageType_DATA_PAGE}), "a data page lacks its own header"},
		{"no data header, version 2", double, thriftBytes(t, &parquet.PageHeader{Type: parquet.PageType_DATA_PAGE_V2}), "a data page lacks its own header"},
		{"no dictionary header", double, thriftBytes(t, &parquet.PageHeader{Type: parquet.PageType_DICTIONARY_PAGE}), "a dictionary page lacks its own header"},
		{"levels, version 2", double, thriftBytes(t, &parquet.PageHeader{Type: parquet.PageType_DATA_PAGE_V2, DataPageHeaderV2: &parquet.DataPageHeaderV2{DefinitionLevelsByteLength: 9}}), "0 and 9 bytes of levels, want at most its 0"},
		{"levels missing", optional, page(plain, 1, 0), "the data end before the values do"},
		{"levels too long", optional, page(plain, 99, 0, 0, 0, 1), "99 bytes of levels, want at most its 1"},
		{"empty run", optional, page(plain, 2, 0, 0, 0, 0, 1), "a run has 0 values"},
		{"empty packed run", optional, page(plain, 1, 0, 0, 0, 1), "a run has 0 values"},
		{"level 2", optional, page(plain, 3, 0, 0, 0, 200, 1, 2), "the value of a run is too large"},
		{"endless length", optional, page(plain, 11, 0, 0, 0, 255, 255, 255, 255, 255, 255, 255, 255, 255, 255, 255), "a length is damaged"},
		{"dictionary missing", double, page(coded, 1, 200, 1, 0), "values refer to a dictionary, and there is none"},
		{"two dictionaries", double, join(dict, dict), "there are two dictionaries"},
		{"dictionary size", double, join(dictOf(t, 1<<30, make([]byte, 16)), page(coded, 1, 200, 1, 0)), "the dictionary of 1073741824 values has 16 bytes"},
		{"no index width", double, join(dict, page(coded)), "the data end before the values do"},
		{"index width", double, join(dict, page(coded, 33)), "dictionary indices have 33 bits"},
		{"index", double, join(dict, page(coded, 2, 200, 1, 2)), "value 3 of a dictionary of 2"},
		{"width 0, empty dictionary", double, join(dictOf(t, 0, nil), page(coded, 0, 200, 1)), "value 1 of a dictionary of 0"},
		{"indices end", double, join(dict, page(coded, 1, 100, 1)), "the data end before the values do"},
		{"packed indices end", double, join(dict, page(coded, 1, 27, 0)), "the data end before the values do"},
		{"no mini-blocks", integer, delta(128, 0, 100, 0), "delta blocks have 128 values in 0 parts"},
		{"no block", integer, delta(0, 4, 100, 0), "delta blocks have 0 values"},
		{"huge block", integer, delta(1<<40, 4, 100, 0), "delta blocks have 1099511627776 values"},
		{"delta count", integer, delta(128, 4, 1<<30, 0), "delta data have 1073741824 values, want 100"},
		{"delta ends", integer, delta(128, 4, 100, 0), "the data end before the values do"},
		{"delta width", integer, delta(128, 4, 100, 0, 0, 65, 0, 0, 0), "differences have 65 bits"},
		{"delta first", integer, delta(128, 4, 100), "a first value is damaged"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			path := writeFile(t, chunkFile(t, c.column, 100, c.chunk))
			refuse(t, path, c.words)
			refuse(t, path, `column "v", row group 1: `)
		})
	}
}

// TestChecksum finds one changed bit by the checksum of the page.
func TestChecksum(t *testing.T) {
	c := simple()
	c.checksum = true
	b := buildBytes(t, []built{c}, []int{100}, nil)
	b[400] ^= 4
	refuse(t, writeFile(t, b), "the checksum of a page is")
}

// TestBombs refuses compressed data that would grow beyond what their page
// says, before memory is taken for them.
func TestBombs(t *testing.T) {
	zeros := make([]byte, 64<<20)
	for _, codec := range codecs[1:] {
		t.Run(codec.String(), func(t *testing.T) {
			c := built{name: "v", typ: parquet.Type_DOUBLE, required: true, codec: codec}
			bomb := deflate(t, zeros, codec)
			path := writeFile(t, chunkFile(t, c, 100, pageOf(t, parquet.Encoding_PLAIN, 800, 100, bomb)))
			limit := uint64(8 << 20)
			var err error
			if n := allocated(func() { _, _, err = readAll(path, Options{}, cloud.Request{Numbers: []int{0}}) }); n > limit {
				t.Errorf("allocated %d bytes, want at most %d", n, limit)
			}
			if err == nil || !strings.Contains(err.Error(), `column "v", row group 1: `+codec.String()+" data: ") {
				t.Errorf("got error %v, want the column and its codec", err)
			}
			garbage := []byte{0xff, 0xff, 0xff, 0xff, 0x07, 1, 2, 3}
			refuse(t, writeFile(t, chunkFile(t, c, 100, pageOf(t, parquet.Encoding_PLAIN, 800, 100, garbage))), codec.String()+" data: ")
			short := deflate(t, zeros[:400], codec)
			refuse(t, writeFile(t, chunkFile(t, c, 100, pageOf(t, parquet.Encoding_PLAIN, 800, 100, short))), codec.String()+" data: ")
		})
	}
}

// TestTextLies refuses texts that do not lie in their page, or are too many.
func TestTextLies(t *testing.T) {
	c := built{name: "v", typ: parquet.Type_BYTE_ARRAY, required: true}
	long := append(binary.LittleEndian.AppendUint32(nil, 1<<20), make([]byte, 1<<20)...)
	length := func(values ...int64) []byte { return deltaBytes(values) }
	cases := []struct {
		name     string
		encoding parquet.Encoding
		dict     []byte
		data     []byte
		words    string
	}{
		{"length", parquet.Encoding_PLAIN, nil, []byte{255, 255, 255, 255, 0}, "a text has 4294967295 bytes, want at most the 1"},
		{"no length", parquet.Encoding_PLAIN, nil, []byte{1, 0}, "the data end"},
		{"longer lengths", parquet.Encoding_DELTA_LENGTH_BYTE_ARRAY, nil, append(length(make([]int64, 99)...), 0), "delta data have 99 values, want 100"},
		{"negative length", parquet.Encoding_DELTA_LENGTH_BYTE_ARRAY, nil, length(append(make([]int64, 99), -1)...), "a text has -1 bytes"},
		{"prefix", parquet.Encoding_DELTA_BYTE_ARRAY, nil, append(length(append([]int64{5}, make([]int64, 99)...)...), length(make([]int64, 100)...)...), "takes 5 bytes from the one before, which has 0"},
		{"no suffixes", parquet.Encoding_DELTA_BYTE_ARRAY, nil, length(make([]int64, 100)...), "a length is damaged"},
		{"dictionary texts", parquet.Encoding_RLE_DICTIONARY, dictOf(t, 1000, []byte{0, 0, 0, 0}), []byte{0, 200, 1}, "the dictionary of 1000 texts has 4 bytes"},
		{"one long text, 100 times", parquet.Encoding_RLE_DICTIONARY, dictOf(t, 1, long), []byte{0, 200, 1}, "are longer than 67108864 bytes"},
		{"numbers' encoding", parquet.Encoding_BYTE_STREAM_SPLIT, nil, make([]byte, 100), "BYTE_ARRAY values are encoded as BYTE_STREAM_SPLIT"},
	}
	for _, e := range cases {
		t.Run(e.name, func(t *testing.T) {
			chunk := append(e.dict, pageOf(t, e.encoding, int32(len(e.data)), 100, e.data)...)
			path := writeFile(t, chunkFile(t, c, 100, chunk))
			_, _, err := readAll(path, Options{}, cloud.Request{Texts: []int{0}})
			if err == nil || !strings.Contains(err.Error(), `column "v", row group 1: `) || !strings.Contains(err.Error(), e.words) {
				t.Errorf("got error %v, want the column and %q", err, e.words)
			}
		})
	}
}
