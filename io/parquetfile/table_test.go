package parquetfile

import (
	"bytes"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"bentray/io/cloud"
)

// tableRows are the values of a made-up table, row by row; nil is null.
var tableRows = [][]any{
	{1.5, int64(-1) << 53, int32(-7), "cam1"},
	{nil, int64(1) << 53, int32(math.MaxInt32), ""},
	{math.Copysign(0, -1), int64(0), int32(0), "a \"b\"; é\nc"},
	{math.Inf(-1), int64(42), int32(math.MinInt32), "cam1"},
	{nil, int64(7), int32(1), "z"},
}

// tableColumns has the first rows of the table as columns.
func tableColumns(rows int) []Column {
	d, l, i, s := []float64{}, []int64{}, []int32{}, []string{}
	for _, r := range tableRows[:rows] {
		v, ok := r[0].(float64)
		if !ok {
			v = math.NaN()
		}
		d, l, i, s = append(d, v), append(l, r[1].(int64)), append(i, r[2].(int32)), append(s, r[3].(string))
	}
	return []Column{{"double", d}, {"long", l}, {"int", i}, {"text", s}}
}

// TestWriteTable reads tables back by the reader that TestRead and
// TestEngineFiles hold to other programs' encodings.
func TestWriteTable(t *testing.T) {
	for _, c := range []struct{ rows, groupRows, groups int }{{5, 0, 1}, {5, 2, 3}, {5, 1, 5}, {4, 4, 1}, {4, 9, 1}, {0, 0, 0}, {0, 3, 0}} {
		var out bytes.Buffer
		if err := WriteTable(&out, tableColumns(c.rows), c.groupRows); err != nil {
			t.Fatal(err)
		}
		path := filepath.Join(t.TempDir(), "table.parquet")
		if err := os.WriteFile(path, out.Bytes(), 0o600); err != nil {
			t.Fatal(err)
		}
		wanted := map[string][]any{}
		for k, column := range tableColumns(0) {
			wanted[column.Name] = []any{}
			for _, r := range tableRows[:c.rows] {
				wanted[column.Name] = append(wanted[column.Name], r[k])
			}
		}
		checkOutput(t, path, wanted)
		checkTableShape(t, path, c.rows, c.groups)
	}
}

func checkTableShape(t *testing.T, path string, rows, groups int) {
	t.Helper()
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if f.Rows() != int64(rows) || len(f.groups) != groups {
		t.Errorf("%d rows in %d groups, want %d in %d", f.Rows(), len(f.groups), rows, groups)
	}
	for i, want := range []cloud.Column{{Name: "double", Type: "DOUBLE"}, {Name: "long", Type: "INT64"}, {Name: "int", Type: "INT32"}, {Name: "text", Type: "BYTE_ARRAY UTF8"}} {
		if f.Columns()[i] != want {
			t.Errorf("column %d is %v, want %v", i, f.Columns()[i], want)
		}
	}
}

// TestTableStatistics holds the least and the greatest of each column and its
// nulls, which readers filter by. Bytes by hand: little-endian, texts as they are.
func TestTableStatistics(t *testing.T) {
	var out bytes.Buffer
	if err := WriteTable(&out, tableColumns(3), 0); err != nil {
		t.Fatal(err)
	}
	f, err := newFile("made.parquet", memory{bytes.NewReader(out.Bytes())}, int64(out.Len()), Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []struct {
		nulls       int64
		least, most string
	}{
		{1, "\x00\x00\x00\x00\x00\x00\x00\x80", "\x00\x00\x00\x00\x00\x00\xf8\x3f"},
		{0, "\x00\x00\x00\x00\x00\x00\xe0\xff", "\x00\x00\x00\x00\x00\x00\x20\x00"},
		{0, "\xf9\xff\xff\xff", "\xff\xff\xff\x7f"},
		{0, "", "cam1"},
	} {
		s := f.groups[0].Columns[i].MetaData.Statistics
		if s.GetNullCount() != want.nulls || string(s.MinValue) != want.least || string(s.MaxValue) != want.most {
			t.Errorf("column %d has %d nulls from %q to %q, want %d from %q to %q", i, s.GetNullCount(), s.MinValue, s.MaxValue, want.nulls, want.least, want.most)
		}
	}
}

// full is a disk that takes so many bytes.
type full int

func (f *full) Write(b []byte) (int, error) {
	if len(b) > int(*f) {
		return 0, errors.New("no space left")
	}
	*f -= full(len(b))
	return len(b), nil
}

func TestWriteTableErrors(t *testing.T) {
	for want, columns := range map[string][]Column{
		`column "a" holds []float32, want []float64, []int64, []int32 or []string`: {{"a", []float32{1}}},
		`column "b" has 2 rows, want 1 as "a"`:                                     {{"a", []int32{1}}, {"b", []string{"", ""}}},
		`column "a" is there twice, want each name once`:                           {{"a", []int32{1}}, {"a", []int64{1}}},
	} {
		if err := WriteTable(new(bytes.Buffer), columns, 0); err == nil || err.Error() != want {
			t.Errorf("got error %v, want %s", err, want)
		}
	}
	var out bytes.Buffer
	if err := WriteTable(&out, tableColumns(5), 2); err != nil {
		t.Fatal(err)
	}
	for size := range out.Len() {
		disk := full(size)
		if err := WriteTable(&disk, tableColumns(5), 2); err == nil || !strings.Contains(err.Error(), "no space left") {
			t.Fatalf("a disk of %d bytes gives %v, want an error", size, err)
		}
	}
}
