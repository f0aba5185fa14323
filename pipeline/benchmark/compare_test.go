package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestCompare(t *testing.T) {
	const good = "x,outcome,run\n1.0000,corrected,a\n2.0000,corrected,a\n3.0000,dry,a\n"
	for _, c := range []struct {
		name, other string
		every, rows int64
		fault       string
	}{
		{"same", good, 1, 3, ""},
		{"columns in another order", "outcome,run,x\ncorrected,b,1\ncorrected,b,2.0001\ndry,b,3\n", 1, 3, ""},
		{"every second row", good, 2, 2, ""},
		{"number beyond the tolerance", strings.Replace(good, "2.0000", "2.0002", 1), 1, 0, `row 2: x is "2.0000"`},
		{"empty number", strings.Replace(good, "2.0000", "", 1), 1, 0, `but "" in`},
		{"NaN on one side", strings.Replace(good, "2.0000", "NaN", 1), 1, 0, `but "NaN" in`},
		{"other text", strings.Replace(good, "dry", "corrected", 1), 1, 0, `outcome is "dry"`},
		{"row missing", "x,outcome,run\n1,corrected,a\n2,corrected,a\n", 1, 0, "same number of rows"},
		{"row missing between samples", "x,outcome,run\n1,corrected,a\n2,corrected,a\n", 5, 0, "same number of rows"},
		{"column missing", "x,outcome\n1,corrected\n2,corrected\n3,dry\n", 1, 0, "has the columns"},
		{"column of another name", strings.Replace(good, "outcome", "fate", 1), 1, 0, "has no column outcome"},
		{"field missing", strings.Replace(good, ",dry", "", 1), 1, 0, "has 2 fields, want 3"},
		{"empty file", "", 1, 0, "has no header"},
	} {
		t.Run(c.name, func(t *testing.T) {
			a, b := file(t, "a.csv", good), file(t, "b.csv", c.other)
			rows, err := compare(a, b, c.every)
			switch {
			case c.fault == "" && (err != nil || rows != c.rows):
				t.Errorf("compared %d rows, %v; want %d and no error", rows, err, c.rows)
			case c.fault != "" && (err == nil || !strings.Contains(err.Error(), c.fault)):
				t.Errorf("error is %v, want one with %q", err, c.fault)
			}
		})
	}
}

func file(t *testing.T, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}
