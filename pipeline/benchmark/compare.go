package main

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"os"
	"slices"
	"strconv"
	"strings"
)

// tolerance is how far two numbers may lie apart: one unit of the last of four
// written decimals, which two roundings of nearly the same number can differ
// by, and the error of subtracting doubles of seven digits before the point.
const tolerance = 1e-4 + 1e-8

// table reads the rows of a CSV file without quotes, as both programs write it
// for this survey.
type table struct {
	path  string
	lines *bufio.Scanner
	names []string
	row   int64
	close func() error
}

func openTable(path string) (*table, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	t := &table{path: path, lines: bufio.NewScanner(f), close: f.Close}
	t.lines.Buffer(make([]byte, 1<<20), 1<<20)
	if !t.lines.Scan() {
		f.Close()
		return nil, fmt.Errorf("%s: has no header", path)
	}
	t.names = strings.Split(t.lines.Text(), ",")
	return t, nil
}

// skip passes n rows and returns io.EOF where there are fewer.
func (t *table) skip(n int64) error {
	for range n {
		if !t.lines.Scan() {
			if err := t.lines.Err(); err != nil {
				return fmt.Errorf("%s: %w", t.path, err)
			}
			return io.EOF
		}
		t.row++
	}
	return nil
}

// fields are those of the row passed last.
func (t *table) fields() ([]string, error) {
	f := strings.Split(t.lines.Text(), ",")
	if len(f) != len(t.names) {
		return nil, fmt.Errorf("%s: row %d: has %d fields, want %d", t.path, t.row, len(f), len(t.names))
	}
	return f, nil
}

// compare holds two outputs against each other: the same columns in any order,
// the same number of rows, and on every every-th row the same texts, and numbers
// within the tolerance. The column run is bentray's own. It returns the number
// of rows compared.
func compare(pathA, pathB string, every int64) (int64, error) {
	a, err := openTable(pathA)
	if err != nil {
		return 0, err
	}
	defer a.close()
	b, err := openTable(pathB)
	if err != nil {
		return 0, err
	}
	defer b.close()
	places, err := match(a, b)
	if err != nil {
		return 0, err
	}
	for compared := int64(0); ; compared++ {
		n := every
		if compared == 0 {
			n = 1 // the first row is one of the sample
		}
		endA, endB := a.skip(n), b.skip(n)
		switch {
		case endA == io.EOF && endB == io.EOF && a.row == b.row:
			return compared, nil
		case endA == io.EOF || endB == io.EOF:
			return compared, fmt.Errorf("%s and %s do not have the same number of rows: one ends at row %d, the other at %d or later",
				pathA, pathB, min(a.row, b.row), max(a.row, b.row))
		case endA != nil || endB != nil:
			return compared, firstError(endA, endB)
		}
		if err := compareRow(a, b, places); err != nil {
			return compared, err
		}
	}
}

func firstError(a, b error) error {
	if a != nil {
		return a
	}
	return b
}

// match returns the places of a's columns in b.
func match(a, b *table) ([]int, error) {
	if len(a.names) != len(b.names) {
		return nil, fmt.Errorf("%s has the columns %v, %s has %v", a.path, a.names, b.path, b.names)
	}
	places := make([]int, len(a.names))
	for i, name := range a.names {
		if places[i] = slices.Index(b.names, name); places[i] < 0 {
			return nil, fmt.Errorf("%s: has no column %s, which %s has", b.path, name, a.path)
		}
	}
	return places, nil
}

func compareRow(a, b *table, places []int) error {
	fa, err := a.fields()
	if err != nil {
		return err
	}
	fb, err := b.fields()
	if err != nil {
		return err
	}
	for i, name := range a.names {
		if name != "run" && !same(fa[i], fb[places[i]]) {
			return fmt.Errorf("row %d: %s is %q in %s, but %q in %s", a.row, name, fa[i], a.path, fb[places[i]], b.path)
		}
	}
	return nil
}

// same compares numbers by the tolerance and everything else by its text.
func same(a, b string) bool {
	va, errA := strconv.ParseFloat(a, 64)
	vb, errB := strconv.ParseFloat(b, 64)
	if errA != nil || errB != nil {
		return a == b
	}
	return math.Abs(va-vb) <= tolerance
}
