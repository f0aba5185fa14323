package main

import (
	"bytes"
	"encoding/csv"
	"io"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"bentray/io/cloud"
	"bentray/io/parquetfile"
)

// readTable reads a file as texts by column; null is empty.
func readTable(t *testing.T, path string) (map[string]int, [][]string) {
	t.Helper()
	if parquetfile.IsName(path) {
		return readParquet(t, path)
	}
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	columns := map[string]int{}
	for i, name := range rows[0] {
		columns[name] = i
	}
	return columns, rows[1:]
}

func readParquet(t *testing.T, path string) (map[string]int, [][]string) {
	t.Helper()
	f, err := parquetfile.Open(path, parquetfile.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	columns, places, read := map[string]int{}, []int{}, cloud.Request{}
	for i, c := range f.Columns() {
		columns[c.Name] = i
		if strings.HasPrefix(c.Type, "BYTE_ARRAY") {
			places = append(places, len(read.Texts))
			read.Texts = append(read.Texts, i)
		} else {
			places = append(places, len(read.Numbers))
			read.Numbers = append(read.Numbers, i)
		}
	}
	if err := f.Begin(read, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	var rows [][]string
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			return columns, rows
		} else if err != nil {
			t.Fatal(err)
		}
		for i := range c.Rows {
			row := make([]string, len(places))
			for k, place := range places {
				if slices.Contains(read.Texts, k) {
					row[k] = string(c.Texts[place].At(i))
				} else if v := c.Numbers[place][i]; v == v {
					row[k] = strconv.FormatFloat(v, 'g', -1, 64)
				}
			}
			rows = append(rows, row)
		}
	}
}

// farthest returns how far three coordinates of one row lie from those of another.
func farthest(t *testing.T, a, b []string) (d float64) {
	t.Helper()
	for k := range 3 {
		x, errX := strconv.ParseFloat(a[k], 64)
		y, errY := strconv.ParseFloat(b[k], 64)
		if errX != nil || errY != nil {
			t.Fatalf("coordinates are %q and %q, want numbers", a[k], b[k])
		}
		d = max(d, math.Abs(x-y))
	}
	return d
}

// The demo reads its files back itself; here they are read once more.
func TestDemoMeetsItsTruth(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "demo-out")
	var stdout, stderr bytes.Buffer
	if code := run(t.Context(), []string{"demo", folder}, &stdout, &stderr); code != exitDone || stderr.Len() > 0 {
		t.Fatalf("exit code is %d with %q on stderr, want 0 and nothing", code, &stderr)
	}
	for _, want := range []string{"200 000 points in 5 tiles (3 CSV, 2 Parquet)", "all bands", "What is left is rounding", "Otterlode reach", "points in 2 tiles (1 CSV, 1 Parquet)", "Tansy Pool", "points in 2 tiles (CSV)", "bentray plan " + filepath.Join(folder, "survey.toml")} {
		if !strings.Contains(stdout.String(), want) {
			t.Errorf("the report lacks %q:\n%s", want, &stdout)
		}
	}
	checkReadme(t, stdout.String())
	counts := map[string]int{}
	for _, name := range []string{"tile_01.csv", "tile_02.parquet", "tile_03.csv", "tile_04.parquet", "cross_line/tile_05.csv"} {
		if raw := checkTile(t, folder, name, 0.001, counts); raw < 3 {
			t.Errorf("%s: the largest raw error is %g m, want metres", name, raw)
		}
	}
	if total := sum(counts); total != 200_000 || counts["invalid"] != 5 || len(counts) != 5 {
		t.Errorf("outcomes are %v, want 200000 points, 5 of them invalid", counts)
	}
	wantEach(t, counts, "corrected", "outside", "dry", "no_origin")
	river := map[string]int{}
	for _, name := range []string{"upper.csv", "lower.parquet"} {
		if raw := checkTile(t, filepath.Join(folder, "river"), name, 0.002, river); raw < 1 {
			t.Errorf("%s: the largest raw error is %g m, want more than a metre", name, raw)
		}
		checkSources(t, filepath.Join(folder, "river", "corrected", name))
	}
	if total := sum(river); total < 50_000 || len(river) != 3 {
		t.Errorf("outcomes of the river are %v, want 50000 points or more in three", river)
	}
	wantEach(t, river, "corrected", "dry", "no_surface")
	pool := map[string]int{}
	for _, name := range []string{"head.csv", "tail.csv"} {
		if raw := checkTile(t, filepath.Join(folder, "pool"), name, 0.001, pool); raw < 1 {
			t.Errorf("%s: the largest raw error is %g m, want more than a metre", name, raw)
		}
	}
	if total := sum(pool); total < 30_000 || len(pool) != 3 || pool["few_rays"] < 10 {
		t.Errorf("outcomes of the pool are %v, want 30000 points or more, 10 or more of them few_rays", pool)
	}
	wantEach(t, pool, "corrected", "dry")
	checkSolutions(t, filepath.Join(folder, "pool"), stdout.String())
}

func sum(counts map[string]int) (total int) {
	for _, n := range counts {
		total += n
	}
	return total
}

func wantEach(t *testing.T, counts map[string]int, outcomes ...string) {
	t.Helper()
	for _, outcome := range outcomes {
		if counts[outcome] < 1000 {
			t.Errorf("%d points are %s, want 1000 at least", counts[outcome], outcome)
		}
	}
}

// checkSources holds each corrected point's water against that which the pulse went
// through, which the remark names.
func checkSources(t *testing.T, path string) {
	t.Helper()
	at, rows := readTable(t, path)
	seen := map[string]int{}
	for i, row := range rows {
		if row[at["outcome"]] != "corrected" {
			continue
		}
		want := "zone " + row[at["remark"]]
		if row[at["remark"]] == "river" {
			want = "job"
		}
		if got := row[at["water_source"]]; got != want {
			t.Fatalf("%s: row %d has its water from %q, want %q", path, i+1, got, want)
		}
		seen[want]++
	}
	if len(seen) < 2 {
		t.Errorf("%s: the waters are %v, want two or more", path, seen)
	}
}

// checkReadme wants the sessions that README.md shows, the start and the pool, to be what
// the demo prints, but for how long it took.
func checkReadme(t *testing.T, printed string) {
	t.Helper()
	text, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	timeless := func(s string) string { return regexp.MustCompile(`in [0-9.]+ s\n`).ReplaceAllString(s, "in - s\n") }
	_, behind, _ := strings.Cut(string(text), "The first command prints")
	for _, start := range []string{"Lantern Cove", "Tansy Pool"} {
		_, behind, _ = strings.Cut(behind, "```\n"+start)
		session, after, found := strings.Cut(behind, "```\n")
		if behind = after; !found || !strings.Contains(timeless("\n"+printed), timeless("\n"+start+session)) {
			t.Errorf("README.md shows\n%s%s\nand the demo prints\n%s", start, session, printed)
		}
	}
}

// checkTile holds an output against its truth, within a limit (m), and its raw tile.
// It counts outcomes and returns the largest raw error of the corrected points.
func checkTile(t *testing.T, folder, name string, limitM float64, counts map[string]int) (rawErrorM float64) {
	t.Helper()
	at, rows := readTable(t, filepath.Join(folder, "corrected", name))
	_, truth := readTable(t, filepath.Join(folder, "truth", strings.TrimSuffix(name, filepath.Ext(name))+".csv"))
	_, raw := readTable(t, filepath.Join(folder, "raw", name))
	if len(rows) != len(truth) || len(rows) != len(raw) {
		t.Fatalf("%s: %d rows, want %d as the truth and %d as the raw tile", name, len(rows), len(truth), len(raw))
	}
	for i, row := range rows {
		outcome := row[at["outcome"]]
		counts[outcome]++
		if outcome != truth[i][4] {
			t.Fatalf("%s: row %d is %s, want %s", name, i+1, outcome, truth[i][4])
		}
		if outcome != "corrected" {
			if row[0] != raw[i][0] || row[1] != raw[i][1] || row[2] != raw[i][2] {
				t.Fatalf("%s: row %d is %s and at %q, want it where it was", name, i+1, outcome, row[:3])
			}
			continue
		}
		if d := farthest(t, row, truth[i]); !(d < limitM) {
			t.Fatalf("%s: row %d lies %g m from the truth, want less than %g m", name, i+1, d, limitM)
		}
		rawErrorM = max(rawErrorM, farthest(t, raw[i], truth[i]))
	}
	return rawErrorM
}

func TestDemoRefusesAForeignFolder(t *testing.T) {
	folder := t.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "notes.txt"), []byte("keep"), 0o666); err != nil {
		t.Fatal(err)
	}
	var stdout, stderr bytes.Buffer
	if code := run(t.Context(), []string{"demo", folder}, &stdout, &stderr); code != exitCall {
		t.Errorf("exit code is %d, want %d", code, exitCall)
	}
	if stdout.Len() > 0 || !strings.Contains(stderr.String(), "not empty") {
		t.Errorf("stdout is %q and stderr %q, want one message about the folder", &stdout, &stderr)
	}
	entries, err := os.ReadDir(folder)
	if err != nil || len(entries) != 1 {
		t.Errorf("the folder holds %v (%v), want it untouched", entries, err)
	}
}

func TestFixed(t *testing.T) {
	for _, c := range []struct {
		v    float64
		want string
	}{{-0.001, "0.00"}, {0, "0.00"}, {-0.006, "-0.01"}, {-10, "-10.00"}, {0.254, "0.25"}, {math.NaN(), "NaN"}} {
		if got := fixed(c.v, 2); got != c.want {
			t.Errorf("fixed(%g, 2) = %q, want %q", c.v, got, c.want)
		}
	}
}
