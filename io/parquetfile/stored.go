package parquetfile

import (
	"encoding/binary"
	"fmt"
	"math"
	"strconv"
	"time"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// storedMark stands before each stored value, so that an empty text is not a null.
const storedMark = 1

// newStored prepares to read a column's values as they are stored.
func (f *File) newStored(i int) (*cursor, error) {
	l := f.leaves[i]
	if l.kind = l.storedKind(); l.kind == opaque {
		return nil, fmt.Errorf("%s: column %q is %s, whose values cannot be read", f.path, l.name, l.typ)
	}
	c, err := f.cursorOf(&l, i)
	if err != nil {
		return nil, err
	}
	c.stored = true
	return c, nil
}

// storedKind returns the kind by which the bits of a value pass through a float64, or
// texts, whatever the values stand for; opaque where the column is not flat or of a type
// that is not decoded.
func (l *leaf) storedKind() kind {
	if !l.flat {
		return opaque
	}
	switch l.physical {
	case parquet.Type_BOOLEAN:
		return booleans
	case parquet.Type_INT32:
		return int32s
	case parquet.Type_FLOAT:
		return uint32s
	case parquet.Type_INT64:
		return patterns
	case parquet.Type_DOUBLE:
		return doubles
	case parquet.Type_BYTE_ARRAY:
		return texts
	}
	return opaque
}

// storedWords are the values of a page, each behind its mark: texts as they are,
// numbers as the 8 bytes of a float64 that differs where they differ.
type storedWords struct {
	words   words   // of a page of texts
	numbers numbers // of a page of numbers
	few     cloud.Texts
	buffer  [block]float64
}

// chooseStored puts the page's decoder behind one that hands over stored values.
func (c *cursor) chooseStored() {
	s := &c.texts.stored
	s.words, s.numbers = nil, c.numbers
	if c.leaf.kind == texts {
		s.words = c.words
	}
	c.words = s
}

func (s *storedWords) next(t *cloud.Texts, count int) error {
	if s.words != nil {
		return s.nextTexts(t, count)
	}
	for count > 0 {
		list := s.buffer[:min(count, block)]
		if err := s.numbers.next(list); err != nil {
			return err
		}
		if err := checkText(t, 9*len(list)); err != nil {
			return err
		}
		for _, v := range list {
			t.Bytes = binary.LittleEndian.AppendUint64(append(t.Bytes, storedMark), math.Float64bits(v))
			t.Ends = append(t.Ends, len(t.Bytes))
		}
		count -= len(list)
	}
	return nil
}

func (s *storedWords) nextTexts(t *cloud.Texts, count int) error {
	s.few.Reset()
	if err := s.words.next(&s.few, count); err != nil {
		return err
	}
	if err := checkText(t, len(s.few.Bytes)+count); err != nil {
		return err
	}
	for i := range count {
		t.Bytes = append(append(t.Bytes, storedMark), s.few.At(i)...)
		t.Ends = append(t.Ends, len(t.Bytes))
	}
	return nil
}

// CanStore tells whether a column's values can be had as they are stored; others can
// only be compared with EqualChunks.
func (f *File) CanStore(column int) bool {
	if f.leaves[column].storedKind() == opaque {
		return false
	}
	for _, g := range f.groups {
		if !knownCodec(g.Columns[column].MetaData.Codec) {
			return false
		}
	}
	return true
}

// Show writes a value of Chunk.Stored for people.
func (f *File) Show(column int, stored []byte) string {
	l := &f.leaves[column]
	switch {
	case len(stored) == 0:
		return "null"
	case l.physical == parquet.Type_BYTE_ARRAY:
		return strconv.Quote(clip(string(stored[1:])))
	}
	bits := binary.LittleEndian.Uint64(stored[1:])
	v := math.Float64frombits(bits)
	switch l.kind {
	case floats:
		return strconv.FormatFloat(float64(math.Float32frombits(uint32(v))), 'g', -1, 32)
	case uint32s:
		return strconv.FormatUint(uint64(uint32(int32(v))), 10)
	case uint64s:
		return strconv.FormatUint(bits, 10)
	case millis:
		return showTime(time.UnixMilli(int64(bits)))
	case micros:
		return showTime(time.UnixMicro(int64(bits)))
	case nanos:
		return showTime(time.Unix(0, int64(bits)))
	case opaque, int64s:
		if l.physical == parquet.Type_INT64 {
			return strconv.FormatInt(int64(bits), 10)
		}
	case doubles:
		if v != v && bits != math.Float64bits(math.NaN()) {
			return fmt.Sprintf("NaN (%#x)", bits)
		}
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

func showTime(t time.Time) string { return t.UTC().Format(time.RFC3339Nano) }
