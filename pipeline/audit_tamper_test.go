package pipeline

import (
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"sync/atomic"
	"testing"
	"time"

	"bentray/correct"
	"bentray/pipeline/receipt"
)

// eachModel runs a test for a kind of each model and format.
func eachModel(t *testing.T, test func(t *testing.T, k *auditKind, format string)) {
	models := []string{"vertical", "pulse", "pulse lean, trajectory", "pulse, classes", "multiview", "mixed"}
	eachKind(t, func(t *testing.T, k *auditKind, format string) {
		if !slices.Contains(models, k.name) {
			t.SkipNow()
		}
		test(t, k, format)
	})
}

// wantFaults audits an output and wants these texts among its faults, in order, and no
// more faults than that.
func wantFaults(t *testing.T, what, output string, want ...string) {
	t.Helper()
	r := audit(t, output)
	got := r.Files[0].Faults
	if len(got) != len(want) {
		t.Errorf("%s: faults are\n%s\nwant %d: %q", what, strings.Join(got, "\n"), len(want), want)
		return
	}
	for i := range want {
		if !strings.Contains(got[i], want[i]) {
			t.Errorf("%s: fault is %q, want %q in it", what, got[i], want[i])
		}
	}
}

// at is where a fault in a row is said to be.
func at(format string, row int) string {
	if format == "csv" {
		return fmt.Sprintf("row %d (line %d): ", row, row+1)
	}
	return fmt.Sprintf("row %d: ", row)
}

// later is a number that is larger by a step.
func later(step float64) func(string) string {
	return func(old string) string {
		v, err := strconv.ParseFloat(old, 64)
		if err != nil {
			return "1"
		}
		return strconv.FormatFloat(v+step, 'f', 9, 64)
	}
}

// finest is the least step of a length that is found in a format.
var finest = map[string]float64{"csv": 0.0001, "parquet": 1e-8}

// A point moved by the last decimal (Parquet: by 10 nanometres) is found by the hash
// and, where the receipt was signed again, by its row. Written anew but unchanged, an
// output holds.
func TestMovedPointIsFound(t *testing.T) {
	eachModel(t, func(t *testing.T, k *auditKind, format string) {
		output := filepath.Join(k.run(t, format), "true", "a."+format)
		edit(t, format, output, true, func(*table) {})
		wantFaults(t, "unchanged", output)
		step := finest[format]
		if k.name == "pulse, classes" || k.name == "mixed" { // entries or depths are found in steps
			step = max(step, 3e-6)
		}
		for _, sign := range []bool{false, true} {
			for _, name := range []string{"x", "y", "z"} {
				copied := filepath.Join(filepath.Dir(output), "copy")
				if err := os.Rename(output, copied); err != nil {
					t.Fatal(err)
				}
				files{filepath.Base(output): readFile(t, filepath.Dir(copied), "copy")}.write(t, filepath.Dir(output))
				made := readReceipt(t, output)
				row := 0
				edit(t, format, output, sign, func(tb *table) { row = tb.set(t, "corrected", name, later(step)) })
				want := []string{at(format, row) + name + " is "}
				if !sign {
					want = append([]string{"bytes with sha256 "}, want...)
				}
				wantFaults(t, name+" moved", output, want...)
				editReceipt(t, output, func(r *receipt.Receipt) { *r = *made })
				if err := os.Rename(copied, output); err != nil {
					t.Fatal(err)
				}
			}
		}
		row := 0
		edit(t, format, output, true, func(tb *table) { row = tb.set(t, "invalid", "x", later(1e-9)) })
		wantFaults(t, "point that is not corrected moved", output, at(format, row)+"x is ")
	})
}

// Every column that was added is compared, in points of each outcome; a raw copy or an
// origin that was changed leads to other values than those that stand there.
func TestChangedValueIsFound(t *testing.T) {
	eachModel(t, func(t *testing.T, k *auditKind, format string) {
		output := filepath.Join(k.run(t, format), "true", "a."+format)
		original, made := readFile(t, filepath.Dir(output), "a."+format), readReceipt(t, output)
		names := decode(t, format, original).names
		for few := range slices.Chunk(names[slices.Index(names, "z_raw")+1:], mostDeviations) {
			for _, outcome := range outcomesOf(made) {
				var want []string
				edit(t, format, output, true, func(tb *table) {
					row := 0
					for _, name := range few {
						if name != "outcome" {
							row = tb.set(t, outcome, name, otherValue(name))
						}
					}
					if slices.Contains(few, "outcome") {
						tb.set(t, outcome, "outcome", otherValue("outcome"))
					}
					for _, name := range few {
						want = append(want, at(format, row)+name+" is ")
					}
				})
				wantFaults(t, "point "+outcome, output, want...)
				files{filepath.Base(output): original}.write(t, filepath.Dir(output))
				editReceipt(t, output, func(r *receipt.Receipt) { *r = *made })
			}
		}
		row := 0
		edit(t, format, output, true, func(tb *table) { row = tb.set(t, "corrected", "z_raw", later(0.01)) })
		if got := audit(t, output).faultsOf("a." + format); !k.isFound(got, at(format, row)+"z is ") || !k.isFound(got, at(format, row)+"depth is ") {
			t.Errorf("z_raw: faults are %s", got)
		}
	})
}

// otherValue changes a value of a column.
func otherValue(name string) func(old string) string {
	switch name {
	case "outcome", "model", "view_source", "water_source", "run":
		return func(old string) string { return old + "s" }
	case "ray_count":
		return func(string) string { return "7" }
	}
	return later(0.001)
}

// isFound tells whether a change is found by a text or, where it concerns the points that
// the surface is made of, by their sum.
func (k *auditKind) isFound(faults, text string) bool {
	return strings.Contains(faults, text) || k.name == "pulse, classes" && strings.Contains(faults, "surface points of classification [41]: is ")
}

// A row that is dropped or doubled is found by the counts where the hash was renewed.
func TestDroppedRowIsFound(t *testing.T) {
	eachModel(t, func(t *testing.T, k *auditKind, format string) {
		output := filepath.Join(k.run(t, format), "true", "b."+format)
		original, made := readFile(t, filepath.Dir(output), "b."+format), readReceipt(t, output)
		for what, change := range map[string]func(tb *table){
			"dropped": func(tb *table) { tb.rows = slices.Delete(tb.rows, 6, 7) },
			"doubled": func(tb *table) { tb.rows = slices.Insert(tb.rows, 6, tb.rows[6]) },
		} {
			files{filepath.Base(output): original}.write(t, filepath.Dir(output))
			editReceipt(t, output, func(r *receipt.Receipt) { *r = *made })
			rows, outcome := 0, ""
			edit(t, format, output, true, func(tb *table) {
				outcome = tb.text(t, 6, "outcome")
				change(tb)
				rows = len(tb.rows)
			})
			n, got := made.Outcomes[outcome], audit(t, output).faultsOf("b."+format)
			for _, want := range []string{
				fmt.Sprintf("the receipt has 400 rows written, found %d", rows),
				fmt.Sprintf("the receipt has %d points %s, found %d", n, outcome, n+int64(rows)-400),
			} {
				if !strings.Contains(got, want) {
					t.Errorf("%s: faults are %s, want %s", what, got, want)
				}
			}
		}
	})
}

// changeJob changes the settings in a receipt; with run set its fingerprint too.
func changeJob(t *testing.T, r *receipt.Receipt, from, to string, run bool) {
	t.Helper()
	var compact []byte
	compact, err := json.Marshal(r.Job)
	if err != nil {
		t.Fatal(err)
	}
	changed := strings.Replace(string(compact), from, to, 1)
	if changed == string(compact) {
		t.Fatalf("%s is not in %s", from, compact)
	}
	r.Job = json.RawMessage(changed)
	if run {
		sign(t, r)
	}
}

// sign gives a receipt the fingerprint of what it says.
func sign(t *testing.T, r *receipt.Receipt) {
	t.Helper()
	var err error
	if r.Run, err = receipt.Fingerprint(r.Job, r.Auxiliary(), correct.Version); err != nil {
		t.Fatal(err)
	}
}

// What is changed in a receipt is found by what it should be.
func TestEditedReceiptIsFound(t *testing.T) {
	eachModel(t, func(t *testing.T, k *auditKind, format string) {
		folder := k.run(t, format)
		output := filepath.Join(folder, "true", "a."+format)
		made := readReceipt(t, output)
		n := made.Outcomes["corrected"]
		for _, c := range []struct {
			what   string
			change func(r *receipt.Receipt)
			want   string
		}{
			{"outcomes", func(r *receipt.Receipt) { r.Outcomes["corrected"]-- }, fmt.Sprintf("the receipt has %d points corrected, found %d", n-1, n)},
			{"an outcome more", func(r *receipt.Receipt) { r.Outcomes["unsolved"] = 2 }, "the receipt has 2 points unsolved, found 0"},
			{"rows written", func(r *receipt.Receipt) { r.RowsWritten, r.RowsRead = 401, 401 }, "the receipt has 401 rows written, found 400"},
			{"rows read", func(r *receipt.Receipt) { r.RowsRead = 402 }, "the receipt has 402 rows read, want the 400 written and 0 diverted"},
			{"rows diverted", func(r *receipt.Receipt) { r.RowsRead, r.RowsDiverted = 403, 3 }, "the receipt has 3 rows diverted, but a." + format + ".rejects.csv is not there"},
			{"hash", func(r *receipt.Receipt) { r.Output.SHA256 = strings.Repeat("ab", 32) }, "with sha256 abababababab, found "},
			{"bytes", func(r *receipt.Receipt) { r.Output.Bytes++ }, "bytes with sha256 "},
			{"path", func(r *receipt.Receipt) { r.Output.Path = "b." + format }, `the receipt is that of "b.` + format + `"`},
			{"path up", func(r *receipt.Receipt) { r.Output.Path = "../true/a." + format }, `the receipt is that of "../true/a.`},
			{"the cloud's path", func(r *receipt.Receipt) { r.Inputs[0].Path = "raw/b." + format }, `the receipt has the raw cloud as "raw/b.` + format + `", want the output's name "a.` + format + `"`},
			{"ranges", func(r *receipt.Receipt) { r.Ranges["depth"] = [2]float64{0.5, 1} }, "the receipt has depth from 0.5 to 1, found "},
			{"cautions", func(r *receipt.Receipt) { r.Cautions = nil }, "the receipt lacks the caution "},
			{"a caution more", func(r *receipt.Receipt) { r.Cautions = append(r.Cautions, "fit for navigation") }, `the receipt has the caution "fit for navigation", for which there is no cause`},
			{"program", func(r *receipt.Receipt) { r.Program = "other 1" }, `the receipt's program is "other 1", want bentray`},
			{"run", func(r *receipt.Receipt) { r.Run = strings.Repeat("cd", 32) }, "the receipt's run is cdcdcdcdcdcd, want " + made.Run[:12]},
			{"version", func(r *receipt.Receipt) {
				r.Run, _ = receipt.Fingerprint(r.Job, r.Auxiliary(), correct.Version+1)
			}, fmt.Sprintf("calculated by version %d, and ", correct.Version+1)},
			{"inputs", func(r *receipt.Receipt) { r.Inputs = nil }, "the receipt does not name the raw cloud"},
			{"settings", func(r *receipt.Receipt) { changeJob(t, r, `"max_incidence":60`, `"max_incidence":12`, false) }, "one of them was changed"},
			{"settings and run", func(r *receipt.Receipt) { changeJob(t, r, `"humidity":0`, `"humidity":90`, true) }, ": run is \"" + made.Run[:12]},
			{"unknown settings", func(r *receipt.Receipt) { changeJob(t, r, `"humidity":0`, `"humidty":0`, true) }, `receipt: unknown key "humidty" in [air]; did you mean "humidity"?`},
			{"settings that are none", func(r *receipt.Receipt) { r.Job = json.RawMessage("[]"); sign(t, r) }, "receipt: settings are no JSON"},
			{"one more auxiliary file", func(r *receipt.Receipt) {
				r.Inputs = append(r.Inputs, receipt.Input{Use: "extent", File: receipt.File{Path: "part.geojson"}})
				sign(t, r)
			}, "auxiliary files, want "},
		} {
			if c.what == "cautions" && len(made.Cautions) == 0 {
				continue
			}
			editReceipt(t, output, c.change)
			if got := audit(t, output, folder).faultsOf("a." + format); !k.isFound(got, c.want) {
				t.Errorf("%s: faults are\n%s\nwant %q", c.what, got, c.want)
			}
			if err := made.Write(output); err != nil {
				t.Fatal(err)
			}
		}
		if r := audit(t, output); !r.Holds() {
			t.Errorf("as it was: %s", r.faultsOf("a."+format))
		}
	})
}

// Another program may word cautions otherwise: a note says that they are not proven. What
// FLOAT coordinates of the raw cloud gave cause to say is no fault, of Parquet.
func TestCautionsThatCannotBeProven(t *testing.T) {
	const coarse = `coordinates in column "x" are FLOAT, of some 7 digits; take the cloud with DOUBLE ones if there is one`
	eachModel(t, func(t *testing.T, k *auditKind, format string) {
		output := filepath.Join(k.run(t, format), "true", "a."+format)
		made := readReceipt(t, output)
		editReceipt(t, output, func(r *receipt.Receipt) { r.Cautions = append(r.Cautions, coarse) })
		if got := audit(t, output).faultsOf("a." + format); strings.Contains(got, coarse[:10]) != (format == "csv") {
			t.Errorf("FLOAT coordinates: faults are %q", got)
		}
		editReceipt(t, output, func(r *receipt.Receipt) { *r = *made; r.Program, r.Cautions = "bentray 9.9", nil })
		r := audit(t, output)
		if got := strings.Join(r.Files[0].Notes, "\n"); !r.Holds() || !strings.Contains(got, `cautions are not proven: the receipt's program is "bentray 9.9"`) {
			t.Errorf("another program: holds %v, notes are %q", r.Holds(), got)
		}
	})
}

// A changed, a missing and an unnamed auxiliary file are each told with what to do, for
// every file that a kind has.
func TestChangedAuxiliaryFileIsFound(t *testing.T) {
	eachKind(t, func(t *testing.T, k *auditKind, format string) {
		folder := k.run(t, format)
		output := filepath.Join(folder, "true", "a."+format)
		made := readReceipt(t, output)
		for i, in := range made.Auxiliary() {
			if in.Use == surfacePoints {
				continue
			}
			text := readFile(t, folder, in.Path)
			files{in.Path: text + "\n"}.write(t, folder)
			wantFaults(t, in.Path+" changed", output, fmt.Sprintf("%s: is %d bytes with sha256 ", filepath.Join(folder, in.Path), len(text)+1), "so its points are not recomputed: put the auxiliary files of that run back")
			if err := os.Remove(filepath.Join(folder, in.Path)); err != nil {
				t.Fatal(err)
			}
			wantFaults(t, in.Path+" removed", output, in.Path+": no such file", "so its points are not recomputed: put the auxiliary files of that run back")
			files{in.Path: text}.write(t, folder)
			editReceipt(t, output, func(r *receipt.Receipt) { r.Inputs = slices.Delete(r.Inputs, i+1, i+2); sign(t, r) })
			wantFaults(t, in.Path+" not named", output, in.Path+": is not among the auxiliary files of the receipt ("+in.Use+")", "so its points are not recomputed")
			if err := made.Write(output); err != nil {
				t.Fatal(err)
			}
		}
	})
}

// Where the surface is made of the clouds' own points, all outputs of the run are read
// again; a point of the surface that was moved in one, or an output that is missing, is
// found in all.
func TestSurfacePointsAreProven(t *testing.T) {
	k := &auditKinds[slices.IndexFunc(auditKinds, func(k auditKind) bool { return k.name == "pulse, classes" })]
	for _, format := range formats {
		t.Run(format, func(t *testing.T) {
			folder := k.run(t, format)
			a, b := filepath.Join(folder, "true", "a."+format), filepath.Join(folder, "true", "b."+format)
			if r := audit(t, a); !r.Holds() || r.Files[0].Rows != 400 {
				t.Errorf("a alone: %s", r.faultsOf("a."+format))
			}
			row := 0
			edit(t, format, b, true, func(tb *table) {
				for i := range tb.rows {
					if tb.text(t, i, "classification") == "41" {
						tb.rows[i][slices.Index(tb.names, "z_raw")] = later(0.001)(tb.text(t, i, "z_raw"))
						row = i
						return
					}
				}
			})
			points := "surface points of classification [41]: is "
			wantFaults(t, fmt.Sprintf("surface point in row %d moved", row), a, points, "surface points come from all outputs of the run, of which 2 are below "+filepath.Join(folder, "true"))
			if err := os.Remove(b); err != nil {
				t.Fatal(err)
			}
			wantFaults(t, "b removed", a, points, "surface points come from all outputs of the run")
			r := audit(t, filepath.Join(folder, "true"))
			if got := r.faultsOf("b." + format); !strings.Contains(got, "the receipt is there, the output is not") {
				t.Errorf("b removed: %s", got)
			}
			if err := os.Remove(b + receipt.Suffix); err != nil {
				t.Fatal(err)
			}
			wantFaults(t, "b and its receipt removed", a, points, "of which 1 are below")
		})
	}
}

// A receipt that is gone or is none fails its output, and the others hold.
func TestReceiptGoneIsFound(t *testing.T) {
	folder := auditKinds[0].run(t, "csv")
	output := filepath.Join(folder, "true", "a.csv")
	files{"true/a.csv.receipt.json": "{"}.write(t, folder)
	wantFaults(t, "half a receipt", output, "the receipt cannot be read: "+output+".receipt.json: not a receipt: ")
	if err := os.Remove(output + receipt.Suffix); err != nil {
		t.Fatal(err)
	}
	wantFaults(t, "no receipt", output, "the receipt a.csv.receipt.json is not there")
	r := audit(t, folder)
	if got := r.faultsOf("true/a.csv"); !strings.Contains(got, "is not there") {
		t.Errorf("no receipt: %s", got)
	}
	if got := r.faultsOf("true/b.csv"); got != "" || r.Holds() || r.LeftOut == 0 {
		t.Errorf("b: %s, holds %t, %d left out", got, r.Holds(), r.LeftOut)
	}
}

// Rejects must be there and as many as the receipt tells.
func TestChangedRejectsAreFound(t *testing.T) {
	k := &auditKinds[slices.IndexFunc(auditKinds, func(k auditKind) bool { return k.name == "diverted rows" })]
	folder := k.run(t, "csv")
	output := filepath.Join(folder, "true", "a.csv")
	if n := readReceipt(t, output).RowsDiverted; n != 3 {
		t.Fatalf("%d rows diverted, want 3", n)
	}
	rejects := readFile(t, folder, "true/a.csv.rejects.csv")
	files{"true/a.csv.rejects.csv": rejects[:strings.LastIndex(strings.TrimSpace(rejects), "\n")+1]}.write(t, folder)
	wantFaults(t, "one less", output, "the receipt has 3 rows diverted, a.csv.rejects.csv has 2")
	files{"true/a.csv.rejects.csv": "a,b\n"}.write(t, folder)
	wantFaults(t, "no rejects", output, "a.csv.rejects.csv cannot be read")
	if err := os.Remove(output + rejectsSuffix); err != nil {
		t.Fatal(err)
	}
	wantFaults(t, "removed", output, "the receipt has 3 rows diverted, but a.csv.rejects.csv is not there")
}

// Many differences are counted by column behind the first ten, and an output that
// cannot be read on is told as far as it was.
func TestManyDifferencesAreCounted(t *testing.T) {
	for _, format := range formats {
		t.Run(format, func(t *testing.T) {
			output := filepath.Join(auditKinds[0].run(t, format), "true", "a."+format)
			edit(t, format, output, true, func(tb *table) {
				for i := range tb.rows {
					tb.rows[i][slices.Index(tb.names, "x")] = "1000"
				}
			})
			want := []string{}
			for row := range mostDeviations {
				want = append(want, at(format, row+1)+"x is 1000, want ")
			}
			wantFaults(t, "all moved", output, append(want, "400 values in all are not those computed: x 400")...)
		})
	}
	output := filepath.Join(auditKinds[0].run(t, "csv"), "true", "a.csv")
	edit(t, "csv", output, true, func(tb *table) { tb.set(t, "corrected", "depth", func(string) string { return "deep" }) })
	wantFaults(t, "no number", output, `depth is "deep", want a number`)
	edit(t, "csv", output, true, func(tb *table) { tb.names[slices.Index(tb.names, "depth")] = "height" })
	wantFaults(t, "renamed column", output, `has a column "height" where the settings of the receipt give "depth"`)
	edit(t, "csv", output, true, func(tb *table) { tb.names[slices.Index(tb.names, "x_raw")] = "x_old" })
	wantFaults(t, "no raw copy", output, `no column "x_raw", want the raw copies behind the columns of the raw cloud`)
}

// What cannot be audited is refused.
func TestNothingToAudit(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": auditClouds(5, 1), "raw/notes.txt.receipt": "x", "empty/notes.md": "x"}.write(t, folder)
	for path, want := range map[string]string{
		"nowhere":               "no such file",
		"raw":                   "holds no output of bentray",
		"empty":                 "holds no output of bentray",
		"raw/a.csv":             "is no output of bentray: it has no receipt (a.csv.receipt.json)",
		"empty/notes.md":        "is no cloud",
		"raw/a.csv.rejects.csv": "no such file",
	} {
		_, err := Audit(t.Context(), filepath.Join(folder, path), AuditOptions{})
		if call := new(*CallError); !errors.As(err, call) || !strings.Contains(err.Error(), want) || !strings.Contains(err.Error(), path) {
			t.Errorf("%s: error is %v, want a CallError with %q", path, err, want)
		}
	}
}

// toucher sets the time of change of a file, another one each time that something is read.
type toucher struct {
	silent
	path  string
	times *atomic.Int64
}

func (w toucher) Read(int64) {
	if err := os.Chtimes(w.path, time.Time{}, time.Unix(1_500_000_000+w.times.Add(1), 0)); err != nil {
		panic(err)
	}
}

// An output that changes while it is audited is not proven.
func TestOutputThatChangesMeanwhileIsFound(t *testing.T) {
	eachModel(t, func(t *testing.T, k *auditKind, format string) {
		output := filepath.Join(k.run(t, format), "true", "a."+format)
		r, err := Audit(t.Context(), output, AuditOptions{Watch: toucher{path: output, times: new(atomic.Int64)}})
		if err != nil {
			t.Fatal(err)
		}
		if got := r.faultsOf("a." + format); !strings.Contains(got, "changed while it was read; run again when it is complete") {
			t.Errorf("faults are %q", got)
		}
	})
}
