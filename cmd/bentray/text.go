package main

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
)

// outcomeRow is one line of a table of outcomes.
type outcomeRow struct {
	name    string
	count   int64
	percent float64
}

// outcomeRows orders outcomes by count, the greatest first.
func outcomeRows(outcomes map[string]int64) []outcomeRow {
	var total int64
	for _, n := range outcomes {
		total += n
	}
	var rows []outcomeRow
	for name, n := range outcomes {
		rows = append(rows, outcomeRow{name, n, 100 * float64(n) / float64(total)})
	}
	slices.SortFunc(rows, func(a, b outcomeRow) int {
		return cmp.Or(cmp.Compare(b.count, a.count), cmp.Compare(a.name, b.name))
	})
	return rows
}

// grouped writes a count with a space between thousands.
func grouped(n int64) string {
	s := strconv.FormatInt(n, 10)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + " " + s[i:]
	}
	return s
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
