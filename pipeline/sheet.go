package pipeline

import (
	"errors"
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

// sheetReader asks for the columns of a sheet.
type sheetReader struct {
	*survey
	columns []cloud.Column
	request cloud.Request
	numbers []string // names, in the order of the request
	texts   []string
}

// readSheet reads a sheet.
func (s *survey) readSheet(path string, want sheetColumns) (*sheet, error) {
	f, err := s.openBeside(path)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	r := &sheetReader{survey: s, columns: f.Columns()}
	if err := r.find(want); err != nil {
		return nil, err
	}
	numbers, texts, err := cloud.ReadAll(f, r.request)
	if err != nil {
		return nil, err
	}
	tb := &sheet{numbers: map[string][]float64{}, texts: map[string][]string{}}
	for k, name := range r.numbers {
		tb.numbers[name] = numbers[k]
	}
	for k, name := range r.texts {
		tb.texts[name] = texts[k]
	}
	return tb, tb.setTimes()
}

// find asks for the columns that are wanted.
func (r *sheetReader) find(want sheetColumns) error {
	for _, name := range want.needed {
		if err := r.number(name, true); err != nil {
			return err
		}
	}
	for _, name := range want.optional {
		if err := r.number(name, false); err != nil {
			return err
		}
	}
	for _, name := range want.texts {
		i, err := cloud.Find(r.columns, name)
		if err != nil {
			return err
		}
		if i >= 0 {
			r.text(i, name, nil)
		}
	}
	return nil
}

// number asks for a column of numbers or, for times, of numbers or texts.
func (r *sheetReader) number(name string, needed bool) error {
	i, err := cloud.Find(r.columns, name)
	if err != nil {
		return err
	}
	if name == timeColumn {
		if err := checkTimes(r.columns, i); err != nil {
			return err
		}
	}
	switch {
	case i < 0 && needed:
		return missing(r.columns, name, "it is needed")
	case i < 0:
		return nil
	case name == timeColumn && isText(r.columns[i]):
		r.text(i, name, checkUTC)
		return nil
	}
	step, isLength := r.finestOf(name)
	r.request.Numbers, r.request.Steps, r.numbers = append(r.request.Numbers, i), append(r.request.Steps, step), append(r.numbers, name)
	if isLength {
		return checkLength(r.columns[i])
	}
	return nil
}

// text asks for a column of texts, which check looks at where it is not nil.
func (r *sheetReader) text(i int, name string, check func([]byte) error) {
	r.request.Texts, r.request.Checks, r.texts = append(r.request.Texts, i), append(r.request.Checks, check), append(r.texts, name)
}

// checkTimes refuses times that are not UTC: those of the column at a position, or a
// column of GPS times where there is none (-1).
func checkTimes(columns []cloud.Column, i int) error {
	if i >= 0 {
		if isLocalTime(columns[i]) {
			return fmt.Errorf("times in column %q are stored without a time zone (%s), want UTC; store them as adjusted to UTC, or as UTC seconds since 1970", columns[i].Name, columns[i].Type)
		}
		return nil
	}
	if gps, err := cloud.Find(columns, "gps_time"); err == nil && gps >= 0 {
		return fmt.Errorf("times in column %q are not read in a file beside the clouds, want a column %q in UTC (seconds since 1970, or dates with their offset); rename what holds at all times", columns[gps].Name, timeColumn)
	}
	return nil
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
func isText(c cloud.Column) bool { return c.Type == "text" || strings.HasPrefix(c.Type, "BYTE_ARRAY") }

// setTimes reads the column time, whose texts checkUTC has passed.
func (tb *sheet) setTimes() error {
	tb.utc = tb.numbers[timeColumn]
	for _, text := range tb.texts[timeColumn] {
		utc, err := parseUTC(text)
		if err != nil {
			return err
		}
		tb.utc = append(tb.utc, utc)
	}
	return nil
}

// checkUTC tells what is wrong with a time.
func checkUTC(text []byte) error {
	_, err := parseUTC(string(text))
	return err
}

// parseUTC reads UTC seconds since 1970, or RFC 3339 with its offset.
func parseUTC(text string) (float64, error) {
	if seconds, err := strconv.ParseFloat(text, 64); err == nil && seconds-seconds == 0 {
		return seconds, nil
	}
	t, err := time.Parse(time.RFC3339, text)
	if err != nil {
		return 0, fmt.Errorf("is %q, want UTC seconds since 1970, or a date and time with its offset such as 2026-05-01T10:30:00Z", text)
	}
	return float64(t.Unix()) + float64(t.Nanosecond())/1e9, nil
}

// atLine names the line of a wrong record of a file that has lines, in place of its
// number.
func (s *survey) atLine(path string, err error) error {
	var bad *geo.RecordError
	if !errors.As(err, &bad) {
		return err
	}
	if line := s.lineOf(path, bad.Index); line > 0 {
		return fmt.Errorf("line %d: %w", line, bad.Err)
	}
	return err
}

// lineOf returns the line on which a record begins, counted from 0, or 0 where the
// file has no lines.
func (s *survey) lineOf(path string, record int) int64 {
	f, err := s.openBeside(path)
	if err != nil {
		return 0
	}
	defer f.Close()
	rows, found := 0, errors.New("found")
	count := func([]byte) error {
		if rows++; rows > record {
			return found
		}
		return nil
	}
	_, _, err = cloud.ReadAll(f, cloud.Request{Texts: []int{0}, Checks: []func([]byte) error{count}})
	var at *cloud.RowError
	if errors.As(err, &at) && errors.Is(err, found) {
		return at.Line
	}
	return 0
}
