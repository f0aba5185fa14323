package main

import (
	"image/png"
	"os"
	"path/filepath"
	"testing"
)

// The river of the demo, described and drawn through the command.
func TestSurfaceDrawsTheRiver(t *testing.T) {
	folder := t.TempDir()
	if code, _, errs := call(t, "demo", folder); code != exitDone {
		t.Fatalf("exit code is %d with %q, want 0", code, errs)
	}
	path := filepath.Join(folder, "surface.png")
	code, _, errs := call(t, "surface", filepath.Join(folder, "river", "river.toml"), "--png", path)
	want(t, "surface", code, exitDone, errs, "")
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	picture, err := png.Decode(f)
	if err != nil {
		t.Fatal(err)
	}
	if b := picture.Bounds(); b.Dx() < 1000 || b.Dy() < 900 { // a map, residuals and the gauge
		t.Errorf("picture is %d by %d pixels, want three panels on a page of 1039", b.Dx(), b.Dy())
	}
}
