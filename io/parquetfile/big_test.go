package parquetfile

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// bigRows is enough for pages that go to the scratch file, and for new pages of
// three coordinates and six columns that do.
const bigRows = 600_000

// bigFile has one row group, and pages of all its rows.
func bigFile(t testing.TB) (path string, z []any) {
	x := built{name: "x", typ: parquet.Type_DOUBLE, required: true, codec: parquet.CompressionCodec_SNAPPY}
	y := built{name: "y", typ: parquet.Type_INT32}
	last := built{name: "z", typ: parquet.Type_DOUBLE, version: 2, codec: parquet.CompressionCodec_SNAPPY}
	for i := range bigRows {
		x.values = append(x.values, float64(i)/4)
		y.values = append(y.values, int32(-i))
		if i%1000 == 7 {
			last.values = append(last.values, nil)
		} else {
			last.values = append(last.values, -math.Sqrt(float64(i)))
		}
	}
	return buildFile(t, []built{x, y, last}, []int{bigRows}, nil), last.values
}

// TestGiantPages reads pages and writes a row group that do not stay in
// memory, and leaves no scratch file behind.
func TestGiantPages(t *testing.T) {
	path, z := bigFile(t)
	folder := t.TempDir()
	layout := cloud.Layout{XYZ: [3]int{0, 1, 2}, RawNames: rawNames, Moved: []bool{true}}
	for k := range 6 {
		layout.Added = append(layout.Added, cloud.Added{Name: fmt.Sprint("more", k)})
	}
	o := Options{Output: filepath.Join(folder, "out.parquet")}
	out, err := rewrite(path, o, cloud.Request{Numbers: []int{0, 1, 2}}, layout, 2, func(c *cloud.Chunk) {
		clear(c.Class)
		for k := range c.Added {
			copy(c.Added[k], c.Numbers[0])
		}
		for k := range c.XYZ {
			for i, v := range c.Numbers[k] {
				c.XYZ[k][i] = 2 * v
			}
		}
	})
	if err != nil {
		t.Fatal(err)
	}
	if left, err := os.ReadDir(folder); err != nil || len(left) != 0 {
		t.Errorf("the scratch folder holds %v (%v), want nothing", left, err)
	}
	gone := Options{Output: filepath.Join(folder, "gone", "out.parquet")}
	if _, _, err := readAll(path, gone, cloud.Request{Numbers: []int{0}}); err == nil || err.Error() != path+": a scratch file failed: no such file or directory" {
		t.Errorf("without a scratch folder: got error %v, want one that names no column", err)
	}
	made := filepath.Join(t.TempDir(), "out.parquet")
	if err := os.WriteFile(made, out, 0o600); err != nil {
		t.Fatal(err)
	}
	numbers, _, err := readAll(made, o, cloud.Request{Numbers: []int{0, 1, 2, 5, 11}})
	if err != nil {
		t.Fatal(err)
	}
	for i := range bigRows {
		raw, isSet := z[i].(float64)
		if numbers[0][i] != float64(i)/2 || numbers[1][i] != float64(-2*i) {
			t.Fatalf("row %d is at %v, %v, want %v, %v", i, numbers[0][i], numbers[1][i], float64(i)/2, -2*i)
		}
		if numbers[4][i] != float64(i)/4 {
			t.Fatalf("the last new column of row %d is %v, want %v", i, numbers[4][i], float64(i)/4)
		}
		if got := numbers[3][i]; isSet && got != raw || !isSet && !isMarked(got) {
			t.Fatalf("z_raw of row %d is %v, want %v", i, got, z[i])
		}
		if got := numbers[2][i]; isSet && got != 2*raw || !isSet && !isMarked(got) {
			t.Fatalf("z of row %d is %v, want twice %v", i, got, z[i])
		}
	}
}

// TestGiantMemory wants nothing kept of giant pages but their scratch file.
func TestGiantMemory(t *testing.T) {
	path, _ := bigFile(t)
	var before, after runtime.MemStats
	runtime.GC()
	runtime.ReadMemStats(&before)
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var c cloud.Chunk
	if err := f.Begin(cloud.Request{Numbers: []int{0, 2}}, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	if err := f.Next(&c); err != nil {
		t.Fatal(err)
	}
	runtime.GC()
	runtime.ReadMemStats(&after)
	if more := int64(after.HeapAlloc) - int64(before.HeapAlloc); more > 3<<20 {
		t.Errorf("%d bytes are held behind two pages of %d, want at most 3 MiB: 1.2 for a piece, the rest for buffers", more, 8*bigRows)
	}
	runtime.KeepAlive(f)
}

// TestAllocations wants no allocation by row: decoding and encoding a piece
// once more takes those of its page headers alone.
func TestAllocations(t *testing.T) {
	const rows = 32 * pieceRows
	c := built{typ: parquet.Type_DOUBLE, pages: make([]int, 40)}
	for i := range c.pages {
		c.pages[i] = pieceRows
	}
	c.values = make([]any, rows)
	for i := range c.values {
		c.values[i] = float64(i)
		if i%9 == 0 {
			c.values[i] = nil
		}
	}
	x, y, z := c, c, c
	x.name, y.name, z.name = "x", "y", "z"
	y.encoding, z.codec = parquet.Encoding_BYTE_STREAM_SPLIT, parquet.CompressionCodec_SNAPPY
	path := buildFile(t, []built{x, y, z}, []int{rows}, nil)
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	layout := surveyLayout()
	layout.XYZ = [3]int{0, 1, 2}
	if err := f.Begin(cloud.Request{Numbers: []int{0, 1, 2}}, layout, discard{}); err != nil {
		t.Fatal(err)
	}
	var chunk cloud.Chunk
	step := func() {
		if err := f.Next(&chunk); err != nil {
			t.Fatal(err)
		}
		chunk.Resize(chunk.Rows, layout)
		for i := range chunk.Rows {
			chunk.Class[i] = uint8(i % 3)
			chunk.Added[0][i], chunk.Added[1][i] = math.NaN(), 3
		}
		if err := f.Encode(&chunk); err != nil {
			t.Fatal(err)
		}
	}
	step()
	if n := testing.AllocsPerRun(20, step); n > 150 {
		t.Errorf("%v allocations for a piece of %d rows, want at most 150", n, chunk.Rows)
	}
}

// discard takes bytes and forgets them.
type discard struct{}

func (discard) Write(b []byte) (int, error) { return len(b), nil }
