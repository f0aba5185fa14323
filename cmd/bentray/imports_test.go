package main

import (
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// mayImport says which rooms each room may import. A room not listed as a key is
// unknown and fails, so that a new room is placed on purpose.
var mayImport = map[string][]string{
	"cmd/bentray":            {"pipeline", "pipeline/demo", "pipeline/job", "pipeline/picture", "pipeline/quality", "pipeline/quality/page", "pipeline/receipt", "correct", "correct/medium", "correct/optics"},
	"pipeline":               {"pipeline/job", "pipeline/receipt", "correct", "correct/medium", "geo", "io/cloud", "io/csvfile", "io/parquetfile", "io/atomicfile"},
	"pipeline/demo":          {"pipeline", "pipeline/job", "pipeline/receipt", "correct/medium", "io/cloud", "io/parquetfile", "io/atomicfile"},
	"pipeline/benchmark":     {"correct/medium"},
	"pipeline/job":           {"correct/medium", "geo", "io/cloud"},
	"pipeline/picture":       {"pipeline", "pipeline/quality", "io/atomicfile"},
	"pipeline/quality":       {"pipeline", "pipeline/job", "pipeline/receipt", "correct", "geo", "io/atomicfile", "io/cloud", "io/csvfile", "io/parquetfile"},
	"pipeline/quality/page":  {"pipeline/job", "pipeline/picture", "pipeline/quality", "pipeline/receipt", "io/atomicfile"},
	"pipeline/receipt":       {"io/atomicfile"},
	"correct":                {"correct/acoustics", "correct/optics"},
	"correct/acoustics":      {"correct/medium"},
	"correct/medium":         {},
	"correct/optics":         {},
	"geo":                    {},
	"io/atomicfile":          {},
	"io/cloud":               {},
	"io/csvfile":             {"io/cloud"},
	"io/parquetfile":         {"io/cloud", "io/atomicfile"},
	"io/parquetfile/interop": {},
}

func TestImportsPointOneWay(t *testing.T) {
	root := filepath.Join("..", "..")
	seen := 0
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if d.IsDir() && path != root && strings.HasPrefix(d.Name(), ".") {
			return filepath.SkipDir
		}
		if !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
			return nil
		}
		seen++
		checkImports(t, root, path)
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if seen < len(mayImport) {
		t.Errorf("only %d files were looked at", seen)
	}
}

func checkImports(t *testing.T, root, path string) {
	t.Helper()
	folder, err := filepath.Rel(root, filepath.Dir(path))
	if err != nil {
		t.Fatal(err)
	}
	room := filepath.ToSlash(folder)
	allowed, known := mayImport[room]
	if !known {
		t.Errorf("%s: room %q has no place in mayImport", path, room)
		return
	}
	file, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
	if err != nil {
		t.Fatal(err)
	}
	for _, spec := range file.Imports {
		name, _ := strconv.Unquote(spec.Path.Value)
		other, ours := strings.CutPrefix(name, "bentray/")
		if ours && !slices.Contains(allowed, other) {
			t.Errorf("%s imports %s, which %s may not", path, name, room)
		}
	}
}
