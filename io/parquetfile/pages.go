package parquetfile

import (
	"encoding/binary"
	"fmt"
	"math"
	"slices"

	"github.com/xitongsys/parquet-go/parquet"
)

// pages holds one page of every new column of a piece: x, y, z, then the added
// columns.
type pages struct {
	bytes  []byte
	ends   []int // of the pages in bytes
	stats  []stats
	counts [256]int64 // rows by class
	spot   int64      // in the scratch file, where bytes is nil
}

// appendLevels encodes the definition levels of a page of version 1. Those
// in e.levels count where some rows are set and some are not.
func (e *encoder) appendLevels(b []byte, rows, set int) []byte {
	start := len(b)
	b = append(b, 0, 0, 0, 0)
	switch set {
	case rows:
		b = appendRun(b, rows, uint8(1), 1)
	case 0:
		b = appendRun(b, rows, uint8(0), 1)
	default:
		b = appendRuns(b, e.levels[:rows], 1)
	}
	binary.LittleEndian.PutUint32(b[start:], uint32(len(b)-start-4))
	return b
}

// header appends the header of a data page of version 1.
func (g *pages) header(encoding parquet.Encoding, rows, size int) (err error) {
	g.bytes, err = appendThrift(g.bytes, &parquet.PageHeader{
		Type:                 parquet.PageType_DATA_PAGE,
		UncompressedPageSize: int32(size),
		CompressedPageSize:   int32(size),
		DataPageHeader: &parquet.DataPageHeader{
			NumValues:               int32(rows),
			Encoding:                encoding,
			DefinitionLevelEncoding: parquet.Encoding_RLE,
			RepetitionLevelEncoding: parquet.Encoding_RLE,
		},
	})
	return err
}

func (g *pages) close(s stats) {
	g.ends = append(g.ends, len(g.bytes))
	g.stats = append(g.stats, s)
}

// grow makes room for n bytes more and returns them.
func (g *pages) grow(n int) []byte {
	at := len(g.bytes)
	g.bytes = slices.Grow(g.bytes, n)[:at+n]
	return g.bytes[at:]
}

func (g *pages) appendFloats(list []float64) {
	b := g.grow(8 * len(list))
	for i, v := range list {
		binary.LittleEndian.PutUint64(b[8*i:], math.Float64bits(v))
	}
}

func (g *pages) appendCounts(list []float64) error {
	b := g.grow(4 * len(list))
	for i, v := range list {
		n, err := wholeNumber(v)
		if err != nil {
			return err
		}
		binary.LittleEndian.PutUint32(b[4*i:], uint32(n))
	}
	return nil
}

// wholeNumber turns a count into what is stored.
func wholeNumber(v float64) (int32, error) {
	n := int32(max(min(v, math.MaxInt32), math.MinInt32))
	if float64(n) != v {
		return 0, fmt.Errorf("%v is not a whole number of 32 bits", v)
	}
	return n, nil
}
