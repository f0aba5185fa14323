package demo

import (
	"encoding/csv"
	"io"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"bentray/io/cloud"
	"bentray/io/parquetfile"
)

// Both formats hold the same of a shot: what the CSV row says, and nothing where
// it is empty.
func TestParquetTilesHoldWhatRowsHold(t *testing.T) {
	shooter, err := newShooter()
	if err != nil {
		t.Fatal(err)
	}
	plain, table := &tile{name: "a.csv"}, &tile{name: "a.parquet"}
	line := flightLines()[3]
	for pulse := lostEvery/2 - groupRows; pulse < lostEvery/2+500; pulse++ {
		shot := shooter.fire(line, pulse)
		plain.add(&shot)
		table.add(&shot)
	}
	want, err := csv.NewReader(strings.NewReader(cloudColumns + string(plain.cloud))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), table.name)
	if err := table.write(path); err != nil {
		t.Fatal(err)
	}
	got := readParquet(t, path)
	if len(got) != len(want) {
		t.Fatalf("%d rows, want %d", len(got), len(want))
	}
	remarks, lost := 0, 0
	for i := range want {
		for k := range want[i] {
			if got[i][k] != want[i][k] && !sameValue(got[i][k], want[i][k]) {
				t.Fatalf("row %d: %s is %q, want %q", i, want[0][k], got[i][k], want[i][k])
			}
		}
		if strings.Contains(want[i][8], ",") {
			remarks++
		}
		if want[i][0] == "" {
			lost++
		}
	}
	if remarks == 0 || lost != 1 {
		t.Errorf("%d remarks with a comma and %d lost shots, want some and 1", remarks, lost)
	}
}

func sameValue(a, b string) bool {
	x, errX := strconv.ParseFloat(a, 64)
	y, errY := strconv.ParseFloat(b, 64)
	return errX == nil && errY == nil && x == y
}

// readParquet reads a tile as texts, with its header; null is empty.
func readParquet(t *testing.T, path string) [][]string {
	t.Helper()
	f, err := parquetfile.Open(path, parquetfile.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows := [][]string{nil}
	for _, c := range f.Columns() {
		rows[0] = append(rows[0], c.Name)
	}
	if err := f.Begin(cloud.Request{Numbers: []int{0, 1, 2, 3, 4, 5, 6, 7}, Texts: []int{8}}, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			return rows
		} else if err != nil {
			t.Fatal(err)
		}
		for i := range c.Rows {
			var row []string
			for _, n := range c.Numbers {
				text := strconv.FormatFloat(n[i], 'g', -1, 64)
				if math.IsNaN(n[i]) {
					text = ""
				}
				row = append(row, text)
			}
			rows = append(rows, append(row, string(c.Texts[0].At(i))))
		}
	}
}

// The same comparison, whatever the format of the output.
func TestCompareParquet(t *testing.T) {
	nan := math.NaN()
	output := []parquetfile.Column{
		{Name: "x", Values: []float64{0, 0, nan, 9}},
		{Name: "y", Values: []float64{0, 0, nan, 9}},
		{Name: "z", Values: []float64{-1, -3.0005, nan, 9}},
		{Name: "outcome", Values: []string{"corrected", "corrected", "invalid", "dry"}},
		{Name: "x_raw", Values: []float64{3, 0, nan, 9}},
		{Name: "y_raw", Values: []float64{4, 0, nan, 9}},
		{Name: "z_raw", Values: []float64{-3, -4, nan, 9}},
	}
	text, err := Compare(smallSurvey(t, smallOutput, smallTruth))
	if err != nil {
		t.Fatal(err)
	}
	for _, groupRows := range []int{0, 1, 3} {
		c, err := Compare(parquetSurvey(t, output, groupRows))
		if err != nil {
			t.Fatal(err)
		}
		if c.Points != 4 || c.Unexpected != 0 || c.Outcomes["invalid"] != 1 || c.All != text.All {
			t.Errorf("groups of %d: comparison is %+v, want %+v", groupRows, c, text)
		}
	}
	for name, columns := range map[string][]parquetfile.Column{
		"a column that is gone": output[:6],
		"a row too few": {
			{Name: "x", Values: []float64{0}},
			{Name: "y", Values: []float64{0}},
			{Name: "z", Values: []float64{-1}},
			{Name: "outcome", Values: []string{"corrected"}},
			{Name: "x_raw", Values: []float64{3}},
			{Name: "y_raw", Values: []float64{4}},
			{Name: "z_raw", Values: []float64{-3}},
		},
	} {
		if c, err := Compare(parquetSurvey(t, columns, 0)); err == nil {
			t.Errorf("%s: comparison is %+v, want an error", name, c)
		}
	}
}

// parquetSurvey is smallSurvey with an output in Parquet.
func parquetSurvey(t *testing.T, output []parquetfile.Column, groupRows int) *Survey {
	t.Helper()
	s := smallSurvey(t, smallOutput, smallTruth)
	s.Tiles = []string{"sub/tile.parquet"}
	f, err := os.Create(below(s.Corrected, s.Tiles[0]))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if err := parquetfile.WriteTable(f, output, groupRows); err != nil {
		t.Fatal(err)
	}
	return s
}
