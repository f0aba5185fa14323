package pipeline

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// An honest output of every kind holds, in every row, whatever the number of workers,
// and nothing is written by it. Every kind has corrected points and others.
func TestHonestOutputsHold(t *testing.T) {
	eachKind(t, func(t *testing.T, k *auditKind, format string) {
		folder := k.run(t, format)
		before := snapshot(t, folder)
		for _, workers := range []int{1, 3} {
			r, err := Audit(t.Context(), filepath.Join(folder, "true"), AuditOptions{Workers: workers})
			if err != nil {
				t.Fatal(err)
			}
			if len(r.Files) != 2 || r.LeftOut != 0 {
				t.Fatalf("%d outputs and %d others, want 2 and 0", len(r.Files), r.LeftOut)
			}
			for _, f := range r.Files {
				made := readReceipt(t, filepath.Join(folder, "true", f.Name))
				if outcomes := outcomesOf(made); len(outcomes) < 3 || !slices.Contains(outcomes, "corrected") {
					t.Errorf("%s has only points %q, so this shows little", f.Name, outcomes)
				}
				if len(f.Faults) > 0 || f.Rows != made.RowsWritten || f.Rows < 300 {
					t.Errorf("%s: %d of %d rows: %s", f.Name, f.Rows, made.RowsWritten, strings.Join(f.Faults, "\n"))
				}
				lean := strings.Contains(k.name, "lean")
				if got := strings.Join(f.Notes, "\n"); lean != strings.HasPrefix(got, "lean: ") || !lean && got != "" {
					t.Errorf("%s: notes are %q", f.Name, got)
				}
			}
			if !r.Holds() {
				t.Error("the report does not hold")
			}
		}
		same(t, "after an audit", snapshot(t, folder), before)
	})
}

// One output is audited by itself, also from within its folder's sub-folder.
func TestOneOutputHolds(t *testing.T) {
	folder := auditKinds[2].run(t, "csv")
	r := audit(t, filepath.Join(folder, "true", "b.csv"))
	if len(r.Files) != 1 || r.Files[0].Name != "b.csv" || !r.Holds() || r.Files[0].Rows != 400 {
		t.Errorf("the report is %+v", r)
	}
}

// A folder of outputs may be a symbolic link, also where the surface comes from all of
// them.
func TestLinkedFolderHolds(t *testing.T) {
	k := &auditKinds[slices.IndexFunc(auditKinds, func(k auditKind) bool { return k.name == "pulse, classes" })]
	folder := k.run(t, "csv")
	link := filepath.Join(folder, "link")
	if err := os.Symlink("true", link); err != nil {
		t.Fatal(err)
	}
	for path, outputs := range map[string]int{link: 2, filepath.Join(link, "b.csv"): 1} {
		if r := audit(t, path); !r.Holds() || len(r.Files) != outputs {
			t.Errorf("%s: the report is %+v", path, r)
		}
	}
}

// A moved survey is audited with its job file's folder named, or found above the
// outputs; else the message says where it was looked for.
func TestAuxiliaryFolder(t *testing.T) {
	folder := auditKinds[3].run(t, "csv")
	elsewhere := filepath.Join(t.TempDir(), "deep", "archive")
	if err := os.MkdirAll(filepath.Dir(elsewhere), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.Rename(filepath.Join(folder, "true"), elsewhere); err != nil {
		t.Fatal(err)
	}
	r := audit(t, elsewhere)
	for _, want := range []string{"flight.csv", "no such file", "so its points are not recomputed", filepath.Dir(elsewhere), "--base"} {
		if !strings.Contains(r.faultsOf("a.csv"), want) {
			t.Errorf("faults are %s, want %q in them", r.faultsOf("a.csv"), want)
		}
	}
	if r := audit(t, elsewhere, folder); !r.Holds() {
		t.Errorf("with --base: %s", r.faultsOf("a.csv"))
	}
	files{"flight.csv": readFile(t, folder, "flight.csv"), "gauge.csv": readFile(t, folder, "gauge.csv")}.write(t, filepath.Dir(elsewhere))
	if err := os.Remove(filepath.Join(elsewhere, "run-summary.json")); err != nil {
		t.Fatal(err)
	}
	if r := audit(t, elsewhere); !r.Holds() {
		t.Errorf("beside its files: %s", r.faultsOf("a.csv"))
	}
}

// The run's summary tells where the job file is when it is not above the outputs.
func TestSummaryTellsTheFolder(t *testing.T) {
	folder := t.TempDir()
	f := auditFiles()
	f["raw/a.csv"] = auditClouds(400, 1)
	f.write(t, filepath.Join(folder, "job"))
	k := auditKind{tables: auditWater + "[surface.plane]\nwaterline = \"waterline.csv\"\n" + pulseRays}
	runJob(t, loadJob(t, filepath.Join(folder, "job"), strings.Replace(k.job("csv"), `"true"`, `"../archive/of/true"`, 1)), Options{})
	if r := audit(t, filepath.Join(folder, "archive")); !r.Holds() || r.Files[0].Rows != 400 {
		t.Errorf("faults are %s", r.faultsOf("of/true/a.csv"))
	}
}
