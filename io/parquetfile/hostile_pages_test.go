package parquetfile

import (
	"bytes"
	"encoding/binary"
	"strings"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

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
		{"huge page", double, pageOf(t, plain, 1<<30, 100, eight), "want at most 67108864; write the file with smaller pages"},
		{"too large for its values", double, pageOf(t, plain, 50<<20, 100, eight), "a page of 100 values has 52428800 bytes, want at most 67136"},
		{"negative size", double, pageOf(t, plain, -1, 100, eight), "a page has 800 bytes, -1 decompressed"},
		{"too many values", double, pageOf(t, plain, 800, 101, eight), "a page has 101 values, want at most the 100"},
		{"negative values", double, pageOf(t, plain, 800, -1, eight), "a page has -1 values"},
		{"shorter page", double, pageOf(t, plain, 800, 99, eight[:792]), "a page that is not compressed has 792 bytes, want 800"},
		{"too few values", double, pageOf(t, plain, 792, 99, eight[:792]), "the pages end 1 rows before the group does"},
		{"bytes missing", double, page(plain, eight[:792]...), "100 values have 792 bytes, want 800"},
		{"split bytes missing", double, page(split, eight[:792]...), "100 values have 792 bytes, want 800"},
		{"garbage behind", double, join(pageOf(t, plain, 800, 100, eight), []byte("garbage")), "behind the last row: a page header is damaged"},
		{"a page behind", double, join(pageOf(t, plain, 800, 100, eight), pageOf(t, plain, 8, 1, eight[:8])), "behind the last row: a page has 1 values, want at most the 0"},
		{"page type", double, thriftBytes(t, &parquet.PageHeader{Type: 9}), "a page is of type 9, which is unknown"},
		{"no data header", double, thriftBytes(t, &parquet.PageHeader{Type: parquet.PageType_DATA_PAGE}), "a data page lacks its own header"},
		{"no data header, version 2", double, thriftBytes(t, &parquet.PageHeader{Type: parquet.PageType_DATA_PAGE_V2}), "a data page lacks its own header"},
		{"no dictionary header", double, thriftBytes(t, &parquet.PageHeader{Type: parquet.PageType_DICTIONARY_PAGE}), "a dictionary page lacks its own header"},
		{"levels, version 2", double, thriftBytes(t, &parquet.PageHeader{Type: parquet.PageType_DATA_PAGE_V2, DataPageHeaderV2: &parquet.DataPageHeaderV2{DefinitionLevelsByteLength: 9}}), "0 and 9 bytes of levels, want at most its 0"},
		{"nulls, version 2", optional, append(thriftBytes(t, &parquet.PageHeader{
			Type: parquet.PageType_DATA_PAGE_V2, UncompressedPageSize: 803, CompressedPageSize: 803,
			DataPageHeaderV2: &parquet.DataPageHeaderV2{NumValues: 100, NumNulls: 3, NumRows: 100, DefinitionLevelsByteLength: 3},
		}), append([]byte{200, 1, 1}, eight...)...), "a page has 0 nulls, want 3 as it says"},
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

// TestPagesWithoutRows passes over pages of indexes, and empty pages, wherever
// they lie.
func TestPagesWithoutRows(t *testing.T) {
	c := built{name: "v", typ: parquet.Type_DOUBLE, required: true}
	index := append(thriftBytes(t, &parquet.PageHeader{
		Type: parquet.PageType_INDEX_PAGE, UncompressedPageSize: 9, CompressedPageSize: 9, IndexPageHeader: parquet.NewIndexPageHeader(),
	}), "123456789"...)
	empty := pageOf(t, parquet.Encoding_PLAIN, 0, 0, nil)
	one := pageOf(t, parquet.Encoding_PLAIN, 8, 1, plainBytes([]any{1.5}))
	two := pageOf(t, parquet.Encoding_PLAIN, 8, 1, plainBytes([]any{2.5}))
	file := chunkFile(t, c, 2, bytes.Join([][]byte{index, one, empty, index, two, empty, index}, nil))
	numbers, _, err := readBytes(file, Options{}, cloud.Request{Numbers: []int{0}})
	if err != nil || len(numbers[0]) != 2 || numbers[0][0] != 1.5 || numbers[0][1] != 2.5 {
		t.Errorf("got %v (%v), want 1.5 and 2.5", numbers, err)
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
		{"one long text, 100 times", parquet.Encoding_RLE_DICTIONARY, dictOf(t, 1, long), []byte{0, 200, 1}, "are longer than 33554432 bytes"},
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
