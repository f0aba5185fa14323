package quality

import (
	"maps"
	"slices"
	"strings"
	"testing"
)

func TestUnchangedHolds(t *testing.T) {
	raw, corrected := scene(3000)
	for _, format := range formats {
		r := diffSheets(t, format, raw, corrected, Options{})
		if !r.Holds || r.Rows != 3000 || r.RowsRaw != 3000 || len(r.ColumnsChanged) > 0 {
			t.Errorf("%s: holds %v, %d of %d rows, changed %q: %v", format, r.Holds, r.Rows, r.RowsRaw, r.ColumnsChanged, r.Findings)
		}
		if want := map[string]int64{"corrected": 2700, "dry": 300}; !maps.Equal(r.Outcomes, want) {
			t.Errorf("%s: outcomes %v, want %v", format, r.Outcomes, want)
		}
	}
}

// damage is one that a corrected cloud may have, and what must be said of it.
type damage struct {
	name    string
	do      func(sheet) sheet
	counts  map[string]int64
	first   Finding // without File and Text
	says    string  // in its text
	columns []string
}

func without(s sheet, row, rows int) sheet { return slices.Delete(s, row, row+rows) }

func swap(s sheet, i, k int) sheet {
	s[i], s[k] = s[k], s[i]
	return s
}

var damages = []damage{
	{
		"a dropped row", func(s sheet) sheet { return without(s, 1207, 1) },
		map[string]int64{KindDropped: 1},
		Finding{Kind: KindDropped, RawRow: 1207},
		"row 1207 of the raw cloud is missing", nil,
	},
	{
		"dropped rows", func(s sheet) sheet { return without(s, 1207, 300) },
		map[string]int64{KindDropped: 300},
		Finding{Kind: KindDropped, RawRow: 1207},
		"row 1207 of the raw cloud", nil,
	},
	{
		"more rows dropped than the window has", func(s sheet) sheet { return without(s, 1207, 1500) },
		map[string]int64{KindDropped: 1500},
		Finding{Kind: KindDropped, RawRow: 1207},
		"row 1207 of the raw cloud", nil,
	},
	{
		"more rows of elsewhere than the window has", func(s sheet) sheet { return slices.Insert(s, 1207, slices.Clone(s[100:1100])...) },
		map[string]int64{KindInserted: 1000},
		Finding{Kind: KindInserted, Row: 1207},
		"row 1207 is not in the raw cloud", nil,
	},
	{
		"the last rows dropped", func(s sheet) sheet { return s[:len(s)-2] },
		map[string]int64{KindDropped: 2},
		Finding{Kind: KindDropped, RawRow: 2999},
		"row 2999 of the raw cloud", nil,
	},
	{
		"a doubled row", func(s sheet) sheet { return slices.Insert(s, 851, s[850]) },
		map[string]int64{KindDoubled: 1},
		Finding{Kind: KindDoubled, Row: 851},
		"row 851 repeats", nil,
	},
	{
		"the last row doubled", func(s sheet) sheet { return append(s, s[3000]) },
		map[string]int64{KindDoubled: 1},
		Finding{Kind: KindDoubled, Row: 3001},
		"row 3001 repeats", nil,
	},
	{
		"a row of elsewhere", func(s sheet) sheet { return slices.Insert(s, 851, s[20]) },
		map[string]int64{KindInserted: 1},
		Finding{Kind: KindInserted, Row: 851},
		"row 851 is not in the raw cloud", nil,
	},
	{
		"neighbours swapped", func(s sheet) sheet { return swap(s, 700, 701) },
		map[string]int64{KindSwapped: 1},
		Finding{Kind: KindSwapped, RawRow: 700, Row: 700},
		"rows 700 and 701 are swapped", nil,
	},
	{
		"the last rows swapped", func(s sheet) sheet { return swap(s, 2999, 3000) },
		map[string]int64{KindSwapped: 1},
		Finding{Kind: KindSwapped, RawRow: 2999, Row: 2999},
		"rows 2999 and 3000 are swapped", nil,
	},
	{
		"rows far apart swapped", func(s sheet) sheet { return swap(s, 10, 310) },
		map[string]int64{KindSwapped: 1},
		Finding{Kind: KindSwapped, RawRow: 10, Row: 10},
		"rows 10 and 310 are swapped", nil,
	},
	{
		"an untouched value", func(s sheet) sheet { s.set(33, "intensity", "4001"); return s },
		map[string]int64{KindChanged: 1},
		Finding{Kind: KindChanged, RawRow: 33, Row: 33, Column: "intensity"},
		"row 33: intensity is",
		[]string{"intensity"},
	},
	{
		"an untouched text", func(s sheet) sheet { s.set(3000, "label", "q"); return s },
		map[string]int64{KindChanged: 1},
		Finding{Kind: KindChanged, RawRow: 3000, Row: 3000, Column: "label", Got: `"q"`, Want: `"p2999"`},
		`label is "q", want "p2999"`,
		[]string{"label"},
	},
	{
		"a letter over to the next row", func(s sheet) sheet {
			s.set(1000, "label", "p99")
			s.set(1001, "label", "9p1000")
			return s
		},
		map[string]int64{KindChanged: 2},
		Finding{Kind: KindChanged, RawRow: 1000, Row: 1000, Column: "label", Got: `"p99"`, Want: `"p999"`},
		`label is "p99", want "p999"`,
		[]string{"label"},
	},
	{
		"a raw coordinate", func(s sheet) sheet { s.set(1, "y_raw", "7000000.5"); return s },
		map[string]int64{KindChanged: 1},
		Finding{Kind: KindChanged, RawRow: 1, Row: 1, Column: "y_raw"},
		"y_raw is",
		[]string{"y_raw"},
	},
	{
		"a point moved in height", func(s sheet) sheet { s.set(55, "z", "-3"); return s },
		map[string]int64{KindMoved: 1},
		Finding{Kind: KindMoved, Row: 55, Column: "z", Got: "-3"},
		"water_level minus depth: one of the three was changed", nil,
	},
	{
		"a corrected height blank", func(s sheet) sheet { s.set(55, "z", ""); return s },
		map[string]int64{KindMoved: 1},
		Finding{Kind: KindMoved, Row: 55, Column: "z", Got: "NaN"},
		"want a number, since the point is corrected", nil,
	},
	{
		"a corrected easting blank", func(s sheet) sheet { s.set(55, "x", ""); return s },
		map[string]int64{KindMoved: 1},
		Finding{Kind: KindMoved, Row: 55, Column: "x", Got: "NaN"},
		"want a number, since the point is corrected", nil,
	},
	{
		"a depth blank", func(s sheet) sheet { s.set(55, "depth", ""); s.set(55, "z", "-3"); return s },
		map[string]int64{KindMoved: 1},
		Finding{Kind: KindMoved, Row: 55, Column: "depth", Got: "NaN"},
		"want a number, since the point is corrected", nil,
	},
	{
		"a level blank", func(s sheet) sheet { s.set(55, "water_level", ""); return s },
		map[string]int64{KindMoved: 1},
		Finding{Kind: KindMoved, Row: 55, Column: "water_level", Got: "NaN"},
		"want a number, since the point is corrected", nil,
	},
	{
		"a dry point moved", func(s sheet) sheet { s.set(60, "x", "500000.125"); return s },
		map[string]int64{KindMoved: 1},
		Finding{Kind: KindMoved, Row: 60, Column: "x", Got: "500000.125"},
		"the point is not corrected", nil,
	},
	{
		"two things at once", func(s sheet) sheet { s.set(2000, "intensity", "4001"); return without(s, 90, 1) },
		map[string]int64{KindDropped: 1, KindChanged: 1},
		Finding{Kind: KindDropped, RawRow: 90},
		"row 90",
		[]string{"intensity"},
	},
}

// TestDamage finds and names each kind of damage.
func TestDamage(t *testing.T) {
	raw, corrected := scene(3000)
	for _, format := range formats {
		for _, d := range damages {
			t.Run(format+"/"+d.name, func(t *testing.T) {
				damaged := d.do(corrected.clone())
				r := diffSheets(t, format, raw, damaged, Options{})
				checkDamage(t, r, d)
			})
		}
	}
}

func checkDamage(t *testing.T, r *Report, d damage) {
	t.Helper()
	if r.Holds || !maps.Equal(r.FindingCounts, d.counts) {
		t.Fatalf("holds %v, findings %v, want %v\n%v", r.Holds, r.FindingCounts, d.counts, r.Findings)
	}
	if !slices.Equal(r.ColumnsChanged, d.columns) && len(r.ColumnsChanged)+len(d.columns) > 0 {
		t.Errorf("columns changed %q, want %q", r.ColumnsChanged, d.columns)
	}
	f, want := r.Findings[0], d.first
	if f.Kind != want.Kind || f.RawRow != want.RawRow || f.Row != want.Row || f.Column != want.Column || want.Got != "" && f.Got != want.Got || want.Want != "" && f.Want != want.Want {
		t.Errorf("first finding is %+v, want %+v", f, want)
	}
	if !strings.Contains(f.Text, d.says) || !strings.HasPrefix(f.File, "a.") {
		t.Errorf("it says %q of %q, want %q", f.Text, f.File, d.says)
	}
}

// A column that differs everywhere is told row by row, in bounded time, and the first
// findings are kept.
func TestWholeColumnChanged(t *testing.T) {
	raw, corrected := scene(3000)
	for _, name := range []string{"intensity", "x_raw"} {
		for i := range corrected[1:] {
			corrected[1+i][corrected.column(name)] += "1"
		}
	}
	for _, format := range formats {
		r := diffSheets(t, format, raw, corrected, Options{})
		if r.FindingCounts[KindChanged] != 6000 || len(r.Findings) != maxFindings || r.Rows != 3000 {
			t.Errorf("%s: %v, %d kept, %d rows", format, r.FindingCounts, len(r.Findings), r.Rows)
		}
		if !slices.Equal(r.ColumnsChanged, []string{"intensity", "x_raw"}) {
			t.Errorf("%s: columns changed %q", format, r.ColumnsChanged)
		}
	}
}
