package demo

import (
	"bytes"
	"errors"
	"io/fs"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"bentray/pipeline"
)

// contents reads all files below a folder, by name.
func contents(t *testing.T, folder string) map[string][]byte {
	t.Helper()
	files := map[string][]byte{}
	err := filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		name, err := filepath.Rel(folder, path)
		if err != nil {
			return err
		}
		files[filepath.ToSlash(name)], err = os.ReadFile(path)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return files
}

func TestWriteGivesTheSameBytes(t *testing.T) {
	one, two := t.TempDir(), filepath.Join(t.TempDir(), "new", "folder")
	for _, folder := range []string{one, two} {
		if _, _, _, err := Write(folder); err != nil {
			t.Fatal(err)
		}
	}
	want := contents(t, one)
	names := slices.Sorted(maps.Keys(want))
	wantNames := []string{
		"flight.csv",
		"pool/average.toml", "pool/cameras.csv", "pool/intersect.toml", "pool/pool.toml", "pool/raw/head.csv", "pool/raw/tail.csv", "pool/truth/head.csv", "pool/truth/tail.csv", "pool/vertical.toml",
		"raw/cross_line/tile_05.csv", "raw/tile_01.csv", "raw/tile_02.parquet", "raw/tile_03.csv", "raw/tile_04.parquet",
		"river/flight.csv", "river/gauge.csv", "river/raw/lower.parquet", "river/raw/upper.csv", "river/river.toml", "river/truth/lower.csv", "river/truth/upper.csv",
		"river/waterline.csv", "river/zones.geojson", "survey.toml",
		"truth/cross_line/tile_05.csv", "truth/tile_01.csv", "truth/tile_02.csv", "truth/tile_03.csv", "truth/tile_04.csv", "water.geojson",
	}
	if !slices.Equal(names, wantNames) {
		t.Errorf("files are %q, want %q", names, wantNames)
	}
	if !maps.EqualFunc(contents(t, two), want, bytes.Equal) {
		t.Error("two folders differ")
	}
	if err := os.WriteFile(filepath.Join(one, "raw", "tile_01.csv"), []byte("x,y,z\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, _, _, err := Write(one); err != nil {
		t.Fatal(err)
	}
	if !maps.EqualFunc(contents(t, one), want, bytes.Equal) {
		t.Error("a folder that was written again differs")
	}
}

func TestTilesHaveTheirTruth(t *testing.T) {
	tiles, err := fill(flightLines())
	if err != nil {
		t.Fatal(err)
	}
	total := 0
	for _, tile := range tiles {
		total += tile.rows
		if got := bytes.Count(tile.truth, []byte("\n")); got != tile.rows+1 {
			t.Errorf("%s: the truth has %d lines, want a header and %d rows", tile.name, got, tile.rows)
		}
		if got := bytes.Count(tile.cloud, []byte("\n")) + len(tile.table.x); got != tile.rows {
			t.Errorf("%s: the cloud has %d rows, want %d", tile.name, got, tile.rows)
		}
		if tile.rows < 10_000 {
			t.Errorf("%s has %d rows, want a fair share", tile.name, tile.rows)
		}
	}
	if total != 200_000 {
		t.Errorf("%d rows, want 200000", total)
	}
}

func TestWriteRefusesOtherFolders(t *testing.T) {
	file := filepath.Join(t.TempDir(), "file")
	notes, other, river, pool := t.TempDir(), t.TempDir(), t.TempDir(), t.TempDir()
	for _, folder := range []string{filepath.Join(river, "river"), filepath.Join(pool, "pool")} {
		if err := os.Mkdir(folder, 0o777); err != nil {
			t.Fatal(err)
		}
	}
	for path, text := range map[string]string{
		file:                                       "text",
		filepath.Join(notes, "notes.txt"):          "keep",
		filepath.Join(other, "survey.toml"):        "title = \"Another survey\"\n",
		filepath.Join(river, "survey.toml"):        string(jobText()),
		filepath.Join(river, "river", "notes.txt"): "keep",
		filepath.Join(pool, "pool", "notes.txt"):   "keep",
		filepath.Join(pool, "survey.toml"):         string(jobText()),
	} {
		if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	for name, folder := range map[string]string{"file": file, "notes": notes, "another survey": other, "notes where the river goes": river, "notes where the pool goes": pool} {
		t.Run(name, func(t *testing.T) {
			_, _, _, err := Write(folder)
			var call *pipeline.CallError
			if !errors.As(err, &call) {
				t.Errorf("error is %v, want a CallError", err)
			}
		})
	}
	for _, folder := range []string{river, pool} {
		if files := contents(t, folder); len(files) != 2 {
			t.Errorf("the folder with another river or pool holds %v, want it untouched", slices.Collect(maps.Keys(files)))
		}
	}
	if files := contents(t, notes); len(files) != 1 || string(files["notes.txt"]) != "keep" {
		t.Errorf("the folder holds %v, want it untouched", slices.Collect(maps.Keys(files)))
	}
}

func TestAppendFixed(t *testing.T) {
	for _, c := range []struct {
		n        int64
		decimals int
		want     string
	}{
		{0, 3, "0.000"},
		{-3, 3, "-0.003"},
		{-12345, 4, "-1.2345"},
		{6213000123, 3, "6213000.123"},
		{463218218000250, 6, "463218218.000250"},
	} {
		if got := string(appendFixed(nil, c.n, c.decimals)); got != c.want {
			t.Errorf("appendFixed(%d, %d) = %q, want %q", c.n, c.decimals, got, c.want)
		}
	}
}
