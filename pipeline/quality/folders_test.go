package quality

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"bentray/pipeline"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// survey runs a job on scenes in both formats, one of them with rows that cannot be
// read, and returns the folders of raw and corrected clouds.
func survey(t *testing.T, keys string) (raw, corrected string) {
	t.Helper()
	folder := t.TempDir()
	raw, corrected = filepath.Join(folder, "raw"), filepath.Join(folder, "true")
	cloud, _ := scene(1500)
	cloud.write(t, filepath.Join(raw, "a.csv"))
	cloud.write(t, filepath.Join(raw, "b.parquet"))
	lines := strings.SplitAfter(cloud.csv(), "\n")
	bad := slices.Insert(lines, 400, "500001,7000001,?,1,1,\"two\nlines\"\n", "5,7\n")
	writeFile(t, filepath.Join(raw, "part", "c.csv"), strings.Join(bad, ""))
	writeFile(t, filepath.Join(folder, "job.toml"), "[input]\nfiles = [\"raw/**\"]\nbad_rows = \"divert\"\n"+keys)
	j, err := job.Load(filepath.Join(folder, "job.toml"))
	if err != nil {
		t.Fatal(err)
	}
	summary, err := pipeline.Run(t.Context(), j, pipeline.Options{})
	if err != nil || summary.Failed > 0 {
		t.Fatal(err, summary)
	}
	return raw, corrected
}

const verticalJob = "[output]\nfolder = \"true\"\n[water]\ntemperature = 17.5\nsalinity = 34.9\n[surface]\nlevel = 0.42\n[rays]\nmodel = \"vertical\"\n"

func diffFolders(t *testing.T, raw, corrected string, o Options) *Report {
	t.Helper()
	r, err := Diff(t.Context(), raw, corrected, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestFoldersOfRuns(t *testing.T) {
	for _, keys := range []string{verticalJob, strings.Replace(verticalJob, "[water]", "provenance = \"lean\"\n[water]", 1)} {
		raw, corrected := survey(t, keys)
		r := diffFolders(t, raw, corrected, Options{Workers: 2})
		if !r.Holds || r.Rows != 4500 || r.RowsRaw != 4502 || r.RowsDiverted != 2 || !r.UnitKnown || len(r.Settings) != 1 || r.Settings[0].Files != 3 {
			t.Errorf("holds %v, rows %d of %d, %d diverted, settings %v: %v", r.Holds, r.Rows, r.RowsRaw, r.RowsDiverted, r.Settings, r.Findings)
		}
		if lean := strings.Contains(keys, "lean"); strings.Contains(strings.Join(r.Notes, "\n"), "no column water_level") != lean {
			t.Errorf("notes %q", r.Notes)
		}
		if r.Outcomes["corrected"] != 4050 || r.Outcomes["dry"] != 450 {
			t.Errorf("outcomes %v", r.Outcomes)
		}
	}
}

// Folders may be symbolic links.
func TestLinkedFolders(t *testing.T) {
	raw, corrected := survey(t, verticalJob)
	links := t.TempDir()
	for name, folder := range map[string]string{"raw": raw, "true": corrected} {
		if err := os.Symlink(folder, filepath.Join(links, name)); err != nil {
			t.Fatal(err)
		}
	}
	if r := diffFolders(t, filepath.Join(links, "raw"), filepath.Join(links, "true"), Options{}); !r.Holds || len(r.Files) != 3 {
		t.Errorf("holds %v, %d files: %v", r.Holds, len(r.Files), r.Findings)
	}
}

// The figures are the same, to the bit, whatever the number of workers.
func TestSameForWorkers(t *testing.T) {
	raw, corrected := survey(t, verticalJob)
	check, _ := scene(300)
	path := check.write(t, filepath.Join(t.TempDir(), "check.csv"))
	want := asJSON(t, diffFolders(t, raw, corrected, Options{Workers: 1, Check: path, Reach: 20, Overlap: true}))
	for _, workers := range []int{2, 7} {
		if got := asJSON(t, diffFolders(t, raw, corrected, Options{Workers: workers, Check: path, Reach: 20, Overlap: true})); got != want {
			t.Errorf("%d workers give\n%s\nwant\n%s", workers, got, want)
		}
	}
}

// What is wrong with folders, rejects and receipts is found and named.
func TestDamagedFolders(t *testing.T) {
	edit := func(name, old, new string) func(t *testing.T, folder string) {
		return func(t *testing.T, folder string) {
			path := filepath.Join(folder, name)
			data, err := os.ReadFile(path)
			if err != nil || !strings.Contains(string(data), old) {
				t.Fatal(err, string(data))
			}
			writeFile(t, path, strings.Replace(string(data), old, new, 1))
		}
	}
	for _, c := range []struct {
		name string
		do   func(t *testing.T, folder string)
		file string
		kind string
		says string
	}{
		{"a corrected file gone", func(_ *testing.T, folder string) { os.Remove(filepath.Join(folder, "a.csv")) }, "a.csv", KindFile, "alone, want a corrected cloud"},
		{"rejects gone", func(_ *testing.T, folder string) { os.Remove(filepath.Join(folder, "part/c.csv.rejects.csv")) }, "part/c.csv", KindDropped, "has 2 fields, want 6; it is neither here nor in the rejects"},
		{"a reject's text", edit("part/c.csv.rejects.csv", `"5,7"`, `"5,8"`), "part/c.csv", KindRejects, "is not what the rejects have of it"},
		{"a reject's reason", edit("part/c.csv.rejects.csv", `"has 2 fields, want 6"`, `"has 3 fields, want 6"`), "part/c.csv", KindRejects, "yet it is not so that it has 3 fields"},
		{"rejects under a job that stops", edit("part/c.csv.receipt.json", `"bad_rows": "divert"`, `"bad_rows": "stop"`), "part/c.csv", KindRejects, "the job of the receipt stops"},
		{"a good row diverted", divertGood(`z is "?", want a number`), "part/c.csv", KindRejects, "line 10 of the raw cloud is among the rejects"},
		{"a good row diverted for a text", divertGood(`label is "p8", want a number`), "part/c.csv", KindRejects, "line 10 of the raw cloud is among the rejects"},
		{"rejects of Parquet", func(t *testing.T, folder string) {
			writeFile(t, filepath.Join(folder, "b.parquet.rejects.csv"), "line,reason,text\n3,is bad,x\n")
		}, "b.parquet", KindRejects, "the rejects have line 3"},
		{"a reject's line", edit("part/c.csv.rejects.csv", "403,", "9403,"), "part/c.csv", KindRejects, "the rejects have line 9403"},
		{"rows of a receipt", edit("a.csv.receipt.json", `"rows_written": 1500`, `"rows_written": 1501`), "a.csv", KindReceipt, "1501 rows written, found 1500"},
		{"outcomes of a receipt", edit("b.parquet.receipt.json", `"dry": 150`, `"wet": 150`), "b.parquet", KindReceipt, "the receipt has 0 points dry, found 150"},
		{"the raw cloud's hash", editReceipt(func(r *receipt.Receipt) { r.Inputs[0].SHA256 = strings.Repeat("0", 64) }), "a.csv", KindReceipt, "and sha256 000000000000, found"},
		{"the raw cloud's bytes", editReceipt(func(r *receipt.Receipt) { r.Inputs[0].Bytes++ }), "a.csv", KindReceipt, "it is another or was changed"},
		{"the raw cloud's path", editReceipt(func(r *receipt.Receipt) { r.Inputs[0].Path = "raw/z.csv" }), "a.csv", KindReceipt, `has the raw cloud as "raw/z.csv", want the output's name "a.csv"`},
		{"no raw cloud in the receipt", editReceipt(func(r *receipt.Receipt) { r.Inputs = nil }), "a.csv", KindReceipt, "does not name the raw cloud"},
		{"raw and output edited alike", func(t *testing.T, folder string) {
			edit("a.csv", ",p7,", ",P7,")(t, folder)
			edit("../raw/a.csv", ",p7\n", ",P7\n")(t, folder)
		}, "a.csv", KindReceipt, "it is another or was changed"},
		{"a number broken", edit("part/c.csv", ",0.42,", ",O.42,"), "part/c.csv", KindFile, `cannot be compared: `},
	} {
		t.Run(c.name, func(t *testing.T) {
			raw, corrected := survey(t, verticalJob)
			c.do(t, corrected)
			r := diffFolders(t, raw, corrected, Options{})
			if r.Holds || !slices.ContainsFunc(r.Findings, func(f Finding) bool {
				return f.File == c.file && f.Kind == c.kind && strings.Contains(f.Text, c.says)
			}) {
				t.Errorf("holds %v: %v, want %s of %s: %s", r.Holds, r.Findings, c.kind, c.file, c.says)
			}
		})
	}
}

// editReceipt edits that of a.csv.
func editReceipt(do func(*receipt.Receipt)) func(t *testing.T, folder string) {
	return func(t *testing.T, folder string) {
		path := filepath.Join(folder, "a.csv")
		r, err := receipt.Read(path)
		if err != nil {
			t.Fatal(err)
		}
		do(r)
		if err := r.Write(path); err != nil {
			t.Fatal(err)
		}
	}
}

// divertGood moves a row of part/c.csv, whose line is 10 there, to the rejects with a
// reason, and lets the receipt tell so.
func divertGood(reason string) func(t *testing.T, folder string) {
	return func(t *testing.T, folder string) {
		path := filepath.Join(folder, "part", "c.csv")
		lines := func(path string) []string {
			data, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			return strings.SplitAfter(string(data), "\n")
		}
		text := strings.TrimSpace(lines(filepath.Join(folder, "..", "raw", "part", "c.csv"))[9])
		writeFile(t, path, strings.Join(slices.Delete(lines(path), 9, 10), ""))
		row := sheet{{"10", reason, text}}.csv()
		writeFile(t, path+rejectsSuffix, strings.Join(slices.Insert(lines(path+rejectsSuffix), 1, row), ""))
		r, err := receipt.Read(path)
		if err != nil {
			t.Fatal(err)
		}
		r.RowsWritten--
		r.RowsDiverted++
		r.Outcomes["corrected"]--
		if err := r.Write(path); err != nil {
			t.Fatal(err)
		}
	}
}

// A corrected point moved in height is found in a CSV file, beyond the decimals that are
// written.
func TestMovedInHeight(t *testing.T) {
	raw, corrected := survey(t, verticalJob)
	path := filepath.Join(corrected, "a.csv")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(string(data), "\n")
	fields := strings.Split(lines[3], ",")
	fields[2] += "9" // below the tolerance
	lines[3] = strings.Join(fields, ",")
	writeFile(t, path, strings.Join(lines, "\n"))
	if r := diffFolders(t, raw, corrected, Options{}); !r.Holds {
		t.Errorf("a change below the decimals does not hold: %v", r.Findings)
	}
	fields[2] = "-9.1234"
	lines[3] = strings.Join(fields, ",")
	writeFile(t, path, strings.Join(lines, "\n"))
	r := diffFolders(t, raw, corrected, Options{})
	if r.FindingCounts[KindMoved] != 1 || r.Findings[0].Row != 3 || r.Findings[0].Column != "z" || r.Findings[0].Got != "-9.1234" {
		t.Errorf("findings %v", r.Findings)
	}
}

// Two corrected clouds of one raw cloud: the shift is between them.
func TestTwoCorrected(t *testing.T) {
	_, fresh := survey(t, strings.Replace(verticalJob, "34.9", "0", 1))
	_, sea := survey(t, verticalJob)
	r := diffFolders(t, fresh, sea, Options{})
	if !r.Holds || !r.TwoCorrected || r.Shift.Count != 4050 || r.OutcomesRaw["dry"] != 450 {
		t.Fatalf("holds %v, two %v, %d points, %v: %v", r.Holds, r.TwoCorrected, r.Shift.Count, r.OutcomesRaw, r.Findings)
	}
	// Sea water's index is greater by 0.0066 of 1.3354 (Quan and Fry 1995), so depths
	// by 0.5 %.
	deepest := r.ByDepth[len(r.ByDepth)-1]
	if share := -float64(deepest.MeanDZ) / (float64(deepest.From+deepest.To) / 2); share < 0.0045 || share > 0.0055 {
		t.Errorf("the deepest band moved by %.5f of its depth, want 0.005", share)
	}
	for i := range r.ByDepth {
		if r.ByDepth[i].MaxDH > 1e-9 {
			t.Errorf("band %d moved in plan by %g", i, float64(r.ByDepth[i].MaxDH))
		}
	}
}

func TestBadCalls(t *testing.T) {
	raw, corrected := survey(t, verticalJob)
	a := func(folder string) string { return filepath.Join(folder, "a.csv") }
	degrees := writeFile(t, filepath.Join(t.TempDir(), "check.csv"), "lon,lat,z\n1,2,3\n4,5,6\n")
	empty := writeFile(t, filepath.Join(t.TempDir(), "check.csv"), "x,y,z\n1,2,\n4,,6\n")
	for _, c := range []struct {
		name, raw, corrected string
		o                    Options
		says                 string
	}{
		{"no such file", a(raw) + "x", a(corrected), Options{}, "a.csvx: no such file"},
		{"exchanged", a(corrected), a(raw), Options{}, "exchange them"},
		{"exchanged folders", corrected, raw, Options{}, "exchange them"},
		{"two raw clouds", a(raw), filepath.Join(raw, "part/c.csv"), Options{}, "want an output of bentray; the columns are x, y, z"},
		{"a file and a folder", a(raw), corrected, Options{}, "want two files or two folders"},
		{"the same", a(raw), a(raw), Options{}, "are the same"},
		{"two formats", a(raw), filepath.Join(corrected, "b.parquet"), Options{}, "two formats"},
		{"nothing alike", filepath.Join(raw, "part"), filepath.Join(corrected), Options{}, "no cloud of the same relative name"},
		{"check points in degrees", a(raw), a(corrected), Options{Check: degrees}, "degrees"},
		{"no check points", a(raw), a(corrected), Options{Check: empty}, "no check point with finite coordinates"},
		{"no check file", a(raw), a(corrected), Options{Check: "gone.csv"}, "gone.csv: no such file"},
		{"match", a(raw), a(corrected), Options{Match: "mean"}, `--match is "mean", want plane or nearest`},
		{"reach", a(raw), a(corrected), Options{Reach: -1}, "--reach is -1"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Diff(context.Background(), c.raw, c.corrected, c.o)
			var call *pipeline.CallError
			if !errors.As(err, &call) || !strings.Contains(err.Error(), c.says) {
				t.Errorf("error is %v, want a wrong call: %s", err, c.says)
			}
		})
	}
}

func TestReceiptOfAnotherUnit(t *testing.T) {
	raw, corrected := survey(t, verticalJob)
	path := filepath.Join(corrected, "a.csv")
	rec, err := receipt.Read(path)
	if err != nil {
		t.Fatal(err)
	}
	rec.Job = []byte(strings.Replace(string(rec.Job), `"unit": "m"`, `"unit": "ft"`, 1))
	if err := rec.Write(path); err != nil {
		t.Fatal(err)
	}
	if _, err := Diff(t.Context(), raw, corrected, Options{}); err == nil || !strings.Contains(err.Error(), "compare them apart") {
		t.Errorf("error is %v", err)
	}
}

// Clouds without a header, parted by blanks, compressed, with lines of their own: the
// names come from the corrected cloud.
func TestAwkwardText(t *testing.T) {
	cloud, _ := scene(400)
	var b strings.Builder
	for _, row := range cloud[1:] {
		b.WriteString("  " + strings.Join(row, " \t ") + "\r\n\r\n")
	}
	folder := t.TempDir()
	writeFile(t, filepath.Join(folder, "raw", "d.xyz"), b.String())
	writeFile(t, filepath.Join(folder, "job.toml"), "[input]\nfiles = [\"raw/*\"]\n[input.csv]\nnames = [\"x\", \"y\", \"z\", \"i\", \"line\", \"tag\"]\n"+verticalJob)
	j, err := job.Load(filepath.Join(folder, "job.toml"))
	if err != nil {
		t.Fatal(err)
	}
	if s, err := pipeline.Run(t.Context(), j, pipeline.Options{}); err != nil || s.Failed > 0 {
		t.Fatal(err, s)
	}
	if r := diffFolders(t, filepath.Join(folder, "raw"), filepath.Join(folder, "true"), Options{}); !r.Holds || r.Rows != 400 {
		t.Errorf("holds %v, %d rows: %v", r.Holds, r.Rows, r.Findings)
	}
}
