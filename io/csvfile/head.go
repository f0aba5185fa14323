package csvfile

import (
	"bytes"
	"errors"
	"fmt"
	"math"

	"bentray/io/cloud"
)

var (
	lineFeed       = []byte("\n")
	carriageReturn = []byte("\r")
	byteOrderMark  = []byte("\xef\xbb\xbf")
)

// head is what is known of a file before its rows.
type head struct {
	sep      separator
	preamble []byte   // what stands before the header: byte order mark, comments, empty lines
	header   []byte   // the header line without its line end; made up where the file has none
	lineEnd  []byte   // behind the header; empty where the file ends there
	names    []string // of the columns
	named    bool     // the file has no header line
}

func isComment(line []byte) bool {
	return bytes.HasPrefix(line, []byte("#")) || bytes.HasPrefix(line, []byte("//"))
}

// withoutEnd cuts the line end off a line.
func withoutEnd(line []byte) []byte {
	if bytes.HasSuffix(line, lineFeed) {
		line = bytes.TrimSuffix(line[:len(line)-1], carriageReturn)
	}
	return line
}

// hasLoneReturn tells whether a carriage return outside quotes stands before
// something else than a line feed. Rows with a quote within a field may get
// either answer; they are refused anyway.
func hasLoneReturn(text []byte) bool {
	inside := false
	for i, c := range text {
		switch {
		case c == '"':
			inside = !inside
		case c == '\r' && !inside && (i+1 == len(text) || text[i+1] != '\n'):
			return true
		}
	}
	return false
}

// ErrNoHeader is wrapped in the error of Open where the first row has only
// numbers, and Options.Names does not say that it is no header.
var ErrNoHeader = errors.New("has only numbers, want a header line")

// newHead finds separator and columns; names is nil where the first row is the
// header.
func newHead(path string, s sample, names []string) (head, error) {
	k := detect(&s.rows, len(names))
	row := withoutEnd(firstLine(s.text))
	if k >= 0 {
		row = s.rows[k][0]
	}
	if hasLoneReturn(row) {
		return head{}, errLoneReturns(path)
	}
	if k < 0 {
		return head{}, noSeparator(path, s)
	}
	behind := s.text[len(row):]
	h := head{sep: candidates[k], preamble: s.preamble, lineEnd: behind[:bytes.IndexByte(behind, '\n')+1], names: names, named: len(names) > 0}
	err := h.setHeader(row)
	if err != nil {
		err = &cloud.RowError{Path: path, Line: s.firstLine, Err: err}
	}
	return h, err
}

// noSeparator explains why no candidate parts the first row: for one of them
// that row may not end.
func noSeparator(path string, s sample) error {
	for k, rows := range s.rows {
		if len(rows) == 0 {
			_, open := candidates[k].rowEnd(s.text)
			return endlessRow(path, s.firstLine, s.text, open, s.ended)
		}
	}
	return &cloud.RowError{Path: path, Line: s.firstLine, Err: errors.New("has one field, want at least two, separated by commas, semicolons, tabs or blanks")}
}

// setHeader takes the first row as the header, or makes one up where the file
// has none.
func (h *head) setHeader(row []byte) error {
	count, stray := h.sep.split(row, nil)
	if h.named {
		if stray < 0 && count != len(h.names) {
			return fmt.Errorf("has %d fields, want %d as in [input.csv] names", count, len(h.names))
		}
		h.header = h.sep.appendFields(nil, h.names)
		if len(h.lineEnd) == 0 {
			h.lineEnd = lineFeed
		}
		return nil
	}
	if stray >= 0 {
		return errStrayQuote
	}
	fields := make([]span, count)
	h.sep.split(row, fields)
	if onlyNumbers(row, fields) {
		return ErrNoHeader
	}
	h.header = row
	for _, field := range fields {
		h.names = append(h.names, string(appendContent(nil, field.of(row))))
	}
	return nil
}

// onlyNumbers tells whether every field is a number or empty, and one at least
// a finite number.
func onlyNumbers(row []byte, fields []span) bool {
	finite := false
	for _, field := range fields {
		v, ok := parseNumber(field.of(row))
		if !ok {
			return false
		}
		finite = finite || !math.IsNaN(v) && !math.IsInf(v, 0)
	}
	return finite
}
