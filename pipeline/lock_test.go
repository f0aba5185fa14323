package pipeline

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// holdLock keeps the outputs locked as a run does, until the test ends.
func holdLock(t *testing.T, folder string, targets ...string) *lock {
	t.Helper()
	var inputs []input
	for _, target := range targets {
		inputs = append(inputs, input{target: target})
	}
	l, err := acquire(folder, inputs)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func TestRunIsRefusedWhileAnotherWritesTheSame(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": tiny, "raw/b.csv": tiny, "true/x": ""}.write(t, folder)
	j := loadJob(t, folder, tinyJob(`"raw/*.csv"`, "true"))
	out := filepath.Join(folder, "true")
	other := holdLock(t, out, "z.csv", "b.csv")
	before := snapshot(t, folder)
	_, err := Run(context.Background(), j, Options{})
	host, _ := os.Hostname()
	want := fmt.Sprintf("%s is being written by another run (host %s, process %d); wait for it to end, or stop it", filepath.Join(out, "b.csv"), host, os.Getpid())
	var call *CallError
	if !errors.As(err, &call) || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
	same(t, "the folder of a refused run", snapshot(t, folder), before)

	if s := runJob(t, j, Options{Only: "a.csv"}); s.Done != 1 {
		t.Errorf("beside a run with other outputs %d files are done, want 1", s.Done)
	}
	other.release()
	if s := runJob(t, j, Options{}); s.Done != 1 || s.Fresh != 1 {
		t.Errorf("after the other run %d done, %d fresh, want 1 and 1", s.Done, s.Fresh)
	}
}

func TestLockOfADeadRunIsSwept(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": tiny, "true/bentray-DEAD.lock": `{"host":"lantern","process":1,"outputs":["a.csv"]}`, "true/bentray-EMPTY.lock": ""}.write(t, folder)
	runJob(t, loadJob(t, folder, tinyJob(`"raw/*.csv"`, "true")), Options{})
	for name := range snapshot(t, filepath.Join(folder, "true")) {
		if strings.HasSuffix(name, ".lock") && name != gateName {
			t.Errorf("%s is left", name)
		}
	}
}

// A run may end between the look at its lock and the reading of it.
func TestLockThatWentAway(t *testing.T) {
	if err := checkHolder(filepath.Join(t.TempDir(), "bentray-GONE.lock"), map[string]bool{"a.csv": true}); err != nil {
		t.Errorf("got %v, want nothing", err)
	}
}

// The glob of lock files takes the folder's name as it stands.
func TestLockInAFolderNamedLikeAPattern(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "cove [a] *?")
	files{"x": ""}.write(t, folder)
	defer holdLock(t, folder, "a.csv").release()
	if _, err := acquire(folder, []input{{target: "a.csv"}}); err == nil {
		t.Error("the lock is taken twice")
	}
}

// What a live run of another job is writing stays; one's own leavings go.
func TestRunSweepsItsOwnLeavingsOnly(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": tiny}.write(t, folder)
	j := loadJob(t, folder, tinyJob(`"raw/*.csv"`, "true"))
	runJob(t, j, Options{})
	want := outputs(t, filepath.Join(folder, "true"))
	files{
		"true/.part-" + tagOf("a.csv") + "-X":                  "half",
		"true/.part-" + tagOf("a.csv.receipt.json") + "-X":     "half",
		"true/.part-" + tagOf("a.csv.rejects.csv") + "-X":      "half",
		"true/.part-" + tagOf("run-summary.json") + "-X":       "half",
		"true/.part-" + tagOf("b.csv") + "-of-another-run":     "half",
		"true/.part-" + tagOf("run-summary-0-of-2.json") + "-": "half",
	}.write(t, folder)
	runJob(t, j, Options{})
	want[".part-"+tagOf("b.csv")+"-of-another-run"] = "half"
	want[".part-"+tagOf("run-summary-0-of-2.json")+"-"] = "half"
	same(t, "the output folder", outputs(t, filepath.Join(folder, "true")), want)
}

func TestShardsShareAFolder(t *testing.T) {
	folder := t.TempDir()
	f := files{}
	for i := range 12 {
		f[fmt.Sprintf("raw/t%d.csv", i)] = tiny
	}
	f.write(t, folder)
	whole := loadJob(t, folder, tinyJob(`"raw/*.csv"`, "whole"))
	runJob(t, whole, Options{})
	shared := loadJob(t, folder, tinyJob(`"raw/*.csv"`, "shared"))
	ended := make(chan string, 3)
	for i := range 3 {
		go func() {
			s, err := Run(context.Background(), shared, Options{Shard: Shard{i, 3}, Workers: 1})
			if err != nil {
				ended <- err.Error()
				return
			}
			ended <- strings.Repeat("+", s.Done)
		}()
	}
	done := 0
	for range 3 {
		text := <-ended
		if strings.Trim(text, "+") != "" {
			t.Errorf("a shard fails: %s", text)
		}
		done += strings.Count(text, "+")
	}
	if done != 12 {
		t.Errorf("the shards do %d files, want each of 12 once", done)
	}
	same(t, "shards", outputs(t, filepath.Join(folder, "shared")), outputs(t, filepath.Join(folder, "whole")))
	for i := range 3 {
		readFile(t, folder, fmt.Sprintf("shared/run-summary-%d-of-3.json", i))
	}
	if s := runJob(t, shared, Options{}); s.Fresh != 12 {
		t.Errorf("after the shards %d files are fresh, want 12", s.Fresh)
	}
}

// tagOf is the part of a temporary name that tells its target, computed anew.
func tagOf(name string) string {
	sum := sha256.Sum256([]byte(name))
	return hex.EncodeToString(sum[:8])
}
