package parquetfile

import (
	"bytes"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"

	"bentray/io/cloud"
)

// openTableOf writes a table and opens it.
func openTableOf(t *testing.T, groupRows int, columns ...Column) *File {
	t.Helper()
	var b bytes.Buffer
	if err := WriteTable(&b, columns, groupRows); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "a.parquet")
	if err := os.WriteFile(path, b.Bytes(), 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { f.Close() })
	return f
}

// storedOf reads all columns as they are stored, as people see them.
func storedOf(t *testing.T, f *File) (shown [][]string) {
	t.Helper()
	var read cloud.Request
	for i := range f.Columns() {
		read.Stored = append(read.Stored, i)
	}
	if err := f.Begin(read, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	shown = make([][]string, len(read.Stored))
	err := cloud.EachChunk(f, func(c *cloud.Chunk) {
		for k := range shown {
			for i := range c.Rows {
				shown[k] = append(shown[k], f.Show(k, c.Stored[k].At(i)))
			}
		}
	})
	if err != nil {
		t.Fatal(err)
	}
	return shown
}

// Stored values tell apart what numbers and texts do not: null and NaN, integers
// beyond 2^53, null and an empty text.
func TestStored(t *testing.T) {
	got := storedOf(t, openTableOf(t, 2, tableColumns(5)...))
	want := [][]string{
		{"1.5", "null", "-0", "-Inf", "null"},
		{"-9007199254740992", "9007199254740992", "0", "42", "7"},
		{"-7", "2147483647", "0", "-2147483648", "1"},
		{`"cam1"`, `""`, `"a \"b\"; é\nc"`, `"cam1"`, `"z"`},
	}
	for k := range want {
		if !slices.Equal(got[k], want[k]) {
			t.Errorf("column %d: %q, want %q", k, got[k], want[k])
		}
	}
	odd := storedOf(t, openTableOf(t, 0, Column{"long", []int64{1<<53 + 1, math.MinInt64, math.MaxInt64}}))
	if want := []string{"9007199254740993", "-9223372036854775808", "9223372036854775807"}; !slices.Equal(odd[0], want) {
		t.Errorf("integers %q, want %q", odd[0], want)
	}
}

// Files of another program hold every type and encoding that can be read; their
// stored values are those that numbers and texts come from.
func TestStoredOfEngineFiles(t *testing.T) {
	paths, err := filepath.Glob(filepath.Join("..", "..", "testdata", "parquet", "*.parquet"))
	if err != nil || len(paths) == 0 {
		t.Fatal("no files", err)
	}
	compared := 0
	for _, path := range paths {
		for i := range columnsAt(t, path) {
			compared += checkStored(t, path, i)
		}
	}
	if compared < 1000 {
		t.Errorf("only %d values were compared", compared)
	}
}

func columnsAt(t *testing.T, path string) []cloud.Column {
	t.Helper()
	f, err := Open(path, Options{Coarse: true})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	return f.Columns()
}

// checkStored compares one column as it is stored with its numbers or texts.
func checkStored(t *testing.T, path string, column int) (compared int) {
	t.Helper()
	f, err := Open(path, Options{Coarse: true})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	kind := f.leaves[column].kind
	if !f.CanStore(column) || kind == opaque {
		return 0
	}
	read := cloud.Request{Stored: []int{column}, Numbers: []int{column}}
	if kind == texts {
		read.Numbers, read.Texts = nil, []int{column}
	}
	if err := f.Begin(read, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	err = cloud.EachChunk(f, func(c *cloud.Chunk) {
		for i := range c.Rows {
			stored := c.Stored[0].At(i)
			compared++
			switch {
			case kind == texts && len(stored) > 0:
				if string(stored[1:]) != string(c.Texts[0].At(i)) {
					t.Fatalf("%s: column %d, row %d: %q, want %q", path, column, i, stored[1:], c.Texts[0].At(i))
				}
			case kind != texts && (len(stored) == 0) != (math.Float64bits(c.Numbers[0][i]) == nullBits):
				t.Fatalf("%s: column %d, row %d: %v is stored as %x", path, column, i, c.Numbers[0][i], stored)
			case len(stored) > 0 && (kind == doubles || kind == floats || kind == int32s || kind == int64s):
				v := c.Numbers[0][i]
				if got, err := strconv.ParseFloat(f.Show(column, stored), 64); v == v && (err != nil || float32(got) != float32(v)) {
					t.Fatalf("%s: column %d, row %d: %s, want %v", path, column, i, f.Show(column, stored), v)
				}
			}
		}
	})
	if err != nil {
		t.Fatal(err)
	}
	return compared
}

// Pages above 4 MiB go by way of a scratch file, numbers and texts.
func TestStoredOfLargePages(t *testing.T) {
	const rows = 600_000
	numbers, names := make([]float64, rows), make([]string, rows)
	for i := range numbers {
		numbers[i], names[i] = float64(i)/8, fmt.Sprint("name", i)
	}
	numbers[rows-7] = math.NaN() // null
	got := storedOf(t, openTableOf(t, 0, Column{"n", numbers}, Column{"s", names}))
	for _, i := range []int{0, 1, 65_535, 65_536, rows - 7, rows - 1} {
		want := fmt.Sprintf("%g", numbers[i])
		if i == rows-7 {
			want = "null"
		}
		if got[0][i] != want || got[1][i] != fmt.Sprintf("%q", names[i]) {
			t.Errorf("row %d: %s and %s, want %s and %q", i, got[0][i], got[1][i], want, names[i])
		}
	}
}

func TestEqualChunks(t *testing.T) {
	columns := tableColumns(5)
	a := openTableOf(t, 2, columns...)
	changed := slices.Clone(columns)
	changed[1].Values = []int64{-1 << 53, 1 << 53, 0, 42, 8} // the last was 7
	for _, c := range []struct {
		name string
		b    *File
		want []bool // by column
	}{
		{"the same", openTableOf(t, 2, columns...), []bool{true, true, true, true}},
		{"the last value changed", openTableOf(t, 2, changed...), []bool{true, false, true, true}},
		{"other row groups", openTableOf(t, 3, columns...), []bool{false, false, false, false}},
	} {
		for i := range columns {
			got, err := a.EqualChunks(i, c.b, i)
			if err != nil || got != c.want[i] {
				t.Errorf("%s: column %d: %v (%v), want %v", c.name, i, got, err, c.want[i])
			}
		}
	}
	renamed := slices.Clone(columns)
	renamed[0].Name = "double_raw"
	if equal, err := a.EqualChunks(0, openTableOf(t, 2, renamed...), 0); !equal || err != nil {
		t.Errorf("a column of another name: %v (%v), want equal", equal, err)
	}
	if equal, _ := a.EqualChunks(1, a, 2); equal {
		t.Error("columns of two types are equal")
	}
}
