package csvfile

import (
	"bytes"
	"slices"
	"strconv"

	"bentray/io/cloud"
)

// passes tells whether the row at a position is one to be passed over.
func (f *File) passes(b *block, begin int) bool {
	if len(f.passed) == 0 {
		return false
	}
	_, found := slices.BinarySearch(f.passed, b.lineAt(begin))
	return found
}

// Show writes a value of Chunk.Stored for people.
func (f *File) Show(_ int, stored []byte) string { return strconv.Quote(shorten(string(stored))) }

// Line returns the line, counted from 1, on which a row of a decoded chunk without
// rejected rows begins. It counts the chunk's lines anew and is for messages.
func (f *File) Line(c *cloud.Chunk, row int) int64 {
	b := c.Format.(*block)
	cutset := "\r\n"
	if f.sep == blanks {
		cutset += " \t"
	}
	r := b.rows[row]
	begin := int(r.end) - len(bytes.TrimLeft(b.text[r.from:r.end], cutset))
	return b.line - int64(bytes.Count(b.text[:b.counted], lineFeed)) + int64(bytes.Count(b.text[:begin], lineFeed))
}
