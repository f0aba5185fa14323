package pipeline

import (
	"bytes"
	"fmt"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// fleet is a survey of several files below raw/, of which one is of several
// chunks, one has bad rows, and one has no rows.
func fleet(t *testing.T) (folder string) {
	t.Helper()
	c := truthCases[0]
	w := standardSea(t)
	folder = t.TempDir()
	f := files{"flight.csv": c.flight(), "water.geojson": polygonOf(-1000, -1000, 900, 1000)}
	for i, n := range []int{0, 1, 700, 40000} {
		f[fmt.Sprintf("raw/part%d/t%d.csv", i%2, i)] = c.cloud(w.shoot(n, false))
	}
	f["raw/bad.csv"] = strings.Replace(c.cloud(w.shoot(90, false)), "\n", "\nragged\n1,2,deep,4,5\n", 1)
	f.write(t, folder)
	return folder
}

func polygonOf(west, south, east, north float64) string {
	return fmt.Sprintf(`{"type":"Polygon","coordinates":[[[%g,%g],[%g,%g],[%g,%g],[%g,%g],[%g,%g]]]}`,
		west, south, east, south, east, north, west, north, west, south)
}

func fleetJob(t *testing.T, folder, output string) *job.Job {
	t.Helper()
	return loadJob(t, folder, fleetText(output))
}

func fleetText(output string) string {
	return "[input]\nfiles = [\"raw/**/*.csv\"]\nbad_rows = \"divert\"\n[output]\nfolder = \"" + output + "\"\n" + media +
		"[surface]\nlevel = 0.42\n[extent]\npolygons = \"water.geojson\"\n[rays]\nmodel = \"pulse\"\ntrajectory = \"flight.csv\"\n"
}

// sameForWorkers runs a job with 1, 2 and 7 workers, each into a folder of its own
// (true1, true2, true7), wants the same bytes and these rows and files each time, and
// returns what they wrote.
func sameForWorkers(t *testing.T, folder string, jobTo func(*testing.T, string, string) *job.Job, rows receipt.Rows, files int) map[string]string {
	t.Helper()
	var want map[string]string
	for _, workers := range []int{1, 2, 7} {
		output := fmt.Sprintf("true%d", workers)
		s := runJob(t, jobTo(t, folder, output), Options{Workers: workers})
		got := outputs(t, filepath.Join(folder, output))
		if want == nil {
			want = got
		}
		same(t, fmt.Sprintf("%d workers", workers), got, want)
		if s.Rows != rows || s.Done != files {
			t.Errorf("%d workers: rows %+v in %d files, want %+v in %d", workers, s.Rows, s.Done, rows, files)
		}
	}
	return want
}

func TestSameBytesForAnyWorkers(t *testing.T) {
	folder := fleet(t)
	want := sameForWorkers(t, folder, fleetJob, receipt.Rows{Read: 40793, Written: 40791, Diverted: 2}, 5)
	runJob(t, fleetJob(t, folder, "true2"), Options{Workers: 3, Redo: true})
	same(t, "redo", outputs(t, filepath.Join(folder, "true2")), want)
}

// age sets the time of every file below a folder to long ago.
func age(t *testing.T, folder string) {
	t.Helper()
	for name := range snapshot(t, folder) {
		setTime(t, filepath.Join(folder, name), long)
	}
}

// An input whose size and time are those of the last run is not read again, so
// a change behind its back is seen only without that run's summary.
func TestSizeAndTimeSpareHashing(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": tiny}.write(t, folder)
	raw := filepath.Join(folder, "raw/a.csv")
	setTime(t, raw, long)
	j := loadJob(t, folder, tinyJob(`"raw/*.csv"`, "true"))
	runJob(t, j, Options{})
	files{"raw/a.csv": strings.Replace(tiny, "-10", "-11", 1)}.write(t, folder)
	setTime(t, raw, long)
	if s := runJob(t, j, Options{}); s.Fresh != 1 {
		t.Errorf("the input was read: %+v", s.Files)
	}
	if err := os.Remove(filepath.Join(folder, "true", "run-summary.json")); err != nil {
		t.Fatal(err)
	}
	if s := runJob(t, j, Options{}); s.Done != 1 {
		t.Errorf("without the summary the input was not read: %+v", s.Files)
	}
}

var long = time.Date(2020, 2, 3, 4, 5, 6, 0, time.UTC)

func setTime(t *testing.T, path string, to time.Time) {
	t.Helper()
	if err := os.Chtimes(path, to, to); err != nil {
		t.Fatal(err)
	}
}

// redone lists the clouds below a folder that are not as old as age made them.
func redone(t *testing.T, folder string) (names []string) {
	t.Helper()
	for _, name := range slices.Sorted(maps.Keys(snapshot(t, folder))) {
		info, err := os.Stat(filepath.Join(folder, name))
		if err != nil {
			t.Fatal(err)
		}
		if strings.HasSuffix(name, ".csv") && !info.ModTime().Equal(long) {
			names = append(names, name)
		}
	}
	return names
}

func TestOnlyWhatIsStaleIsDoneAgain(t *testing.T) {
	all := []string{"a.csv", "b.csv"}
	const text = tinyRest + "[extent]\npolygons = \"water.geojson\"\n"
	rewrite := func(name, text string) func(*testing.T, string) {
		return func(t *testing.T, folder string) { files{name: text}.write(t, folder) }
	}
	remove := func(name string) func(*testing.T, string) {
		return func(t *testing.T, folder string) {
			if err := os.Remove(filepath.Join(folder, name)); err != nil {
				t.Fatal(err)
			}
		}
	}
	head := "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"true\"\n"
	for _, c := range []struct {
		name   string
		change func(t *testing.T, folder string)
		want   []string
	}{
		{"nothing", func(*testing.T, string) {}, nil},
		{"an input is touched", func(t *testing.T, folder string) {
			setTime(t, filepath.Join(folder, "raw/a.csv"), time.Now().Add(time.Hour))
		}, nil},
		{"a byte of an input", rewrite("raw/a.csv", strings.Replace(tiny, "-10", "-11", 1)), []string{"a.csv"}},
		{"an input grows", rewrite("raw/b.csv", tiny+"5,6,-10,5,6,400\n"), []string{"b.csv"}},
		{"salinity", rewrite("job.toml", head+strings.Replace(text, "34.9", "34.8", 1)), all},
		{"decimals", rewrite("job.toml", "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"true\"\ndecimals = 3\n"+text), all},
		{"a polygon", rewrite("water.geojson", polygonOf(0, 0, 8, 9)), all},
		{"a comment, a title and a default written out", rewrite("job.toml", "# new\ntitle = \"Lantern Cove\"\n"+head+text+"[limits]\nmax_incidence = 60\n"), nil},
		{"more files named", rewrite("job.toml", strings.Replace(head, "raw/*.csv", "raw/[a-b].csv", 1)+text), nil},
		{"an output is gone", remove("true/a.csv"), []string{"a.csv"}},
		{"a receipt is gone", remove("true/a.csv.receipt.json"), []string{"a.csv"}},
		{"a receipt is broken", rewrite("true/a.csv.receipt.json", "{"), []string{"a.csv"}},
		{"an output is cut short", rewrite("true/b.csv", "x,y"), []string{"b.csv"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := t.TempDir()
			files{"raw/a.csv": tiny, "raw/b.csv": tiny, "water.geojson": polygonOf(0, 0, 9, 9)}.write(t, folder)
			runJob(t, loadJob(t, folder, head+text), Options{})
			age(t, filepath.Join(folder, "true"))
			c.change(t, folder)
			s := runJob(t, reload(t, folder), Options{})
			if got := redone(t, filepath.Join(folder, "true")); !slices.Equal(got, c.want) || s.Done != len(c.want) || s.Fresh != 2-len(c.want) {
				t.Errorf("%d done, %d fresh, written again are %q, want %q", s.Done, s.Fresh, got, c.want)
			}
			after := outputs(t, filepath.Join(folder, "true"))
			if s := runJob(t, reload(t, folder), Options{}); s.Fresh != 2 {
				t.Errorf("the next run finds %d fresh, want 2", s.Fresh)
			}
			runJob(t, reload(t, folder), Options{Redo: true})
			same(t, "all done again", outputs(t, filepath.Join(folder, "true")), after)
		})
	}
}

func reload(t *testing.T, folder string) *job.Job {
	t.Helper()
	return loadJob(t, folder, readFile(t, folder, "job.toml"))
}

// Two raw files of one size and time are told apart where a job now names the
// other one.
func TestAnotherInputUnderTheSameName(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": tiny, "new/a.csv": strings.Replace(tiny, "-10", "-11", 1)}.write(t, folder)
	setTime(t, filepath.Join(folder, "raw/a.csv"), long)
	setTime(t, filepath.Join(folder, "new/a.csv"), long)
	runJob(t, loadJob(t, folder, tinyJob(`"raw/*.csv"`, "true")), Options{})
	if s := runJob(t, loadJob(t, folder, tinyJob(`"new/*.csv"`, "true")), Options{}); s.Done != 1 {
		t.Errorf("%d done, want 1", s.Done)
	}
}

// A run after one that diverted rows leaves no rejects of the older input.
func TestRejectsGoWithTheirInput(t *testing.T) {
	folder := t.TempDir()
	text := strings.Replace(tinyJob(`"raw/*.csv"`, "true"), "[output]", "bad_rows = \"divert\"\n[output]", 1)
	files{"raw/a.csv": tiny + "ragged\n"}.write(t, folder)
	runJob(t, loadJob(t, folder, text), Options{})
	if got := readFile(t, folder, "true/a.csv.rejects.csv"); got != "line,reason,text\n3,\"has 1 field, want 6\",ragged\n" {
		t.Errorf("rejects are %q", got)
	}
	if err := os.Remove(filepath.Join(folder, "true/a.csv.rejects.csv")); err != nil {
		t.Fatal(err)
	}
	if s := runJob(t, loadJob(t, folder, text), Options{}); s.Done != 1 || !exists(filepath.Join(folder, "true/a.csv.rejects.csv")) {
		t.Errorf("without its rejects a file is not done again: %+v", s)
	}
	files{"raw/a.csv": tiny}.write(t, folder)
	runJob(t, loadJob(t, folder, text), Options{})
	if exists(filepath.Join(folder, "true/a.csv.rejects.csv")) {
		t.Error("the older rejects are left")
	}
}

// Failed files keep what an earlier run wrote for them, and leave nothing else.
func TestFailedFileLeavesNothing(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": tiny, "raw/b.csv": tiny, "raw/c.csv": "x,y\n1,2\n"}.write(t, folder)
	j := loadJob(t, folder, tinyJob(`"raw/*.csv"`, "true"))
	summary, err := Run(t.Context(), j, Options{})
	if err != nil || summary.Done != 2 || summary.Failed != 1 {
		t.Fatalf("%v: %+v", err, summary)
	}
	before := outputs(t, filepath.Join(folder, "true"))
	var long bytes.Buffer
	long.WriteString(tiny)
	for range 50000 {
		row(&long, "5", "6", "-10", "5", "6", "400")
	}
	files{"raw/a.csv": long.String() + "5,6,deep,5,6,400\n"}.write(t, folder)
	if summary, err = Run(t.Context(), j, Options{}); err != nil || summary.Failed != 2 {
		t.Fatalf("%v: %+v", err, summary)
	}
	if want := filepath.Join(folder, "raw/a.csv") + `: line 50003: z is "deep", want a number`; summary.Files[0].Error != want {
		t.Errorf("got %s, want %s", summary.Files[0].Error, want)
	}
	same(t, "the output folder", outputs(t, filepath.Join(folder, "true")), before)
}

// meddler changes a file's time as soon as the run has read of it.
type meddler struct {
	silent
	path string
}

func (m meddler) Read(int64) { _ = os.Chtimes(m.path, long, long) } // an error fails the test below

func TestInputThatChangesWhileItIsRead(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": tiny}.write(t, folder)
	path := filepath.Join(folder, "raw/a.csv")
	summary, err := Run(t.Context(), loadJob(t, folder, tinyJob(`"raw/*.csv"`, "true")), Options{Watch: meddler{path: path}})
	if err != nil {
		t.Fatal(err)
	}
	if want := path + ": changed while it was read; run again when it is complete"; summary.Files[0].Error != want {
		t.Errorf("got %q, want %q", summary.Files[0].Error, want)
	}
	if exists(filepath.Join(folder, "true/a.csv")) {
		t.Error("there is an output of it")
	}
}
