package csvfile

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"slices"

	"bentray/io/cloud"
)

const (
	blockSize = 1 << 20  // bytes in a block
	blockRows = 32 << 10 // most rows in a block
	maxRow    = 16 << 20 // bytes read in search of a row's end before it is given up
)

// block is what a chunk keeps between the steps: whole rows as they stand in
// the file, and where their parts are.
type block struct {
	text    []byte
	counted int    // position that line belongs to
	line    int64  // line number there
	most    int    // rows at most
	quoted  bool   // has quotes
	fields  []span // of one row
	rows    []row
	tail    uint32 // begin of what stands behind the last row
	out     []byte
}

// row is where a row stands in a block: it begins with the empty lines before
// it, its text ends at end, and its line end at next.
type row struct {
	from, end, next uint32
	xyz             [3]span
}

// Next takes whole rows for a block of about a mebibyte. It fails where a quote
// is not closed, a row is too long, or the input cannot be read to its end.
func (f *File) Next(c *cloud.Chunk) error {
	b, ok := c.Format.(*block)
	if !ok {
		b = new(block)
		c.Format = b
	}
	text := append(b.text[:0], f.carry...)
	cut := 0
	for want := f.blockSize; cut == 0; want = len(text) + f.blockSize {
		var ended bool
		var err error
		if text, ended, err = fill(f.in, text, want); err != nil {
			return f.readError(err)
		}
		if len(text) == 0 {
			return io.EOF
		}
		if cut, err = f.cut(text, ended); err != nil {
			return err
		}
	}
	b.line, b.counted, b.most = f.line, 0, blockRows
	if lines := bytes.Count(text[:cut], lineFeed); lines < blockRows {
		b.most = lines + 1
		f.line += int64(lines)
	} else {
		cut = endOfRows(text[:cut], blockRows)
		f.line += int64(bytes.Count(text[:cut], lineFeed))
	}
	b.text = text[:cut]
	b.quoted = bytes.IndexByte(b.text, '"') >= 0
	f.carry = append(f.carry[:0], text[cut:]...)
	c.Consumed, f.consumed = f.source.done-f.consumed, f.source.done
	return nil
}

// fill reads until the text has the wanted length or its source ends.
func fill(r io.Reader, text []byte, want int) (_ []byte, ended bool, err error) {
	text = slices.Grow(text, max(0, want-len(text)))
	for len(text) < want {
		n, err := r.Read(text[len(text):want])
		text = text[:len(text)+n]
		if err == io.EOF {
			return text, true, nil
		}
		if err != nil {
			return text, false, err
		}
	}
	return text, false, nil
}

// cut returns the length of the whole rows in a text, 0 where none ends in it.
func (f *File) cut(text []byte, ended bool) (int, error) {
	quotes := bytes.Count(text, quotationMark)
	if ended && quotes%2 == 0 {
		return len(text), nil
	}
	end := lastRowEnd(text, quotes)
	if end == 0 && (ended || len(text) > maxRow) {
		return 0, f.endlessRow(text, f.line, ended)
	}
	return end, nil
}

// lastRowEnd returns the end of the last line that ends outside quotes, or 0.
func lastRowEnd(text []byte, quotes int) int {
	for {
		i := bytes.LastIndexByte(text, '\n')
		if i < 0 {
			return 0
		}
		quotes -= bytes.Count(text[i:], quotationMark)
		if quotes%2 == 0 {
			return i + 1
		}
		text = text[:i]
	}
}

// rowEnd returns where the row that begins at a position ends, its line end
// included, or -1.
func rowEnd(text []byte, begin int, quoted bool) int {
	open := false
	for end := begin; ; {
		i := bytes.IndexByte(text[end:], '\n')
		if i < 0 {
			return -1
		}
		if quoted && bytes.Count(text[end:end+i], quotationMark)%2 == 1 {
			open = !open
		}
		end += i + 1
		if !open {
			return end
		}
	}
}

// endOfRows returns the length of the first rows of a text, empty lines
// counted; all of it where it has no more.
func endOfRows(text []byte, rows int) int {
	end := 0
	for range rows {
		next := rowEnd(text, end, true)
		if next < 0 {
			return len(text)
		}
		end = next
	}
	return end
}

// endlessRow explains a row that does not end, or not within the limit. The
// text begins with that row, whose line number is given.
func (f *File) endlessRow(text []byte, line int64, ended bool) error {
	i := openQuote(text)
	err := fmt.Errorf("has a quote that is not closed within %d MiB, want a closing quote", maxRow>>20)
	switch {
	case i < 0:
		i, err = 0, fmt.Errorf("begins a row of more than %d MiB, want shorter rows", maxRow>>20)
	case ended:
		err = errors.New("has a quote that is not closed, want a closing quote before the end of the file")
	}
	return &cloud.RowError{Path: f.path, Line: line + int64(bytes.Count(text[:i], lineFeed)), Err: err}
}

// openQuote finds the quote that is to blame where a row does not end: the
// first that is not closed at the end of a field. Where all are, it returns -1.
func openQuote(text []byte) int {
	for begin := 0; ; {
		i := bytes.IndexByte(text[begin:], '"')
		if i < 0 {
			return -1
		}
		open := begin + i
		i = bytes.IndexByte(text[open+1:], '"')
		end := open + i + 2 // behind the closing quote
		if i < 0 || end < len(text) && !endsField(text[end]) {
			return open
		}
		begin = end
	}
}

// endsField tells whether this byte may stand behind a closing quote: any
// separator, a line end, or a quote that makes it a doubled one.
func endsField(c byte) bool { return bytes.IndexByte([]byte(",;\t \"\r\n"), c) >= 0 }
