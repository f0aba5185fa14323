//go:build unix

package main

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

// begin starts a run and waits until it writes.
func begin(t *testing.T) *exec.Cmd {
	t.Helper()
	command := exec.Command("bentray", "run", "job.toml", "--workers", "1", "--quiet")
	if err := command.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = command.Process.Kill() }) // after a failed test
	untilWriting(t)
	return command
}

// untilWriting waits until a run has begun a file.
func untilWriting(t *testing.T) {
	t.Helper()
	for deadline := time.Now().Add(10 * time.Second); time.Now().Before(deadline); time.Sleep(time.Millisecond) {
		if parts, _ := filepath.Glob("true/*/.part-*"); len(parts) > 0 {
			return
		}
	}
	t.Fatal("no run writes")
}

// A second run on the same outputs is refused while the first, here stopped in
// the middle, is alive; the first then ends as if nothing had been.
func TestSecondRunIsRefused(t *testing.T) {
	fleet(t)
	program(t, exitDone, "run", "job.toml", "--quiet")
	whole := results(t, "true")
	if err := os.RemoveAll("true"); err != nil {
		t.Fatal(err)
	}
	first := begin(t)
	send(t, first, syscall.SIGSTOP)
	for _, args := range [][]string{{"run", "job.toml"}, {"run", "job.toml", "--redo", "--only", "part1/t3.csv"}} {
		var errs bytes.Buffer
		second := exec.Command("bentray", args...)
		second.Stderr = &errs
		_ = second.Run() // its exit code says
		host, _ := os.Hostname()
		message := fmt.Sprintf("is being written by another run (host %s, process %d); wait for it to end, or stop it\n", host, first.Process.Pid)
		if second.ProcessState.ExitCode() != exitCall || !strings.HasPrefix(errs.String(), "bentray: true/") || !strings.HasSuffix(errs.String(), message) {
			t.Errorf("%q: exit code is %d with %q, want 64 and %q", args, second.ProcessState.ExitCode(), &errs, message)
		}
	}
	send(t, first, syscall.SIGCONT)
	if err := first.Wait(); err != nil {
		t.Error(err)
	}
	sameResults(t, "the first run", results(t, "true"), whole)
}

// A killed run holds nothing back.
func TestLockDiesWithItsRun(t *testing.T) {
	fleet(t)
	first := begin(t)
	send(t, first, syscall.SIGKILL)
	_ = first.Wait() // killed
	program(t, exitDone, "run", "job.toml", "--quiet")
	if locks, _ := filepath.Glob("true/bentray-*.lock"); len(locks) > 0 {
		t.Errorf("%q is left", locks)
	}
}

func send(t *testing.T, command *exec.Cmd, s os.Signal) {
	t.Helper()
	if err := command.Process.Signal(s); err != nil {
		t.Fatal(err)
	}
}
