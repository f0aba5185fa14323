package parquetfile

import (
	"bytes"
	"encoding/binary"
	"math"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

func pointer[T any](v T) *T { return &v }

// rewritten copies the survey after a change of its footer and returns the
// footer of the output.
func rewritten(t *testing.T, rows int, o Options, change func(*parquet.FileMetaData)) *parquet.FileMetaData {
	t.Helper()
	path := buildFile(t, survey(rows), []int{rows}, change)
	out, err := rewrite(path, o, cloud.Request{Numbers: []int{1, 2, 3}}, surveyLayout(), 1, fillSurvey)
	if err != nil {
		t.Fatal(err)
	}
	f, _ := reopen(t, out)
	return f.meta
}

func chunkOf(t *testing.T, m *parquet.FileMetaData, name string) *parquet.ColumnMetaData {
	t.Helper()
	for _, c := range m.RowGroups[0].Columns {
		if c.MetaData.PathInSchema[0] == name {
			return c.MetaData
		}
	}
	t.Fatalf("no chunk %q", name)
	return nil
}

// TestPointersDropped wants nothing in the output's footer that points to what
// was not copied.
func TestPointersDropped(t *testing.T) {
	m := rewritten(t, 50, Options{}, func(m *parquet.FileMetaData) {
		for _, c := range m.RowGroups[0].Columns {
			c.OffsetIndexOffset, c.OffsetIndexLength = pointer(int64(1000)), pointer(int32(10))
			c.ColumnIndexOffset, c.ColumnIndexLength = pointer(int64(2000)), pointer(int32(10))
			c.MetaData.BloomFilterOffset, c.MetaData.IndexPageOffset = pointer(int64(3000)), pointer(int64(4000))
			c.MetaData.KeyValueMetadata = []*parquet.KeyValue{{Key: "kept"}}
		}
	})
	for _, c := range m.RowGroups[0].Columns {
		if c.OffsetIndexOffset != nil || c.OffsetIndexLength != nil || c.ColumnIndexOffset != nil || c.ColumnIndexLength != nil ||
			c.MetaData.BloomFilterOffset != nil || c.MetaData.IndexPageOffset != nil {
			t.Errorf("%s: the footer still points into the old file: %v", c.MetaData.PathInSchema, c)
		}
	}
	if kv := chunkOf(t, m, "x_raw").KeyValueMetadata; len(kv) != 1 || kv[0].Key != "kept" {
		t.Errorf("metadata of x_raw is %v, want that of x", kv)
	}
}

// TestDictionaryAtZero wants a dictionary offset of 0 taken for none.
func TestDictionaryAtZero(t *testing.T) {
	m := rewritten(t, 50, Options{}, func(m *parquet.FileMetaData) {
		chunkOf(t, m, "z").DictionaryPageOffset = pointer(int64(0))
	})
	if d := chunkOf(t, m, "z_raw").DictionaryPageOffset; d != nil {
		t.Errorf("z_raw has its dictionary at %d, want none", *d)
	}
}

// TestGroupDescription wants sizes, place and order of a row group made anew.
func TestGroupDescription(t *testing.T) {
	m := rewritten(t, 50, Options{Version: "7.8.9"}, func(m *parquet.FileMetaData) {
		m.RowGroups[0].SortingColumns = []*parquet.SortingColumn{{ColumnIdx: 4}, {ColumnIdx: 0}}
	})
	g := m.RowGroups[0]
	var packed, open int64
	for _, c := range g.Columns {
		packed += c.MetaData.TotalCompressedSize
		open += c.MetaData.TotalUncompressedSize
	}
	if *g.TotalCompressedSize != packed || g.TotalByteSize != open || *g.FileOffset != 4 || *g.Ordinal != 0 {
		t.Errorf("group is %v, want sizes %d and %d at byte 4", g, packed, open)
	}
	if len(g.SortingColumns) != 2 {
		t.Errorf("sorting columns are %v, want both: they do not go by x, y, z", g.SortingColumns)
	}
	if len(m.ColumnOrders) != 15 || *m.CreatedBy != "bentray version 7.8.9" {
		t.Errorf("%d column orders, created by %q, want 15 and version 7.8.9", len(m.ColumnOrders), *m.CreatedBy)
	}
	m = rewritten(t, 50, Options{}, func(m *parquet.FileMetaData) {
		m.RowGroups[0].SortingColumns = []*parquet.SortingColumn{{ColumnIdx: 1}}
	})
	if s := m.RowGroups[0].SortingColumns; s != nil {
		t.Errorf("sorting columns are %v, want none: x is new", s)
	}
}

// TestMetadata keeps entries of others, replaces its own and drops those that
// describe columns.
func TestMetadata(t *testing.T) {
	m := rewritten(t, 50, Options{Metadata: map[string]string{"b": "2", "a": "1", "mine": "new"}}, func(m *parquet.FileMetaData) {
		for _, k := range []string{
			"mine", "ARROW:schema", "geo", "pandas", "org.apache.spark.sql.parquet.row.metadata",
			"parquet.avro.schema", "avro.schema", "iceberg.schema", "parquet.proto.descriptor",
		} {
			m.KeyValueMetadata = append(m.KeyValueMetadata, &parquet.KeyValue{Key: k, Value: pointer("old")})
		}
	})
	var got []string
	for _, kv := range m.KeyValueMetadata {
		got = append(got, kv.Key+"="+*kv.Value)
	}
	if want := []string{"geo=old", "a=1", "b=2", "mine=new"}; !slices.Equal(got, want) {
		t.Errorf("metadata is %q, want %q", got, want)
	}
}

// TestNewStatistics compares the statistics of new columns with values worked
// out by hand: in 50 rows z runs over -i/8, null at 5, 18, 31, 44 and NaN at 3,
// 20, 37 (mod 17), so class 2 has 7 rows; rows with i < 16 have z > -2.
func TestNewStatistics(t *testing.T) {
	m := rewritten(t, 50, Options{}, nil)
	float := func(v float64) []byte { return binary.LittleEndian.AppendUint64(nil, math.Float64bits(v)) }
	cases := []struct {
		name        string
		nulls       int64
		least, most []byte
	}{
		{"z", 4, nil, nil},
		{"y", 0, float(1953), float(2000)}, // rows 49 and 0; row 49 is moved by 2
		{"depth", 14 + 7, float(2), float(49.0 / 8)},
		{"rays", 14 + 7, []byte{16, 0, 0, 0}, []byte{49, 0, 0, 0}},
		{"outcome", 7, []byte("corrected"), []byte("dry")},
		{"n_water", 14 + 7, float(1.34), float(1.34)},
		{"views", 0, []byte{3, 0, 0, 0}, []byte{3, 0, 0, 0}},
		{"nothing", 50, nil, nil},
	}
	for _, c := range cases {
		s := chunkOf(t, m, c.name).Statistics
		if *s.NullCount != c.nulls || !slices.Equal(s.MinValue, c.least) || !slices.Equal(s.MaxValue, c.most) {
			t.Errorf("%s: %d nulls, %x to %x, want %d, %x to %x", c.name, *s.NullCount, s.MinValue, s.MaxValue, c.nulls, c.least, c.most)
		}
	}
}

// TestNaNStatistics wants no range of a column that holds NaN, and the other
// columns' ranges untouched.
func TestNaNStatistics(t *testing.T) {
	m := rewritten(t, 50, Options{}, nil)
	if s := chunkOf(t, m, "z").Statistics; s.MinValue != nil || s.MaxValue != nil {
		t.Errorf("z, with 3 NaN, runs over %x to %x, want no range", s.MinValue, s.MaxValue)
	}
	if s := chunkOf(t, m, "x").Statistics; s.MinValue == nil || s.MaxValue == nil {
		t.Error("x, without NaN, has no range")
	}
}

// TestZeroStatistics wants both zeros inside the range, whichever there is.
func TestZeroStatistics(t *testing.T) {
	for _, zero := range []float64{0, math.Copysign(0, -1)} {
		s := statsOf([]float64{zero, math.NaN()}).thrift(cloud.Float)
		if s.MinValue[7] != 0x80 || s.MaxValue[7] != 0 {
			t.Errorf("zero %v: %x to %x, want -0 to +0", zero, s.MinValue, s.MaxValue)
		}
	}
}

// TestOldStatistics keeps what can still be trusted under a new writer's name.
func TestOldStatistics(t *testing.T) {
	old := parquet.Statistics{Min: []byte("a"), Max: []byte("z"), MinValue: []byte("b"), MaxValue: []byte("y"), NullCount: pointer(int64(1))}
	set := func(m *parquet.FileMetaData) {
		for _, name := range []string{"note", "x"} {
			s := old
			chunkOf(t, m, name).Statistics = &s
		}
	}
	m := rewritten(t, 50, Options{}, set)
	if s := chunkOf(t, m, "note").Statistics; s.Min != nil || s.Max != nil || string(s.MinValue) != "b" || *s.NullCount != 1 {
		t.Errorf("statistics of a text are %v, want the newer min and max alone", s)
	}
	if s := chunkOf(t, m, "x_raw").Statistics; string(s.Min) != "a" || string(s.MaxValue) != "y" {
		t.Errorf("statistics of a number are %v, want all of them", s)
	}
	m = rewritten(t, 50, Options{}, func(m *parquet.FileMetaData) {
		chunkOf(t, m, "class").Statistics = &old
	})
	if s := chunkOf(t, m, "class").Statistics; s.Min != nil || s.Max != nil || string(s.MaxValue) != "y" {
		t.Errorf("statistics of an unsigned number are %v, want the newer min and max alone", s)
	}
	m = rewritten(t, 50, Options{}, func(m *parquet.FileMetaData) { set(m); m.ColumnOrders = nil })
	if s := chunkOf(t, m, "note").Statistics; s.MinValue != nil || s.MaxValue != nil {
		t.Errorf("statistics without an order are %v, want no min and max", s)
	}
}

// TestUnknownType copies a column whose logical type is younger than the
// structures used here, and says so.
func TestUnknownType(t *testing.T) {
	columns := survey(9)
	columns[0].mark = logical(&parquet.LogicalType{STRING: parquet.NewStringType()})
	columns[0].stats = &parquet.Statistics{MinValue: []byte("a"), MaxValue: []byte("z"), NullCount: pointer(int64(0))}
	b := buildBytes(t, columns, []int{9}, nil)
	at := len(b) - 8 - int(binary.LittleEndian.Uint32(b[len(b)-8:]))
	at += bytes.Index(b[at:], []byte("note"))
	spot := at + len("note") + 1 // behind the name: field 10, a union, with field 1, an empty structure
	if b[spot] != 0x1c {
		t.Fatalf("the union is at another place: %x", b[spot-1:spot+5])
	}
	b[spot] = 0xfc // field 15, which is unknown
	path := filepath.Join(t.TempDir(), "made.parquet")
	if err := os.WriteFile(path, b, 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if len(f.Cautions()) != 1 || f.Columns()[0].Type != "BYTE_ARRAY "+unknownType {
		t.Errorf("cautions %q, columns %v, want one caution on note", f.Cautions(), f.Columns())
	}
	out, err := rewrite(path, Options{}, cloud.Request{Numbers: []int{1, 2, 3}}, surveyLayout(), 1, fillSurvey)
	if err != nil {
		t.Fatal(err)
	}
	made, _ := reopen(t, out)
	if s := chunkOf(t, made.meta, "note").Statistics; s.MinValue != nil || s.MaxValue != nil || s.NullCount == nil {
		t.Errorf("statistics of an unknown type are %v, want the nulls alone: its order is unknown too", s)
	}
}

// TestNameTaken refuses a new column whose name is in the input.
func TestNameTaken(t *testing.T) {
	path := buildFile(t, survey(9), []int{9}, nil)
	layout := surveyLayout()
	layout.Added[0].Name = "note"
	_, err := rewrite(path, Options{}, cloud.Request{}, layout, 1, fillSurvey)
	if want := path + `: has a column "note" already, want to add one of that name; rename it or take it out`; err == nil || err.Error() != want {
		t.Errorf("got error %v, want %s", err, want)
	}
}
