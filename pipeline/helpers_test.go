package pipeline

import (
	"bytes"
	"context"
	"encoding/csv"
	"fmt"
	"io/fs"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// media is the water and air of standardSea.
const media = `
[water]
temperature = 17.5
salinity = 34.9
[air]
temperature = 18
humidity = 60
`

// files of a survey by name, with slashes.
type files map[string]string

// write puts the files below a folder.
func (f files) write(t testing.TB, folder string) {
	t.Helper()
	for name, text := range f {
		path := filepath.Join(folder, filepath.FromSlash(name))
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
}

// loadJob writes a job file into the folder and reads it.
func loadJob(t testing.TB, folder, text string) *job.Job {
	t.Helper()
	files{"job.toml": text}.write(t, folder)
	j, err := job.Load(filepath.Join(folder, "job.toml"))
	if err != nil {
		t.Fatal(err)
	}
	return j
}

// runJob does a job of which no file may fail.
func runJob(t testing.TB, j *job.Job, o Options) *receipt.Summary {
	t.Helper()
	summary, err := Run(context.Background(), j, o)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range summary.Files {
		if f.Error != "" {
			t.Fatalf("%s failed: %s", f.Input, f.Error)
		}
	}
	return summary
}

// correctText does a job of one file, raw/a.csv, and returns its output and
// receipt. The job writes to the folder true.
func correctText(t *testing.T, cloud, jobText string) (string, *receipt.Receipt) {
	t.Helper()
	folder := t.TempDir()
	files{"raw/a.csv": cloud, "water.geojson": polygonOf(0, 0, 9, 9)}.write(t, folder)
	runJob(t, loadJob(t, folder, jobText), Options{Workers: 2})
	return readFile(t, folder, "true/a.csv"), readReceipt(t, filepath.Join(folder, "true/a.csv"))
}

func readFile(t *testing.T, folder, name string) string {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(folder, name))
	if err != nil {
		t.Fatal(err)
	}
	return string(data)
}

func readReceipt(t *testing.T, output string) *receipt.Receipt {
	t.Helper()
	r, err := receipt.Read(output)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// table is a CSV file as encoding/csv reads it.
type table struct {
	names []string
	rows  [][]string
}

func readTable(t *testing.T, text string) table {
	t.Helper()
	r := csv.NewReader(strings.NewReader(text))
	all, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return table{all[0], all[1:]}
}

func (tb table) has(name string) bool { return slices.Contains(tb.names, name) }

func (tb table) text(t *testing.T, row int, name string) string {
	t.Helper()
	i := slices.Index(tb.names, name)
	if i < 0 {
		t.Fatalf("no column %q among %q", name, tb.names)
	}
	return tb.rows[row][i]
}

func (tb table) column(t *testing.T, name string) []string {
	t.Helper()
	column := make([]string, len(tb.rows))
	for i := range tb.rows {
		column[i] = tb.text(t, i, name)
	}
	return column
}

func (tb table) number(t *testing.T, row int, name string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(tb.text(t, row, name), 64)
	if err != nil {
		t.Fatalf("row %d: %s: %v", row, name, err)
	}
	return v
}

// snapshot is every file below a folder by name.
func snapshot(t *testing.T, folder string) map[string]string {
	t.Helper()
	all := map[string]string{}
	err := filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
		if err != nil || !d.Type().IsRegular() {
			return err
		}
		data, err := os.ReadFile(path)
		name, _ := filepath.Rel(folder, path)
		all[filepath.ToSlash(name)] = string(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return all
}

// outputs is a snapshot without summaries, which hold times.
func outputs(t *testing.T, folder string) map[string]string {
	t.Helper()
	all := snapshot(t, folder)
	maps.DeleteFunc(all, func(name, _ string) bool { return strings.HasPrefix(name, "run-summary") })
	return all
}

// same fails the test where two snapshots differ.
func same(t *testing.T, what string, got, want map[string]string) {
	t.Helper()
	names := slices.Sorted(maps.Keys(want))
	if g := slices.Sorted(maps.Keys(got)); !slices.Equal(g, names) {
		t.Errorf("%s: files are %q, want %q", what, g, names)
		return
	}
	for _, name := range names {
		if got[name] != want[name] {
			t.Errorf("%s: %s differs: %s", what, name, difference(got[name], want[name]))
		}
	}
}

// difference shows the first line in which two texts differ.
func difference(got, want string) string {
	g, w := strings.Split(got, "\n"), strings.Split(want, "\n")
	for i := range min(len(g), len(w)) {
		if g[i] != w[i] {
			return fmt.Sprintf("line %d is\n%q, want\n%q", i+1, g[i], w[i])
		}
	}
	return fmt.Sprintf("%d lines, want %d", len(g), len(w))
}

// exact writes a number so that it reads back to the bit.
func exact(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }

// row joins fields to a line.
func row(b *bytes.Buffer, fields ...string) {
	b.WriteString(strings.Join(fields, ",") + "\n")
}
