package main

import (
	"os"
	"strings"
	"syscall"
	"testing"
)

// A full disk fails the files that do not fit, and leaves no part of them.
func TestFullDisk(t *testing.T) {
	fleet(t)
	put(t, "raw/small.csv", goodCloud)
	if err := os.Mkdir("true", 0o777); err != nil {
		t.Fatal(err)
	}
	if err := syscall.Mount("tmpfs", "true", "tmpfs", 0, "size=128k"); err != nil {
		t.Skipf("a small disk cannot be mounted here: %v", err)
	}
	defer func() {
		if err := syscall.Unmount("true", 0); err != nil {
			t.Error(err)
		}
	}()
	code, out, errs := call(t, "run", "job.toml", "--workers", "1") // side by side a small file may meet a disk that is full for a moment
	if code != exitPartly || strings.Count(errs, ": cannot write: no space left on device\n") != 5 || !strings.HasPrefix(out, "job.toml: 7 files: 2 done, 5 failed\n") || strings.Contains(errs, "column") {
		t.Errorf("exit code is %d with\n%s%swant 3 and five files without space", code, out, errs)
	}
	for name := range results(t, "true") {
		if strings.Contains(name, ".part-") || strings.Contains(name, "part0/t") {
			t.Errorf("%s is left", name)
		}
	}
}
