package csvfile

import "bytes"

// opens tells whether the quote at a position that is outside quotes begins a
// field; blanks may stand before it. The text begins with a row.
func (s separator) opens(text []byte, quote int) bool {
	i := quote
	for i > 0 && isBlank(text[i-1]) && !s.parts(text[i-1]) {
		i--
	}
	return i == 0 || text[i-1] == '\n' || s.parts(text[i-1])
}

// parts tells whether a byte outside quotes separates two fields.
func (s separator) parts(c byte) bool {
	return c == byte(s) || s == blanks && c == '\t'
}

// nextOpening finds the first quote that begins a field, from a position outside
// quotes on, or -1.
func (s separator) nextOpening(text []byte, at int) int {
	for {
		i := bytes.IndexByte(text[at:], '"')
		if i < 0 {
			return -1
		}
		at += i
		if s.opens(text, at) {
			return at
		}
		at++
	}
}

// closing finds the quote that closes the one at open, or -1: the next that is
// not doubled, whether or not the field ends there.
func closing(text []byte, open int) int {
	for at := open + 1; ; {
		i := bytes.IndexByte(text[at:], '"')
		if i < 0 {
			return -1
		}
		at += i
		if at+1 == len(text) || text[at+1] != '"' {
			return at
		}
		at += 2
	}
}

// rowEnd returns where the first row of a text ends, its line end included, or
// -1 where the text ends before; open is the quote that is not closed, or -1.
func (s separator) rowEnd(text []byte) (end, open int) {
	for at := 0; ; {
		line := bytes.IndexByte(text[at:], '\n')
		end := at + line
		if line < 0 {
			end = len(text)
		}
		open = s.nextOpening(text[:end], at)
		switch {
		case open < 0 && line < 0:
			return -1, -1
		case open < 0:
			return end + 1, -1
		}
		quote := closing(text, open)
		if quote < 0 {
			return -1, open
		}
		at = quote + 1
	}
}

// lastRowEnd returns where the last whole row of a text ends, or 0; open is the
// quote that is not closed, or -1.
func (s separator) lastRowEnd(text []byte) (end, open int) {
	for at := 0; ; {
		open = s.nextOpening(text, at)
		outside := text[at:]
		if open >= 0 {
			outside = text[at:open]
		}
		if i := bytes.LastIndexByte(outside, '\n'); i >= 0 {
			end = at + i + 1
		}
		if open < 0 {
			return end, -1
		}
		quote := closing(text, open)
		if quote < 0 {
			return end, open
		}
		at = quote + 1
	}
}

// firstRows returns the first rows of a text that are not empty, without their
// line ends. Unless the file ended, the last row may be a part of one, and is
// none.
func (s separator) firstRows(text []byte, most int, ended bool) (rows [][]byte) {
	for len(text) > 0 && len(rows) < most {
		end, open := s.rowEnd(text)
		if end < 0 && ended && open < 0 {
			end = len(text)
		}
		if end < 0 {
			break
		}
		if row := withoutEnd(text[:end]); len(row) > 0 {
			rows = append(rows, row)
		}
		text = text[end:]
	}
	return rows
}

// endOfRows returns the length of the first rows of a text, empty lines
// counted; all of it where it has no more.
func (s separator) endOfRows(text []byte, rows int) int {
	at := 0
	for range rows {
		end, _ := s.rowEnd(text[at:])
		if end < 0 {
			return len(text)
		}
		at += end
	}
	return at
}
