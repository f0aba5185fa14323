package pipeline

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"maps"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"bentray/pipeline/receipt"
)

// sumOf is the SHA-256 of a text.
func sumOf(text string) string {
	sum := sha256.Sum256([]byte(text))
	return hex.EncodeToString(sum[:])
}

func TestReceiptOfAFile(t *testing.T) {
	folder := fleet(t)
	s := runJob(t, loadJob(t, folder, "title = \"Lantern Cove\"\n"+fleetText("true")), Options{})
	text := readFile(t, folder, "true/part0/t2.csv.receipt.json")
	r := readReceipt(t, filepath.Join(folder, "true/part0/t2.csv"))

	file := func(name string) receipt.File {
		data := readFile(t, folder, name)
		return receipt.File{Path: name, Bytes: int64(len(data)), SHA256: sumOf(data)}
	}
	output := file("true/part0/t2.csv")
	output.Path = "part0/t2.csv"
	if r.Output != output {
		t.Errorf("the output is %+v, want %+v", r.Output, output)
	}
	want := []receipt.Input{{Use: "cloud", File: file("raw/part0/t2.csv")}, {Use: "trajectory", File: file("flight.csv")}, {Use: "extent", File: file("water.geojson")}}
	if !slices.Equal(r.Inputs, want) {
		t.Errorf("inputs are %+v, want %+v", r.Inputs, want)
	}
	if r.RowsRead != 700 || r.RowsWritten != 700 || r.RowsDiverted != 0 || r.Program != Program || r.Run != s.Run {
		t.Errorf("the receipt is %s", text)
	}
	checkKeys(t, text)
	checkAgainstOutput(t, r, readTable(t, readFile(t, folder, "true/part0/t2.csv")))
	host, err := os.Hostname()
	if err != nil {
		t.Fatal(err)
	}
	for _, no := range []string{folder, fmt.Sprintf("%q", host), "Lantern", "raw/**", `"folder"`} {
		if strings.Contains(text, no) {
			t.Errorf("the receipt holds %q: %s", no, text)
		}
	}
	if date := regexp.MustCompile(`\d{4}-\d\d-\d\d|\d\d:\d\d`).FindString(text); date != "" {
		t.Errorf("the receipt holds the time %q: %s", date, text)
	}
}

func checkKeys(t *testing.T, text string) {
	t.Helper()
	var keys map[string]json.RawMessage
	if err := json.Unmarshal([]byte(text), &keys); err != nil {
		t.Fatal(err)
	}
	want := []string{"cautions", "inputs", "job", "outcomes", "output", "program", "ranges", "rows_diverted", "rows_read", "rows_written", "run"}
	if got := slices.Sorted(maps.Keys(keys)); !slices.Equal(got, want) {
		t.Errorf("keys are %q, want %q", got, want)
	}
}

// checkAgainstOutput counts the output's own columns.
func checkAgainstOutput(t *testing.T, r *receipt.Receipt, out table) {
	t.Helper()
	counts := map[string]int64{}
	depth, incidence := emptySpan(), emptySpan()
	for i, outcome := range out.column(t, "outcome") {
		counts[outcome]++
		if out.text(t, i, "run") != r.Run[:12] {
			t.Errorf("row %d: run is %s, want the first 12 digits of %s", i, out.text(t, i, "run"), r.Run)
		}
		if outcome == "corrected" {
			depth.add(out.number(t, i, "depth"))
			incidence.add(out.number(t, i, "incidence_deg"))
		}
	}
	if !maps.Equal(counts, r.Outcomes) || counts["corrected"] == 0 || counts["outside"] == 0 {
		t.Errorf("outcomes are %v, the rows have %v", r.Outcomes, counts)
	}
	for i, want := range []float64{depth.low, depth.high} {
		near(t, i, "the range of depth", r.Ranges["depth"][i], want, 0.5001e-4)
	}
	for i, want := range []float64{incidence.low, incidence.high} {
		near(t, i, "the range of incidence_deg", r.Ranges["incidence_deg"][i], want, 0.5001e-5)
	}
	for name, index := range map[string]string{"n_water": "n_water", "ng_water": "ng_water"} {
		near(t, 0, "the range of "+name, r.Ranges[name][0], out.number(t, slices.Index(out.column(t, "outcome"), "corrected"), index), 0.5001e-9)
	}
}

// Depths in a receipt are in the job's vertical unit, as in the column.
func TestReceiptUnits(t *testing.T) {
	text, r := correctText(t, tiny, strings.Replace(tinyJob(`"raw/*.csv"`, "true"), "[output]", "vertical_unit = \"ft\"\n[output]", 1))
	near(t, 0, "depth", r.Ranges["depth"][1], readTable(t, text).number(t, 0, "depth"), 0.5001e-4)
}

func TestRunSummary(t *testing.T) {
	folder := fleet(t)
	files{"raw/wrong.csv": "x,y\n1,2\n"}.write(t, folder)
	j := fleetJob(t, folder, "true")
	s, err := Run(t.Context(), j, Options{Workers: 2})
	if err != nil {
		t.Fatal(err)
	}
	var written receipt.Summary
	if err := json.Unmarshal([]byte(readFile(t, folder, "true/run-summary.json")), &written); err != nil {
		t.Fatal(err)
	}
	host, _ := os.Hostname()
	if written.Host != host || written.Done != 5 || written.Failed != 1 || written.Rows != s.Rows || !maps.Equal(written.Outcomes, s.Outcomes) {
		t.Errorf("the summary is %+v", written)
	}
	if first, last := written.Files[0].Output, written.Files[5].Output; first != "bad.csv" || last != "wrong.csv" {
		t.Errorf("files run from %s to %s, want them in order", first, last)
	}
	if written.Rows.Read != written.Rows.Written+written.Rows.Diverted || written.Rows.Read == 0 {
		t.Errorf("rows are %+v", written.Rows)
	}
}
