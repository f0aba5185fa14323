package quality

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"bentray/io/parquetfile"
)

// formats are the endings of the clouds' names, for tests that hold for all.
var formats = []string{"csv", "parquet"}

// sheet is a table in the test's hands: a header and rows of text.
type sheet [][]string

func (s sheet) column(name string) int { return slices.Index(s[0], name) }

// clone is a deep copy.
func (s sheet) clone() sheet {
	c := make(sheet, len(s))
	for i := range s {
		c[i] = slices.Clone(s[i])
	}
	return c
}

// set puts a text into a row, counted from 1.
func (s sheet) set(row int, name, text string) { s[row][s.column(name)] = text }

func (s sheet) csv() string {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	_ = w.WriteAll(s) // to memory
	return b.String()
}

// numbers reads a column; empty is NaN.
func (s sheet) numbers(t testing.TB, name string) []float64 {
	t.Helper()
	var list []float64
	for _, row := range s[1:] {
		v := math.NaN()
		if text := row[s.column(name)]; text != "" {
			var err error
			if v, err = strconv.ParseFloat(text, 64); err != nil {
				t.Fatal(err)
			}
		}
		list = append(list, v)
	}
	return list
}

// textColumns are no numbers in Parquet.
var textColumns = []string{"label", "outcome", "model", "run", "sensor"}

// columns are the sheet's, as numbers but for textColumns.
func (s sheet) columns(t testing.TB) []parquetfile.Column {
	t.Helper()
	var columns []parquetfile.Column
	for i, name := range s[0] {
		c := parquetfile.Column{Name: name}
		if slices.Contains(textColumns, name) {
			list := []string{}
			for _, row := range s[1:] {
				list = append(list, row[i])
			}
			c.Values = list
		} else {
			c.Values = s.numbers(t, name)
		}
		columns = append(columns, c)
	}
	return columns
}

func (s sheet) parquet(t testing.TB, groupRows int) string {
	t.Helper()
	return parquetOf(t, groupRows, s.columns(t))
}

func parquetOf(t testing.TB, groupRows int, columns []parquetfile.Column) string {
	t.Helper()
	var b bytes.Buffer
	if err := parquetfile.WriteTable(&b, columns, groupRows); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// write puts the sheet into a file whose name tells the format.
func (s sheet) write(t testing.TB, path string) string {
	t.Helper()
	text := ""
	if strings.HasSuffix(path, ".parquet") {
		text = s.parquet(t, 700)
	} else {
		text = s.csv()
	}
	return writeFile(t, path, text)
}

func writeFile(t testing.TB, path, text string) string {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

func text(v float64, decimals int) string { return strconv.FormatFloat(v, 'f', decimals, 64) }

const sceneLevel = 0.42

// scene makes a raw cloud, and what a correction would make of it: depths of 1 to 12
// under a bed that falls to the east come to 0.75 of themselves, and points move by a
// tenth of the depth to the west. Every tenth point is dry.
func scene(rows int) (raw, corrected sheet) {
	rng := rand.New(rand.NewPCG(41, 7))
	raw = sheet{{"x", "y", "z", "intensity", "point_source_id", "label"}}
	corrected = sheet{append(slices.Clone(raw[0]), "x_raw", "y_raw", "z_raw", "depth", "water_level", "outcome", "incidence_deg", "run")}
	for i := range rows {
		x, y := 400*rng.Float64(), 300*rng.Float64()
		z := sceneLevel - (1 + 11*x/400)
		if i%10 == 9 {
			z = sceneLevel + 1 + rng.Float64()
		}
		own := []string{text(500_000+x, 3), text(7_000_000+y, 3), text(z, 3), strconv.Itoa(rng.IntN(4000)), strconv.Itoa(1 + i%3), "p" + strconv.Itoa(i)}
		raw = append(raw, own)
		corrected = append(corrected, correctedRow(own, rng.Float64()*20))
	}
	return raw, corrected
}

func correctedRow(own []string, incidence float64) []string {
	x, _ := strconv.ParseFloat(own[0], 64)
	z, _ := strconv.ParseFloat(own[2], 64)
	row := append(slices.Clone(own), own[0], own[1], own[2])
	if z > sceneLevel {
		return append(row, text(sceneLevel-z, 4), text(sceneLevel, 2), "dry", text(incidence, 5), "a1b2c3")
	}
	depth := 0.75 * (sceneLevel - z)
	row[0], row[2] = text(x-depth/10, 6), text(sceneLevel-depth, 6)
	return append(row, text(depth, 6), text(sceneLevel, 2), "corrected", text(incidence, 5), "a1b2c3")
}

// diffSheets writes a pair and compares it.
func diffSheets(t testing.TB, format string, raw, corrected sheet, o Options) *Report {
	t.Helper()
	folder := t.TempDir()
	r, err := Diff(t.Context(), raw.write(t, filepath.Join(folder, "raw", "a."+format)), corrected.write(t, filepath.Join(folder, "true", "a."+format)), o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func asJSON(t testing.TB, r *Report) string {
	t.Helper()
	data, err := json.MarshalIndent(r, "", " ")
	if err != nil {
		t.Fatal(err)
	}
	return string(data)
}
