package csvfile

import (
	"bytes"
	"errors"
	"fmt"
	"math"

	"bentray/io/cloud"
)

const (
	sampleRows = 20       // rows that the separator is found from
	sampleSize = 64 << 10 // bytes read for them at first
)

var (
	lineFeed       = []byte("\n")
	carriageReturn = []byte("\r")
	quotationMark  = []byte(`"`)
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

// sample is the beginning of a file.
type sample struct {
	preamble  []byte
	firstLine int64    // line number of the first row
	rows      [][]byte // first rows that are not empty, without line ends
	lineEnd   []byte   // of the first row
	rest      []byte   // text from the first row that does not end in the sample
}

// readSample reads on until the sample has its rows, or the file ends.
func (f *File) readSample() (text []byte, s sample, err error) {
	for size := sampleSize; ; size *= 2 {
		var ended bool
		if text, ended, err = fill(f.text, text, size); err != nil {
			return nil, s, f.readError(err)
		}
		if err := checkText(f.path, text); err != nil {
			return nil, s, err
		}
		s = takeSample(text, ended)
		if ended || len(s.rows) == sampleRows || size >= maxRow {
			return text, s, f.checkSample(s, ended)
		}
	}
}

// checkText refuses what is not text in UTF-8 or a code that has ASCII in it.
func checkText(path string, text []byte) error {
	switch {
	case bytes.HasPrefix(text, []byte("\xff\xfe")), bytes.HasPrefix(text, []byte("\xfe\xff")):
		return fmt.Errorf("%s is UTF-16 text, want UTF-8; convert it first", path)
	case bytes.IndexByte(text[:min(len(text), sampleSize)], 0) >= 0:
		return fmt.Errorf("%s has NUL bytes near its start, want UTF-8 text; convert it first if it is UTF-16, else it is no text file", path)
	}
	return nil
}

// checkSample refuses a file without rows, or with a first row that does not
// end.
func (f *File) checkSample(s sample, ended bool) error {
	if hasLoneReturns(s.preamble) || len(s.rows) > 0 && hasLoneReturn(s.rows[0]) || len(s.rows) == 0 && hasLoneReturn(s.rest) {
		return fmt.Errorf("%s has lines that end in a carriage return alone, want LF or CR LF; convert its line ends first", f.path)
	}
	switch {
	case len(s.rows) > 0:
		return nil
	case len(s.rest) > 0:
		return f.endlessRow(s.rest, s.firstLine, ended)
	case len(bytes.TrimPrefix(s.preamble, byteOrderMark)) == 0:
		return fmt.Errorf("%s is empty, want a header line", f.path)
	}
	return fmt.Errorf("%s has only comments and empty lines, want a header line", f.path)
}

// takeSample parts the beginning of a file in lines. Unless the file ended, the
// last line may be a part of one, and is no row.
func takeSample(text []byte, ended bool) (s sample) {
	at := 0
	if bytes.HasPrefix(text, byteOrderMark) {
		at = len(byteOrderMark)
	}
	s.firstLine = 1
	for at < len(text) {
		end := len(text)
		if i := bytes.IndexByte(text[at:], '\n'); i >= 0 {
			end = at + i + 1
		}
		if line := withoutEnd(text[at:end]); !isComment(line) && len(trim(line)) > 0 {
			break
		}
		at = end
		s.firstLine++
	}
	s.preamble = text[:at]
	for at < len(text) && len(s.rows) < sampleRows {
		end := rowEnd(text, at, true)
		if end < 0 && ended && bytes.Count(text[at:], quotationMark)%2 == 0 {
			end = len(text)
		}
		if end < 0 {
			break
		}
		row := withoutEnd(text[at:end])
		if len(s.rows) == 0 {
			s.lineEnd = text[at+len(row) : end]
		}
		if len(row) > 0 {
			s.rows = append(s.rows, row)
		}
		at = end
	}
	s.rest = text[at:]
	return s
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
// something else than a line feed.
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

// newHead finds separator and columns; names is nil where the first row is the
// header.
func newHead(path string, s sample, names []string) (head, error) {
	h := head{sep: detect(s.rows, len(names)), preamble: s.preamble, lineEnd: s.lineEnd, names: names, named: len(names) > 0}
	refuse := func(err error) (head, error) {
		return h, &cloud.RowError{Path: path, Line: s.firstLine, Err: err}
	}
	if h.sep == 0 {
		return refuse(errors.New("has one field, want at least two, separated by commas, semicolons, tabs or blanks"))
	}
	fields := make([]span, h.sep.split(s.rows[0], nil))
	h.sep.split(s.rows[0], fields)
	if h.named {
		if len(fields) != len(names) {
			return refuse(fmt.Errorf("has %d fields, want %d as in [input.csv] names", len(fields), len(names)))
		}
		h.header = h.sep.appendFields(nil, names)
		if len(h.lineEnd) == 0 {
			h.lineEnd = lineFeed
		}
		return h, nil
	}
	h.header = s.rows[0]
	if onlyNumbers(h.header, fields) {
		return refuse(errors.New("has only numbers, want a header line; name the columns in [input.csv] names"))
	}
	for _, field := range fields {
		h.names = append(h.names, string(appendContent(nil, field.of(h.header))))
	}
	return h, nil
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
