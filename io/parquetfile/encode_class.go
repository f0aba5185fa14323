package parquetfile

import (
	"encoding/binary"
	"fmt"
	"math"
	"math/bits"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// dictionary holds the distinct values of a column by class, or the names of a
// label held by row.
type dictionary struct {
	values     [][]byte // PLAIN, texts without their length
	page       []byte   // the dictionary page; empty where no class has a value
	width      uint     // of a code
	code       [256]uint8
	set        [256]uint8 // 1 for classes that have a value
	byPosition []uint32   // codes of names; nil for a column by class
}

// newDictionary encodes the values of a column's classes; a number that is NaN
// is no value.
func newDictionary(a *cloud.Added) (*dictionary, error) {
	d := new(dictionary)
	codes := map[string]uint8{}
	for class, v := range a.ByClass {
		if !v.Set || a.Type != cloud.Label && math.IsNaN(v.Number) {
			continue
		}
		b, err := plainValue(a.Type, v)
		if err != nil {
			return nil, fmt.Errorf("column %q: %w", a.Name, err)
		}
		code, known := codes[string(b)]
		if !known {
			code = uint8(len(d.values))
			codes[string(b)] = code
			d.values = append(d.values, b)
		}
		d.code[class], d.set[class] = code, 1
	}
	if len(d.values) == 0 {
		return d, nil
	}
	return d, d.makePage(a)
}

func plainValue(t cloud.Type, v cloud.Value) ([]byte, error) {
	switch t {
	case cloud.Label:
		return []byte(v.Text), nil
	case cloud.Count:
		n, err := wholeNumber(v.Number)
		return binary.LittleEndian.AppendUint32(nil, uint32(n)), err
	}
	return binary.LittleEndian.AppendUint64(nil, math.Float64bits(v.Number)), nil
}

// makePage encodes the values, of which there is one at least.
func (d *dictionary) makePage(a *cloud.Added) (err error) {
	d.width = uint(max(bits.Len(uint(len(d.values)-1)), 1)) // some readers do not know width 0
	var data []byte
	for _, v := range d.values {
		if a.Type == cloud.Label {
			data = binary.LittleEndian.AppendUint32(data, uint32(len(v)))
		}
		data = append(data, v...)
	}
	if len(data) > maxDictBytes {
		return fmt.Errorf("column %q: the values have %d bytes, want at most %d", a.Name, len(data), maxDictBytes)
	}
	d.page, err = appendThrift(nil, &parquet.PageHeader{
		Type:                 parquet.PageType_DICTIONARY_PAGE,
		UncompressedPageSize: int32(len(data)),
		CompressedPageSize:   int32(len(data)),
		DictionaryPageHeader: &parquet.DictionaryPageHeader{
			NumValues: int32(len(d.values)),
			Encoding:  parquet.Encoding_PLAIN,
		},
	})
	d.page = append(d.page, data...)
	return err
}

// encoding of the column's data pages: without a value there is no dictionary.
func (d *dictionary) encoding() parquet.Encoding {
	if len(d.values) == 0 {
		return parquet.Encoding_PLAIN
	}
	return parquet.Encoding_RLE_DICTIONARY
}

// classes encodes one page of a column by class.
func (e *encoder) classes(g *pages, class []uint8, d *dictionary) error {
	set, code, same := d.present(&g.counts)
	if set > 0 && set < len(class) {
		e.levels = cloud.Grow(e.levels, len(class))
		for i, c := range class {
			e.levels[i] = d.set[c]
		}
	}
	e.runs = e.runs[:0]
	switch {
	case len(d.values) == 0:
	case same:
		e.runs = appendRun(append(e.runs, byte(d.width)), set, code, d.width)
	default:
		e.runs = appendRuns(append(e.runs, byte(d.width)), e.codesOf(class, d), d.width)
	}
	return e.codedPage(g, d, len(class), set, stats{})
}

// codedPage ends a page of codes: those in e.runs, of which set rows have one.
func (e *encoder) codedPage(g *pages, d *dictionary, rows, set int, s stats) error {
	e.coded = e.appendLevels(e.coded[:0], rows, set)
	if err := g.header(d.encoding(), rows, len(e.coded)+len(e.runs)); err != nil {
		return err
	}
	g.bytes = append(append(g.bytes, e.coded...), e.runs...)
	g.close(s)
	return nil
}

// present counts the rows that have a value, and says whether it is the same
// for all of them.
func (d *dictionary) present(counts *[256]int64) (set int, code uint8, same bool) {
	same = true
	for class, n := range counts {
		if n == 0 || d.set[class] == 0 {
			continue
		}
		if set > 0 && d.code[class] != code {
			same = false
		}
		set, code = set+int(n), d.code[class]
	}
	return set, code, same
}

// codesOf lists the codes of the rows that have a value.
func (e *encoder) codesOf(class []uint8, d *dictionary) []uint8 {
	e.codes = cloud.Grow(e.codes, len(class))
	n := 0
	for _, c := range class {
		e.codes[n] = d.code[c]
		n += int(d.set[c])
	}
	return e.codes[:n]
}
