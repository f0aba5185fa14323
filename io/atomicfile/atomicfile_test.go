package atomicfile

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func names(t *testing.T, folder string) string {
	t.Helper()
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	var out []string
	for _, e := range entries {
		out = append(out, e.Name())
	}
	return strings.Join(out, " ")
}

func TestCommitShowsTheWholeFileAtOnce(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "tile.csv")
	if err := os.WriteFile(path, []byte("old"), 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := Create(path)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := f.Write([]byte("new")); err != nil {
		t.Fatal(err)
	}
	if got, _ := os.ReadFile(path); string(got) != "old" {
		t.Errorf("before Commit the file holds %q, want the old contents", got)
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	f.Discard() // must not take the committed file away
	if got, _ := os.ReadFile(path); string(got) != "new" {
		t.Errorf("after Commit the file holds %q, want the new contents", got)
	}
	if got := names(t, folder); got != "tile.csv" {
		t.Errorf("the folder holds %q, want only the file", got)
	}
}

func TestDiscardLeavesNothing(t *testing.T) {
	folder := t.TempDir()
	f, err := Create(filepath.Join(folder, "tile.csv"))
	if err != nil {
		t.Fatal(err)
	}
	if names(t, folder) == "" {
		t.Error("the unfinished file is not beside its target")
	}
	f.Discard()
	if got := names(t, folder); got != "" {
		t.Errorf("the folder holds %q, want nothing", got)
	}
}

func TestCommitOntoAFolderFailsAndLeavesNothing(t *testing.T) {
	folder := t.TempDir()
	if err := os.MkdirAll(filepath.Join(folder, "tile.csv", "inside"), 0o755); err != nil {
		t.Fatal(err)
	}
	err := Write(filepath.Join(folder, "tile.csv"), []byte("data"))
	if err == nil || !strings.Contains(err.Error(), "tile.csv: cannot finish the file") {
		t.Errorf("got %v, want an error that names the file", err)
	}
	if got := names(t, folder); got != "tile.csv" {
		t.Errorf("the folder holds %q, want only what was there", got)
	}
}

func TestFullDiskIsAnErrorThatNamesTheTarget(t *testing.T) {
	full, err := os.OpenFile("/dev/full", os.O_WRONLY, 0)
	if err != nil {
		t.Skip("no /dev/full here")
	}
	f := &File{File: full, target: "tiles/a.csv", done: true}
	_, err = f.Write([]byte("data"))
	if err == nil || err.Error() != "tiles/a.csv: cannot write: no space left on device" {
		t.Errorf("got %v", err)
	}
}

func TestSweepTakesOnlyItsOwnTargets(t *testing.T) {
	folder := t.TempDir()
	mine, other := filepath.Join(folder, "a.csv"), filepath.Join(folder, "b.csv")
	for _, path := range []string{mine, other} {
		f, err := Create(path)
		if err != nil {
			t.Fatal(err)
		}
		f.Close() // killed here
	}
	if err := os.WriteFile(filepath.Join(folder, ".part-of-the-survey.csv"), nil, 0o600); err != nil {
		t.Fatal(err)
	}
	swept, err := NewSweeper([]string{mine, filepath.Join(folder, "none", "c.csv")}).Sweep()
	if err != nil || swept != 1 {
		t.Errorf("swept %d, %v, want 1", swept, err)
	}
	left := names(t, folder)
	if !strings.Contains(left, tag(other)) || strings.Contains(left, tag(mine)) || !strings.Contains(left, "of-the-survey") {
		t.Errorf("left are %q", left)
	}
}

func TestLongNamesKeepShortTemporaryNames(t *testing.T) {
	path := filepath.Join(t.TempDir(), strings.Repeat("n", 251)+".csv")
	if err := Write(path, []byte("x")); err != nil {
		t.Error(err)
	}
}
