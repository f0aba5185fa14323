package atomicfile

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// A scratch file is never seen in its folder; where it must have a name a
// Sweeper of the target takes it.
func TestScratch(t *testing.T) {
	target := filepath.Join(t.TempDir(), "out")
	for _, create := range []func(string) (*Scratch, error){NewScratch, newNamed} {
		s, err := create(target)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := s.WriteAt([]byte("held"), 3); err != nil {
			t.Error(err)
		}
		b := make([]byte, 4)
		if _, err := s.ReadAt(b, 3); err != nil || string(b) != "held" {
			t.Errorf("read %q (%v), want what was written", b, err)
		}
		if err := s.Close(); err != nil {
			t.Error(err)
		}
		if list, err := os.ReadDir(filepath.Dir(target)); err != nil || len(list) != 0 {
			t.Errorf("the folder holds %v (%v), want nothing", list, err)
		}
	}
	if err := os.WriteFile(temporary(target), nil, 0o600); err != nil {
		t.Fatal(err)
	}
	if n, err := NewSweeper([]string{target}).Sweep(); n != 1 || err != nil {
		t.Errorf("%d swept (%v), want the scratch file's name taken", n, err)
	}
	if _, err := NewScratch(filepath.Join(target, "gone", "out")); err == nil || strings.Contains(err.Error(), prefix) {
		t.Errorf("got error %v, want one without a made-up name", err)
	}
}
