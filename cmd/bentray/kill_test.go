//go:build unix

package main

import (
	"bytes"
	"fmt"
	"io/fs"
	"maps"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"testing"
	"time"
)

// fleet lays a job of several files, each of some tens of milliseconds' work:
// CSV with rows to divert, and Parquet.
func fleet(t *testing.T) {
	t.Helper()
	badInput{old: `"raw/*.csv"]`, new: "\"raw/**/*.csv\", \"raw/**/*.parquet\"]\nbad_rows = \"divert\""}.lay(t)
	for i := range 4 {
		var b bytes.Buffer
		b.WriteString("x,y,z,origin_x,origin_y,origin_z,note\n")
		for k := range 2500 {
			fmt.Fprintf(&b, "%d.25,%d.5,-%d.125,%d,%d,400,\"row %d\"\n", 500+k%97, 600+k%89, k%30, 500+i, 600, k)
		}
		b.WriteString("ragged\n")
		put(t, fmt.Sprintf("raw/part%d/t%d.csv", i%2, i), b.String())
	}
	put(t, "raw/part0/t4.parquet", goodParquet(t, 20000, 5000))
}

// results is what runs leave in a folder: its files but for the times in a
// summary.
func results(t *testing.T, folder string) map[string]string {
	t.Helper()
	all := map[string]string{}
	for name, text := range listing(t) {
		rest, below := strings.CutPrefix(name, folder+"/")
		if !below {
			continue
		}
		if rest == "run-summary.json" {
			text = ""
		}
		all[rest] = text
	}
	return all
}

// sameResults fails the test where two folders differ.
func sameResults(t *testing.T, what string, got, want map[string]string) {
	t.Helper()
	if g, w := slices.Sorted(maps.Keys(got)), slices.Sorted(maps.Keys(want)); !slices.Equal(g, w) {
		t.Fatalf("%s: the folder holds %q, want %q", what, g, w)
	}
	for name := range want {
		if got[name] != want[name] {
			t.Fatalf("%s: %s differs from an undisturbed run", what, name)
		}
	}
}

// wholeOrNot fails the test where a file under its final name is not what an
// undisturbed run writes.
func wholeOrNot(t *testing.T, what, folder string, want map[string]string) {
	t.Helper()
	for name, text := range results(t, folder) {
		base := filepath.Base(name)
		if strings.HasPrefix(base, ".part-") || strings.HasSuffix(base, ".lock") {
			continue
		}
		if whole, known := want[name]; !known || text != whole {
			t.Fatalf("%s: %s is there with %d bytes, want all %d or none", what, name, len(text), len(whole))
		}
	}
}

func TestKilledRunsLeaveNothingOver(t *testing.T) {
	fleet(t)
	program(t, exitDone, "run", "job.toml", "--workers", "2", "--quiet")
	want := results(t, "true")
	const seed = 20261202
	r := rand.New(rand.NewPCG(seed, 1))
	killed := 0
	for try := range 8 {
		what := fmt.Sprintf("seed %d, kill %d", seed, try)
		if err := os.RemoveAll("true"); err != nil {
			t.Fatal(err)
		}
		for range 1 + try%2 { // a rerun may be killed too
			if kill(t, r.IntN(len(want)), time.Duration(r.Float64()*float64(10*time.Millisecond))) {
				killed++
			}
			wholeOrNot(t, what, "true", want)
		}
		program(t, exitDone, "run", "job.toml", "--workers", "2", "--quiet")
		sameResults(t, what, results(t, "true"), want)
	}
	if killed < 6 {
		t.Errorf("seed %d: only %d of 12 runs were killed before their end", seed, killed)
	}
}

// program runs bentray as a process of its own.
func program(t *testing.T, wantCode int, args ...string) {
	t.Helper()
	out, err := exec.Command("bentray", args...).CombinedOutput()
	code := 0
	if exit, ok := err.(*exec.ExitError); ok {
		code = exit.ExitCode()
	} else if err != nil {
		t.Fatal(err)
	}
	if code != wantCode {
		t.Fatalf("bentray %q ends with %d, want %d:\n%s", args, code, wantCode, out)
	}
}

// kill starts a run, kills it a while after there are so many files and folders
// in its output folder, and tells whether it was still going.
func kill(t *testing.T, files int, later time.Duration) bool {
	t.Helper()
	command := exec.Command("bentray", "run", "job.toml", "--workers", "2", "--quiet")
	if err := command.Start(); err != nil {
		t.Fatal(err)
	}
	ended := make(chan error, 1)
	go func() { ended <- command.Wait() }()
	for {
		select {
		case err := <-ended:
			return err != nil
		case <-time.After(time.Millisecond):
		}
		if count("true") >= files {
			time.Sleep(later)
			_ = command.Process.Kill() // it may have ended
			return <-ended != nil
		}
	}
}

// count returns how many files and folders are below a folder.
func count(folder string) (n int) {
	_ = filepath.WalkDir(folder, func(string, fs.DirEntry, error) error { // which changes meanwhile
		n++
		return nil
	})
	return n
}

// While a run goes on, what stands under a final name is whole.
func TestOutputsAreNeverPartial(t *testing.T) {
	fleet(t)
	program(t, exitDone, "run", "job.toml", "--quiet")
	want := results(t, "true")
	if err := os.RemoveAll("true"); err != nil {
		t.Fatal(err)
	}
	if err := os.Mkdir("true", 0o777); err != nil {
		t.Fatal(err)
	}
	command := exec.Command("bentray", "run", "job.toml", "--workers", "2", "--quiet")
	if err := command.Start(); err != nil {
		t.Fatal(err)
	}
	ended := make(chan error, 1)
	go func() { ended <- command.Wait() }()
	for looks := 0; ; looks++ {
		select {
		case err := <-ended:
			if err != nil || looks < 3 {
				t.Errorf("the run ends with %v after %d looks", err, looks)
			}
			sameResults(t, "at the end", results(t, "true"), want)
			return
		default:
			look(t, want)
		}
	}
}

// look compares the sizes of what is under a final name right now.
func look(t *testing.T, want map[string]string) {
	t.Helper()
	for name, text := range want {
		info, err := os.Stat(filepath.Join("true", name))
		if err == nil && !info.IsDir() && text != "" && info.Size() != int64(len(text)) {
			t.Errorf("%s has %d bytes, want %d", name, info.Size(), len(text))
		}
	}
}

// Interrupted, a run keeps what is done and sweeps the rest.
func TestInterruptedRunGoesOn(t *testing.T) {
	fleet(t)
	program(t, exitDone, "run", "job.toml", "--quiet")
	want := results(t, "true")
	for _, signal := range []os.Signal{os.Interrupt, syscall.SIGTERM} {
		if err := os.RemoveAll("true"); err != nil {
			t.Fatal(err)
		}
		interruptAtFirstOutput(t, signal)
		wholeOrNot(t, "interrupted", "true", want)
		for name := range results(t, "true") {
			if base := filepath.Base(name); strings.HasPrefix(base, ".part-") || strings.HasPrefix(base, "bentray-") {
				t.Errorf("%s is left", name)
			}
		}
		program(t, exitDone, "run", "job.toml", "--quiet")
		sameResults(t, "after the rerun", results(t, "true"), want)
	}
}

// An interrupt outweighs a file that failed before it.
func TestInterruptAfterAFailure(t *testing.T) {
	fleet(t)
	put(t, "raw/a.csv", "x,y\n1,2\n") // the first file of the run
	interruptAtFirstOutput(t, os.Interrupt)
}

// interruptAtFirstOutput signals a run as soon as it has begun a file.
func interruptAtFirstOutput(t *testing.T, signal os.Signal) {
	t.Helper()
	var errs bytes.Buffer
	command := exec.Command("bentray", "run", "job.toml", "--workers", "1", "--quiet")
	command.Stderr = &errs
	if err := command.Start(); err != nil {
		t.Fatal(err)
	}
	untilWriting(t)
	if err := command.Process.Signal(signal); err != nil {
		t.Fatal(err)
	}
	err := command.Wait()
	if exit, ok := err.(*exec.ExitError); !ok || exit.ExitCode() != exitInterrupted || !strings.Contains(errs.String(), "bentray: interrupted; done files stay done, run again for the rest") {
		t.Errorf("%v: %v with %q, want exit code 130 and a word about it", signal, err, &errs)
	}
}
