package parquetfile

import (
	"bytes"

	"github.com/xitongsys/parquet-go/parquet"
)

// sameBuffer is how much of two chunks is compared at a time.
const sameBuffer = 256 << 10

// EqualChunks tells whether a column is stored in the same bytes as a column of
// another file, row group by row group: then all its values are equal, whatever
// their type. Where it is false they may be equal all the same, stored in another
// way. It needs no Begin. Each call has buffers of its own; the name of the column
// itself may differ, those of its groups may not.
func (f *File) EqualChunks(column int, other *File, otherColumn int) (bool, error) {
	if len(f.groups) != len(other.groups) || !sameShape(f.branch(column), other.branch(otherColumn)) {
		return false, nil
	}
	a, b := make([]byte, sameBuffer), make([]byte, sameBuffer)
	for g := range f.groups {
		if f.groups[g].NumRows != other.groups[g].NumRows {
			return false, nil
		}
		equal, err := f.equalChunk(g, column, other, otherColumn, a, b)
		if !equal || err != nil {
			return false, err
		}
	}
	return true, nil
}

// equalChunk compares the bytes of two chunks.
func (f *File) equalChunk(g, column int, other *File, otherColumn int, a, b []byte) (bool, error) {
	m, n := f.groups[g].Columns[column].MetaData, other.groups[g].Columns[otherColumn].MetaData
	if m.Codec != n.Codec || m.NumValues != n.NumValues || m.TotalCompressedSize != n.TotalCompressedSize {
		return false, nil
	}
	at, bt := chunkStart(m), chunkStart(n)
	for left := m.TotalCompressedSize; left > 0; {
		size := min(left, sameBuffer)
		if err := readAt(f.input, a[:size], at); err != nil {
			return false, err
		}
		if err := readAt(other.input, b[:size], bt); err != nil {
			return false, err
		}
		if !bytes.Equal(a[:size], b[:size]) {
			return false, nil
		}
		at, bt, left = at+size, bt+size, left-size
	}
	return true, nil
}

// branch returns the part of the schema that a column hangs on: itself, or the
// outermost of its groups with all that is in it.
func (f *File) branch(column int) []*parquet.SchemaElement {
	elements := f.meta.Schema
	start := 1
	for {
		end := start + treeSize(elements[start:])
		if f.leaves[column].element < end {
			return elements[start:end]
		}
		start = end
	}
}

// treeSize counts the elements of the tree that begins with the first.
func treeSize(elements []*parquet.SchemaElement) int {
	size := 1
	for range elements[0].GetNumChildren() {
		size += treeSize(elements[size:])
	}
	return size
}

// sameShape tells whether equal bytes are equal values under both branches.
func sameShape(a, b []*parquet.SchemaElement) bool {
	if len(a) != len(b) {
		return false
	}
	for i, e := range a {
		o := b[i]
		if i > 0 && e.Name != o.Name || e.IsSetType() != o.IsSetType() || e.GetRepetitionType() != o.GetRepetitionType() ||
			e.GetNumChildren() != o.GetNumChildren() {
			return false
		}
		if e.IsSetType() && (e.GetType() != o.GetType() || e.GetTypeLength() != o.GetTypeLength() || annotation(e) != annotation(o)) {
			return false
		}
	}
	return true
}
