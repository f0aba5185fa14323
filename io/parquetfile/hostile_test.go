package parquetfile

import (
	"bytes"
	"encoding/binary"
	"os"
	"path/filepath"
	"runtime"
	"slices"
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
		{"cut", good[:len(good)-5], "want \"PAR1\"; the file is cut short, or has bytes"},
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
		{"decompressed size", func(m *parquet.FileMetaData) { meta(m).TotalUncompressedSize = -1 }, `column "v", row group 1: has a decompressed size of -1 bytes`},
		{"place", func(m *parquet.FileMetaData) { meta(m).DataPageOffset = 2 }, "lies at byte 2"},
		{"short chunk", func(m *parquet.FileMetaData) { meta(m).TotalCompressedSize = 30 }, `column "v", row group 1: a page says it has`},
		{"empty chunk", func(m *parquet.FileMetaData) { meta(m).TotalCompressedSize = 0 }, "the pages end 100 rows before the group does"},
		{"two groups, one chunk", func(m *parquet.FileMetaData) {
			m.RowGroups = append(m.RowGroups, m.RowGroups[0])
			m.NumRows = 200
		}, `column "v", row group 2: shares the bytes from 4 to`},
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
		{"long name", func(m *parquet.FileMetaData) { m.Schema[1].Name = strings.Repeat("v", 64<<10+1) }, "the name of a column has 65537 bytes, want at most 65536"},
		{"long names of groups", func(m *parquet.FileMetaData) {
			for range 2 {
				group := &parquet.SchemaElement{Name: strings.Repeat("g", 40<<10), NumChildren: pointer(int32(1))}
				m.Schema = slices.Insert(m.Schema, 1, group)
			}
		}, "the name of a column has 81921 bytes"},
		{"one long name for many columns", func(m *parquet.FileMetaData) {
			group := &parquet.SchemaElement{Name: strings.Repeat("g", 60<<10), NumChildren: pointer(int32(1000))}
			m.Schema = append(m.Schema[:1], group)
			for range 1000 {
				m.Schema = append(m.Schema, &parquet.SchemaElement{Name: "v", Type: pointer(parquet.Type_DOUBLE)})
			}
		}, "the names of the columns have more than 16777216 bytes"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) { refuse(t, buildFile(t, []built{simple()}, []int{100}, c.change), c.words) })
	}
}

// TestFooterBomb refuses footers whose parts take far more memory than bytes
// before they have taken it.
func TestFooterBomb(t *testing.T) {
	const entries = 1 << 20
	list := func(head []byte, element ...byte) []byte {
		return append(binary.AppendUvarint(head, entries), bytes.Repeat(element, entries)...)
	}
	// Fields by their step and type: version, schema, rows, groups, metadata.
	start := []byte{0x15, 2, 0x19, 0x0c, 0x16, 0, 0x19}
	in := func(b ...byte) []byte { return append(slices.Clone(start), b...) }
	cases := []struct {
		name   string
		footer []byte
	}{
		{"empty keys", list(in(0x0c, 0x19, 0xfc), 0x18, 0, 0)},
		{"column chunks", list(in(0x1c, 0x19, 0xfc), 0x26, 0, 0)},
		{"encodings", list(in(0x1c, 0x19, 0x1c, 0x26, 0, 0x1c, 0x15, 0, 0x19, 0xf5), 0)},
		{"names of paths", list(in(0x1c, 0x19, 0x1c, 0x26, 0, 0x1c, 0x15, 0, 0x19, 0x05, 0x19, 0xf8), 0)},
		{"a list that is not there", binary.AppendUvarint(in(0x1c, 0x19, 0x1c, 0x26, 0, 0x1c, 0x15, 0, 0x19, 0xf5), entries-1)},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			b := append(c.footer, 0)
			file := append([]byte("PAR1"), b...)
			file = append(binary.LittleEndian.AppendUint32(file, uint32(len(b))), "PAR1"...)
			path := writeFile(t, file)
			var err error
			n := allocated(func() { _, err = Open(path, Options{}) })
			if err == nil || !strings.Contains(err.Error(), "the footer is damaged") {
				t.Errorf("got error %v, want a damaged footer", err)
			}
			if most := uint64(8<<20 + 17*len(file)); n > most {
				t.Errorf("allocated %d bytes for a footer of %d, want at most %d", n, len(b), most)
			}
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
