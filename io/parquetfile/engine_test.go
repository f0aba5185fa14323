package parquetfile

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"bentray/io/cloud"
)

const engineFolder = "../../testdata/parquet"

// enginePoints reads the table that the engine made its files from.
func enginePoints(t testing.TB) (names []string, rows [][]string) {
	t.Helper()
	f, err := os.Open(filepath.Join(engineFolder, "points.csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err = csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows[0], rows[1:]
}

// TestEngineFiles reads files of a columnar SQL engine (DuckDB 1.5.6) and wants
// the values that the engine itself wrote as text.
func TestEngineFiles(t *testing.T) {
	names, rows := enginePoints(t)
	for _, file := range []string{"none", "snappy", "gzip", "zstd", "plain", "v2"} {
		path := filepath.Join(engineFolder, file+".parquet")
		for k, name := range names {
			t.Run(file+"/"+name, func(t *testing.T) { checkEngineColumn(t, path, name, k, rows) })
		}
	}
}

// timeUnits are the parts of a second in which the engine's times are written.
var timeUnits = map[string]float64{"time_ms": 1e3, "time_us": 1e6, "time_ns": 1e9}

func checkEngineColumn(t *testing.T, path, name string, k int, rows [][]string) {
	t.Helper()
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	i, err := cloud.Find(f.Columns(), name)
	if err != nil || i < 0 {
		t.Fatalf("no column %q (%v)", name, err)
	}
	if name == "views" || name == "note" {
		_, texts, err := readAll(path, Options{}, cloud.Request{Texts: []int{i}})
		if err != nil {
			t.Fatal(err)
		}
		for row, want := range rows {
			if texts[0][row] != want[k] {
				t.Fatalf("row %d is %q, want %q", row+1, texts[0][row], want[k])
			}
		}
		return
	}
	numbers, _, err := readAll(path, Options{}, cloud.Request{Numbers: []int{i}})
	if err != nil {
		t.Fatal(err)
	}
	if len(numbers[0]) != len(rows) {
		t.Fatalf("%d rows, want %d", len(numbers[0]), len(rows))
	}
	for row, want := range rows {
		if got := numbers[0][row]; !agrees(got, want[k], timeUnits[name]) {
			t.Fatalf("row %d is %v, want %q", row+1, got, want[k])
		}
	}
}

// agrees compares a number with the engine's text. Times may be off by one step
// of a float64 near 2024, 2^-22 s; all else is equal, and null apart from NaN.
func agrees(got float64, text string, parts float64) bool {
	if text == "" {
		return isMarked(got)
	}
	want, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return false
	}
	if parts > 0 {
		return math.Abs(got-want/parts) <= 1.0/(1<<22)
	}
	return got == want || math.IsNaN(got) && math.IsNaN(want) && !isMarked(got)
}

// TestEngineCopy rewrites the engine's files, nested and unreadable columns
// among them, and wants the old chunks byte by byte and every row.
func TestEngineCopy(t *testing.T) {
	_, rows := enginePoints(t)
	for _, file := range []string{"none", "snappy", "gzip", "zstd", "plain", "v2", "nested"} {
		t.Run(file, func(t *testing.T) {
			path := filepath.Join(engineFolder, file+".parquet")
			layout := surveyLayout()
			layout.XYZ = [3]int{0, 1, 2}
			layout.Added[4].Name = "ray_count" // views is in the file
			out, err := rewrite(path, Options{}, cloud.Request{Numbers: []int{0, 1, 2}}, layout, 2, fillEngine)
			if err != nil {
				t.Fatal(err)
			}
			f, made := reopen(t, out)
			checkCopies(t, path, f)
			wanted := rows[:f.Rows()]
			z := make([]any, len(wanted))
			for i, row := range wanted {
				if v, err := strconv.ParseFloat(row[2], 64); err == nil && v <= -2 {
					z[i] = v * 1.25
				} else if err == nil {
					z[i] = v
				}
			}
			checkOutput(t, made, map[string][]any{"z": z})
		})
	}
}

func fillEngine(c *cloud.Chunk) {
	for i, z := range c.Numbers[2] {
		c.Class[i] = surveyClass(z)
		c.XYZ[0][i], c.XYZ[1][i], c.XYZ[2][i] = c.Numbers[0][i]+1, c.Numbers[1][i]+2, z*1.25
		c.Added[0][i], c.Added[1][i] = -z, float64(i)
	}
}

// TestEngineCodec names the column and the codec that cannot be read.
func TestEngineCodec(t *testing.T) {
	path := filepath.Join(engineFolder, "lz4.parquet")
	_, _, err := readAll(path, Options{}, cloud.Request{Numbers: []int{1}})
	if want := path + `: column "y", row group 1: is compressed with LZ4_RAW, want none, SNAPPY, GZIP or ZSTD`; err == nil || err.Error() != want {
		t.Errorf("got error %v, want %s", err, want)
	}
}

// TestEngineEncodings makes sure that the files bring what they are here for.
func TestEngineEncodings(t *testing.T) {
	f, err := Open(filepath.Join(engineFolder, "v2.parquet"), Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var found []string
	for _, c := range f.groups[0].Columns {
		found = append(found, c.MetaData.Encodings[0].String())
	}
	for _, e := range strings.Fields("BYTE_STREAM_SPLIT DELTA_BINARY_PACKED RLE_DICTIONARY DELTA_LENGTH_BYTE_ARRAY") {
		if !slices.Contains(found, e) {
			t.Errorf("no column of v2.parquet is %s: %q", e, found)
		}
	}
}
