package quality

import (
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// cut takes columns away.
func (s sheet) cut(from, to int) sheet {
	for i := range s {
		s[i] = slices.Delete(s[i], from, to)
	}
	return s
}

// rename gives a column another name.
func (s sheet) rename(from, to string) sheet {
	s[0][s.column(from)] = to
	return s
}

// exchange swaps two columns.
func (s sheet) exchange(a, b string) sheet {
	i, k := s.column(a), s.column(b)
	for _, row := range s {
		row[i], row[k] = row[k], row[i]
	}
	return s
}

// TestColumns finds columns that are missing, added, renamed or in another place; the
// others are compared all the same.
func TestColumns(t *testing.T) {
	raw, corrected := scene(50)
	for _, c := range []struct {
		name    string
		do      func(sheet) sheet
		columns []string
		says    []string
	}{
		{"missing", func(s sheet) sheet { return s.cut(3, 4) }, []string{"intensity"}, []string{`column "intensity" is missing`}},
		{"renamed", func(s sheet) sheet { return s.rename("intensity", "strength") }, []string{"intensity", "strength"}, []string{`column "strength" is not in the raw cloud`, `column "intensity" is missing`}},
		{"moved", func(s sheet) sheet { return s.exchange("intensity", "label") }, []string{"point_source_id", "intensity"}, []string{"want its place in the raw cloud"}},
	} {
		for _, format := range formats {
			r := diffSheets(t, format, raw, c.do(corrected.clone()), Options{})
			if r.Holds || !maps.Equal(r.FindingCounts, map[string]int64{KindColumn: int64(len(c.columns))}) {
				t.Errorf("%s, %s: holds %v, %v: %v", c.name, format, r.Holds, r.FindingCounts, r.Findings)
			}
			for _, name := range c.columns {
				if !slices.Contains(r.ColumnsChanged, name) {
					t.Errorf("%s, %s: columns changed %q, want %q", c.name, format, r.ColumnsChanged, c.columns)
				}
			}
			for _, says := range c.says {
				if !slices.ContainsFunc(r.Findings, func(f Finding) bool { return strings.Contains(f.Text, says) }) {
					t.Errorf("%s, %s: %v, want %s", c.name, format, r.Findings, says)
				}
			}
		}
	}
}

// A Parquet column of another type is named, and not compared.
func TestColumnType(t *testing.T) {
	raw, corrected := scene(50)
	columns := raw.columns(t)
	columns[raw.column("intensity")].Values = make([]int32, 50)
	folder := t.TempDir()
	rawPath := writeFile(t, filepath.Join(folder, "raw", "a.parquet"), parquetOf(t, 0, columns))
	r := diffFolders(t, rawPath, corrected.write(t, filepath.Join(folder, "true", "a.parquet")), Options{})
	if r.Holds || len(r.Findings) != 1 || r.Findings[0].Text != `column "intensity" is stored as DOUBLE, want INT32 as in the raw cloud` {
		t.Errorf("holds %v: %v", r.Holds, r.Findings)
	}
}
