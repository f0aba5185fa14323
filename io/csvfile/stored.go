package csvfile

import (
	"slices"
	"strconv"
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
