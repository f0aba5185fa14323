package pipeline

import (
	"fmt"
	"strconv"
	"strings"
	"time"

	"bentray/geo"
	"bentray/io/cloud"
)

// sheet is a small file that goes with clouds, by column name. Columns that the
// file does not have are nil.
type sheet struct {
	numbers map[string][]float64
	texts   map[string][]string
	utc     []float64 // of the column time, s since 1970
}

// sheetColumns says what is read of a sheet: columns that must be there, columns
// that may be, and texts and times that may be.
type sheetColumns struct{ needed, optional, texts []string }

// timeColumn is read as UTC, from numbers or RFC 3339 texts.
const timeColumn = "time"

// readSheet reads a sheet.
func (s *survey) readSheet(path string, want sheetColumns) (*sheet, error) {
	f, err := s.openBeside(path)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	columns := f.Columns()
	var read cloud.Request
	var numbers, texts []string
	add := func(name string, needed, text bool) error {
		i, err := cloud.Find(columns, name)
		switch {
		case err != nil:
			return err
		case i < 0 && needed:
			return missing(columns, name, "it is needed")
		case i < 0:
		case text:
			read.Texts, texts = append(read.Texts, i), append(texts, name)
		default:
			read.Numbers, numbers = append(read.Numbers, i), append(numbers, name)
			step, isLength := s.finestOf(name)
			read.Steps = append(read.Steps, step)
			if isLength {
				return checkLength(columns[i])
			}
		}
		return nil
	}
	for _, name := range want.needed {
		if err := add(name, true, name == timeColumn && isText(columns, name)); err != nil {
			return nil, err
		}
	}
	for _, name := range want.optional {
		if err := add(name, false, name == timeColumn && isText(columns, name)); err != nil {
			return nil, err
		}
	}
	for _, name := range want.texts {
		if err := add(name, false, true); err != nil {
			return nil, err
		}
	}
	n, t, err := cloud.ReadAll(f, read)
	if err != nil {
		return nil, err
	}
	tb := &sheet{numbers: map[string][]float64{}, texts: map[string][]string{}}
	for k, name := range numbers {
		tb.numbers[name] = n[k]
	}
	for k, name := range texts {
		tb.texts[name] = t[k]
	}
	return tb, tb.setTimes()
}

// finestOf returns the coarsest step that a column of a sheet may be stored in, in
// the job's unit, and whether it holds lengths; 0 is any.
func (s *survey) finestOf(name string) (step float64, isLength bool) {
	switch name {
	case "x", "y":
		return finestLength / s.plan, true
	case "z", "level", "depth":
		return finestLength / s.height, true
	}
	return 0, false
}

// isText tells a column that is stored as text: in CSV every one.
func isText(columns []cloud.Column, name string) bool {
	i, err := cloud.Find(columns, name)
	return err == nil && i >= 0 && (columns[i].Type == "text" || strings.HasPrefix(columns[i].Type, "BYTE_ARRAY"))
}

// setTimes reads the column time.
func (tb *sheet) setTimes() error {
	tb.utc = tb.numbers[timeColumn]
	for i, text := range tb.texts[timeColumn] {
		utc, err := parseUTC(text)
		if err != nil {
			return &geo.RecordError{Index: i, Err: err}
		}
		tb.utc = append(tb.utc, utc)
	}
	return nil
}

// parseUTC reads UTC seconds since 1970, or RFC 3339 with its offset.
func parseUTC(text string) (float64, error) {
	if seconds, err := strconv.ParseFloat(text, 64); err == nil {
		return seconds, nil
	}
	t, err := time.Parse(time.RFC3339, text)
	if err != nil {
		return 0, fmt.Errorf("time is %q, want UTC seconds since 1970, or a date and time with its offset such as 2026-05-01T10:30:00Z", text)
	}
	return float64(t.Unix()) + float64(t.Nanosecond())/1e9, nil
}
