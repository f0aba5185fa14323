package parquetfile

import (
	"fmt"
	"io"
	"math"

	"bentray/io/cloud"
)

// null is what a null becomes: a NaN with a mark of its own ("null" in ASCII),
// so that coordinates which are not replaced stay null where they were null and
// NaN where they were NaN.
var null = math.Float64frombits(nullBits)

const nullBits = 0x7ff8_6e75_6c6c_0000

// source says where a column of numbers comes from: its own cursor, or, where
// that is nil, the coordinate at the position raw.
type source struct {
	cursor *cursor
	raw    int
}

// piece is what a chunk carries through the file.
type piece struct {
	group       int
	first, last bool         // of its group
	before      int64        // rows of the file before it
	raw         [3][]float64 // x, y, z as read, safe from changes of the chunk's numbers
	pages       pages
	work        encoder
}

// Next decodes the next rows of a row group, at most 64 Ki and all of one group.
func (f *File) Next(c *cloud.Chunk) error {
	if f.group == len(f.groups) {
		return io.EOF
	}
	if f.done == 0 {
		if err := f.beginGroup(); err != nil {
			return err
		}
	}
	p := pieceOf(c)
	total := f.groups[f.group].NumRows
	rows, err := f.decodeTexts(c, f.pieceSize(total))
	if err != nil {
		return err
	}
	p.group, p.first, p.last = f.group, f.done == 0, f.done+rows == total
	p.before = f.before + f.done
	c.Rows, c.Rejects = int(rows), c.Rejects[:0]
	c.Consumed = f.share(f.before+f.done+rows) - f.share(f.before+f.done)
	if err := f.decodeNumbers(c, p); err != nil {
		return err
	}
	f.done += rows
	if p.last {
		if err := f.endGroup(); err != nil {
			return err
		}
		f.group, f.done, f.before = f.group+1, 0, f.before+total
	}
	return nil
}

// Decode checks the chunk's texts where the request says so; Next has decoded it.
// The first that is refused is the error, a *cloud.RowError.
func (f *File) Decode(c *cloud.Chunk) error {
	for k, check := range f.checks {
		if check == nil {
			continue
		}
		for i := range c.Rows {
			if err := check(c.Texts[k].At(i)); err != nil {
				row := c.Format.(*piece).before + int64(i) + 1
				return &cloud.RowError{Path: f.path, Row: row, Column: f.leaves[f.texts[k].index].name, Err: err}
			}
		}
	}
	return nil
}

// pieceOf returns the chunk's own piece, made at its first use.
func pieceOf(c *cloud.Chunk) *piece {
	p, ok := c.Format.(*piece)
	if !ok {
		p = new(piece)
		c.Format = p
	}
	return p
}

func (f *File) beginGroup() error {
	for _, c := range f.cursors() {
		if err := c.begin(f.group); err != nil {
			return err
		}
	}
	return nil
}

// endGroup wants nothing behind the last row of the columns that are read.
func (f *File) endGroup() error {
	for _, c := range f.cursors() {
		if err := c.end(); err != nil {
			return c.fail(err)
		}
	}
	return nil
}

// pieceSize divides what is left of a group evenly.
func (f *File) pieceSize(total int64) int64 {
	left := total - f.done
	pieces := (left + pieceRows - 1) / pieceRows
	return (left + pieces - 1) / pieces
}

// share returns how many of the file's bytes its first rows stand for.
func (f *File) share(rows int64) int64 {
	return int64(float64(f.size) * (float64(rows) / float64(f.meta.NumRows)))
}

// decodeTexts decodes the texts of the next rows, at most so many, and returns
// of how many: of fewer where they are long.
func (f *File) decodeTexts(c *cloud.Chunk, most int64) (rows int64, err error) {
	c.Texts, c.Stored = emptied(c.Texts, len(f.texts)), emptied(c.Stored, len(f.stored))
	if len(c.Texts)+len(c.Stored) == 0 {
		return most, nil
	}
	for bytes := 0; rows < most && bytes < cutTextBytes; {
		n := min(textRows, most-rows)
		if bytes, err = f.decodeFewTexts(c, int(n)); err != nil {
			return 0, err
		}
		rows += n
	}
	return rows, nil
}

// decodeFewTexts appends a few rows and returns the bytes of all columns.
func (f *File) decodeFewTexts(c *cloud.Chunk, rows int) (bytes int, err error) {
	read := func(cursor *cursor, t *cloud.Texts) error {
		if err := cursor.readTexts(t, rows); err != nil {
			return err
		}
		if bytes += len(t.Bytes); bytes > maxTextBytes {
			return cursor.fail(fmt.Errorf("the texts of %d rows are longer than %d bytes", len(t.Ends), maxTextBytes))
		}
		return nil
	}
	for k, cursor := range f.texts {
		if err := read(cursor, &c.Texts[k]); err != nil {
			return 0, err
		}
	}
	for k, cursor := range f.stored {
		if err := read(cursor, &c.Stored[k]); err != nil {
			return 0, err
		}
	}
	return bytes, nil
}

// emptied returns so many empty columns, in the same memory where there is any.
func emptied(list []cloud.Texts, count int) []cloud.Texts {
	if len(list) != count {
		return make([]cloud.Texts, count)
	}
	for k := range list {
		list[k].Reset()
	}
	return list
}

func (f *File) decodeNumbers(c *cloud.Chunk, p *piece) error {
	for k, cursor := range f.raw {
		p.raw[k] = cloud.Grow(p.raw[k], c.Rows)
		if err := cursor.readNumbers(p.raw[k]); err != nil {
			return err
		}
		if err := cursor.checkDecodedStep(p.raw[k]); err != nil {
			return err
		}
	}
	if len(c.Numbers) != len(f.numbers) {
		c.Numbers = make([][]float64, len(f.numbers))
	}
	for k, s := range f.numbers {
		c.Numbers[k] = cloud.Grow(c.Numbers[k], c.Rows)
		if s.cursor == nil {
			copy(c.Numbers[k], p.raw[s.raw])
			continue
		}
		if err := s.cursor.readNumbers(c.Numbers[k]); err != nil {
			return err
		}
		if err := s.cursor.checkDecodedStep(c.Numbers[k]); err != nil {
			return err
		}
	}
	return nil
}
