package job

import (
	"cmp"
	"fmt"
	"maps"
	"slices"
	"strings"

	"github.com/bmatcuk/doublestar/v4"

	"bentray/io/cloud"
)

func (in *Input) check(f *faults) {
	f.require("input.files", `a list of patterns such as ["raw/**/*.csv"]`)
	in.checkFiles(f)
	f.oneOf("input.unit", in.Unit, Metre, Foot, SurveyFoot)
	f.oneOf("input.vertical_unit", in.VerticalUnit, Metre, Foot, SurveyFoot)
	f.oneOf("input.bad_rows", in.BadRows, Stop, Divert)
	f.oneOf("input.time", in.Time, GPSAdjusted, GPSWeek, UTC)
	in.checkWeek(f)
	in.checkColumns(f)
	in.CSV.check(f)
}

func (in *Input) checkFiles(f *faults) {
	if f.has("input.files") && len(in.Files) == 0 {
		f.add("input.files", "is empty, want at least one pattern")
	}
	for i, pattern := range in.Files {
		switch {
		case isBlank(pattern):
			f.add("input.files", "item %d is empty, want a pattern", i+1)
		case !doublestar.ValidatePattern(pattern):
			f.add("input.files", "item %d is %q, want a pattern whose brackets and braces are closed", i+1, pattern)
		}
	}
}

func (in *Input) checkWeek(f *faults) {
	if in.Time == GPSWeek {
		f.require("input.week", `a whole number from 1, because of time = "gps-week"`)
	} else {
		f.noEffect("input.week", fmt.Sprintf("with time = %q", in.Time), `use time = "gps-week"`)
	}
	if in.Week != nil && *in.Week < 1 {
		f.add("input.week", "is %d, want 1 or above, counted from 1980-01-06 without rollover", *in.Week)
	}
}

func (in *Input) checkColumns(f *faults) {
	const table = "input.columns."
	roleOf := map[string]string{}
	for _, role := range slices.Sorted(maps.Keys(in.Columns)) {
		column := in.Columns[role]
		other, taken := roleOf[column]
		switch {
		case f.isTold(table + role):
			continue
		case !slices.Contains(cloud.Roles, role):
			f.told[table+role] = true
			f.addAt(f.line(table+role), unknownRole(role, column))
			continue
		case isBlank(column):
			f.add(table+role, "is empty, want a column's name")
		case (role == "x" || role == "y") && cloud.IsGeographic(column):
			f.add(table+role, "is %q, which holds degrees, want a column of projected coordinates; project the cloud first", column)
		case taken:
			f.add(table+role, "is %q, which line %d has as %s, want one role for a column", column, f.line(table+other), other)
		}
		roleOf[column] = role
	}
	in.checkUnmapped(f)
}

// checkUnmapped reports a column mapped away from a coordinate of its own name
// which, unmapped, still needs it.
func (in *Input) checkUnmapped(f *faults) {
	for _, role := range slices.Sorted(maps.Keys(in.Columns)) {
		column := in.Columns[role]
		_, mapped := in.Columns[column]
		if slices.Contains([]string{"x", "y", "z"}, column) && !mapped {
			f.add("input.columns."+role, "is %q, which is also the column of %s, want one role for a column; name the column of %s too", column, column, column)
		}
	}
}

func unknownRole(role, column string) string {
	msg := fmt.Sprintf("unknown role %q in [input.columns]", role)
	if slices.Contains(cloud.Roles, column) {
		return fmt.Sprintf("%s; the role stands first: %s = %q", msg, column, role)
	}
	if near := nearest(role, cloud.Roles); near != "" {
		return fmt.Sprintf("%s; did you mean %q?", msg, near)
	}
	return fmt.Sprintf("%s, want %s", msg, anyOf(cloud.Roles))
}

func (c *CSV) check(f *faults) {
	const key = "input.csv.names"
	switch {
	case f.has(key) && len(c.Names) == 0:
		f.add(key, "is empty, want the columns' names from left to right")
	case f.has(key) && c.Header && !f.isTold("input.csv.header"):
		f.add(key, "is for files without a header line, but line %d has header = true; remove one of them", f.line("input.csv.header"))
	case !f.has(key) && !c.Header:
		f.add("input.csv.header", `is false, which needs names, such as names = ["x", "y", "z"]`)
	}
	first := map[string]int{}
	for i, name := range c.Names {
		switch {
		case isBlank(name):
			f.add(key, "item %d is empty, want a column's name", i+1)
		case first[name] > 0:
			f.add(key, "item %d is %q, as is item %d, want different names", i+1, name, first[name])
		}
		first[name] = cmp.Or(first[name], i+1)
	}
}

func (s *Select) check(f *faults) {
	if f.has("select") && len(s.Where) == 0 {
		f.add("select.where", "has no column, want lists of values by column, such as classification = [2]")
	}
	checkWhere(f, "select.where", s.Where)
}

// normalized sorts values, numbers first, and drops repeats.
func normalized(values []any) []any {
	slices.SortFunc(values, compareValues)
	return slices.Compact(values)
}

func compareValues(a, b any) int {
	m, aIsNumber := a.(float64)
	n, bIsNumber := b.(float64)
	switch {
	case aIsNumber && bIsNumber:
		return cmp.Compare(m, n)
	case aIsNumber:
		return -1
	case bIsNumber:
		return 1
	}
	return strings.Compare(a.(string), b.(string))
}
