package csvfile

import (
	"bytes"
	"fmt"
)

const (
	sampleRows = 20       // rows that the separator is found from
	sampleSize = 64 << 10 // bytes read for them at first
)

// sample is the beginning of a file.
type sample struct {
	preamble  []byte
	firstLine int64   // line number of the first row
	text      []byte  // what was read behind the preamble
	ended     bool    // the file ends there
	rows      samples // first rows of it
}

// readSample reads on until the sample has its rows, or the file ends. Beyond a
// block it is enough that one candidate has them: to another, a quote may have
// opened that is never closed.
func (f *File) readSample() (s sample, err error) {
	var text []byte
	for size := sampleSize; ; size *= 2 {
		var ended bool
		if text, ended, err = fill(f.text, text, size); err != nil {
			return s, f.readError(err)
		}
		if err := checkText(f.path, text); err != nil {
			return s, err
		}
		s = takeSample(text, ended)
		full := s.full()
		if ended || full == len(candidates) || full > 0 && size >= blockSize || size >= maxRow {
			return s, f.checkSample(s)
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

// checkSample refuses a file without rows.
func (f *File) checkSample(s sample) error {
	switch {
	case hasLoneReturns(s.preamble):
		return errLoneReturns(f.path)
	case len(s.text) > 0:
		return nil
	case len(bytes.TrimPrefix(s.preamble, byteOrderMark)) == 0:
		return fmt.Errorf("%s is empty, want a header line", f.path)
	}
	return fmt.Errorf("%s has only comments and empty lines, want a header line", f.path)
}

func errLoneReturns(path string) error {
	return fmt.Errorf("%s has lines that end in a carriage return alone, want LF or CR LF; convert its line ends first", path)
}

// takeSample parts the beginning of a file in what stands before the first row
// and rows.
func takeSample(text []byte, ended bool) sample {
	at := 0
	if bytes.HasPrefix(text, byteOrderMark) {
		at = len(byteOrderMark)
	}
	s := sample{firstLine: 1, ended: ended}
	for at < len(text) {
		line := firstLine(text[at:])
		if end := withoutEnd(line); !isComment(end) && len(trim(end)) > 0 {
			break
		}
		at += len(line)
		s.firstLine++
	}
	s.preamble, s.text = text[:at], text[at:]
	for k, sep := range candidates {
		s.rows[k] = sep.firstRows(s.text, sampleRows, ended)
	}
	return s
}

// full returns how many candidates have their rows.
func (s *sample) full() (n int) {
	for _, rows := range s.rows {
		if len(rows) == sampleRows {
			n++
		}
	}
	return n
}

// firstLine returns the text up to its first line feed.
func firstLine(text []byte) []byte {
	if i := bytes.IndexByte(text, '\n'); i >= 0 {
		return text[:i+1]
	}
	return text
}
