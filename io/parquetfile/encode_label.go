package parquetfile

import (
	"fmt"
	"slices"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// newNames encodes the names of a label held by row, in the order of their
// bytes: so the least code of some rows is that of their least text.
func newNames(a *cloud.Added) (*dictionary, error) {
	sorted := slices.Compact(slices.Sorted(slices.Values(a.Names)))
	d := &dictionary{byPosition: make([]uint32, len(a.Names))}
	for _, name := range sorted {
		d.values = append(d.values, []byte(name))
	}
	for i, name := range a.Names {
		at, _ := slices.BinarySearch(sorted, name)
		d.byPosition[i] = uint32(at)
	}
	return d, d.makePage(a)
}

// labels encodes one page of a label held by row: positions among its names.
// Their statistics are of codes.
func (e *encoder) labels(g *pages, positions []float64, d *dictionary) error {
	codes, err := e.codesAt(positions, d)
	if err != nil {
		return err
	}
	s := noStats
	s.nulls = int64(len(positions) - len(codes))
	if len(codes) > 0 {
		s.least, s.most = float64(slices.Min(codes)), float64(slices.Max(codes))
	}
	e.runs = appendRuns(append(e.runs[:0], byte(d.width)), codes, d.width)
	return e.codedPage(g, d, len(positions), len(codes), s)
}

// codesAt sets the levels and lists the codes of the rows that have a value.
func (e *encoder) codesAt(positions []float64, d *dictionary) ([]uint32, error) {
	e.levels = cloud.Grow(e.levels, len(positions))
	e.names = cloud.Grow(e.names, len(positions))
	n, count := 0, float64(len(d.byPosition))
	for i, v := range positions {
		if v != v {
			e.levels[i] = 0
			continue
		}
		if !(v >= 0 && v < count) || v != float64(int(v)) {
			return nil, fmt.Errorf("a row has position %v among the names, want a whole number from 0 to %d, or NaN for none", v, len(d.byPosition)-1)
		}
		e.levels[i] = 1
		e.names[n] = d.byPosition[int(v)]
		n++
	}
	return e.names[:n], nil
}

// nameStats turns statistics of codes into those of names.
func (d *dictionary) nameStats(s stats) *parquet.Statistics {
	out := &parquet.Statistics{NullCount: &s.nulls}
	if s.least <= s.most {
		out.MinValue, out.MaxValue = d.values[int(s.least)], d.values[int(s.most)]
	}
	return out
}
