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
	text, cut, err := f.nextRows(append(b.text[:0], f.carry...))
	if err != nil {
		return err
	}
	b.line, b.counted, b.most = f.line, 0, blockRows
	if lines := bytes.Count(text[:cut], lineFeed); lines < blockRows {
		b.most = lines + 1
		f.line += int64(lines)
	} else {
		cut = f.sep.endOfRows(text[:cut], blockRows)
		f.line += int64(bytes.Count(text[:cut], lineFeed))
	}
	b.text = text[:cut]
	b.quoted = bytes.IndexByte(b.text, '"') >= 0
	f.carry = append(f.carry[:0], text[cut:]...)
	c.Consumed = f.consume(cut, len(text))
	return nil
}

// nextRows reads on until whole rows are there, of a block's size where they are
// not longer, and returns their length. Unless the file ended, a byte more is
// read than can be taken: so the last chunk is known to be the last.
func (f *File) nextRows(text []byte) (_ []byte, cut int, err error) {
	for want := f.blockSize; cut == 0; want += f.blockSize {
		var ended bool
		if text, ended, err = fill(f.text, text, want+1); err != nil {
			return nil, 0, f.readError(err)
		}
		if len(text) == 0 {
			return nil, 0, io.EOF
		}
		if cut, err = f.cut(text[:min(want, len(text))], ended && len(text) <= want); err != nil {
			return nil, 0, err
		}
	}
	return text, cut, nil
}

// consume returns the bytes of the file that go with the first bytes of the
// text at hand: in proportion where it is compressed, else as many, for then
// the text at hand is all that was read and not consumed.
func (f *File) consume(cut, length int) int64 {
	n := (f.source.done - f.consumed) * int64(f.ahead+cut) / int64(f.ahead+length)
	f.ahead = 0
	f.consumed += n
	return n
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
	end, open := f.sep.lastRowEnd(text)
	if ended && open < 0 {
		return len(text), nil
	}
	if end == 0 && (ended || len(text) > maxRow) {
		return 0, endlessRow(f.path, f.line, text, open, ended)
	}
	return end, nil
}

// endlessRow explains a row that does not end, or not within the limit. The
// text begins with that row, whose line number is given; open is its quote that
// is not closed, or -1.
func endlessRow(path string, line int64, text []byte, open int, ended bool) error {
	err := fmt.Errorf("has a quote that is not closed within %d MiB, want a closing quote", maxRow>>20)
	switch {
	case open < 0:
		open, err = 0, fmt.Errorf("begins a row of more than %d MiB, want shorter rows", maxRow>>20)
	case ended:
		err = errors.New("has a quote that is not closed, want a closing quote before the end of the file")
	}
	return &cloud.RowError{Path: path, Line: line + int64(bytes.Count(text[:open], lineFeed)), Err: err}
}
