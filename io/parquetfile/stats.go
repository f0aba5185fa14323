package parquetfile

import (
	"bytes"
	"encoding/binary"
	"math"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// stats are what a column chunk says about its numbers. least > most where
// there is none.
type stats struct {
	nulls, nans int64
	least, most float64
}

var noStats = stats{least: math.Inf(1), most: math.Inf(-1)}

// statsOf finds the range of numbers; every NaN counts as a null.
func statsOf(list []float64) stats {
	s := noStats
	least, most := s.least, s.most
	for _, v := range list {
		if v < least {
			least = v
		}
		if v > most {
			most = v
		}
		if v != v {
			s.nulls++
		}
	}
	s.least, s.most = least, most
	return s
}

func (s *stats) merge(t stats) {
	s.nulls += t.nulls
	s.nans += t.nans
	s.least, s.most = min(s.least, t.least), max(s.most, t.most)
}

// thrift writes the statistics of numbers. Where there is a NaN there is no range:
// readers that order NaN above all numbers would skip it by its end. A zero is written with the sign that
// includes both zeros, as the format asks.
func (s stats) thrift(t cloud.Type) *parquet.Statistics {
	out := &parquet.Statistics{NullCount: &s.nulls}
	if s.nans > 0 || s.least > s.most {
		return out
	}
	if t == cloud.Count {
		out.MinValue = binary.LittleEndian.AppendUint32(nil, uint32(int32(s.least)))
		out.MaxValue = binary.LittleEndian.AppendUint32(nil, uint32(int32(s.most)))
		return out
	}
	if s.least == 0 {
		s.least = math.Copysign(0, -1)
	}
	if s.most == 0 {
		s.most = 0
	}
	out.MinValue = binary.LittleEndian.AppendUint64(nil, math.Float64bits(s.least))
	out.MaxValue = binary.LittleEndian.AppendUint64(nil, math.Float64bits(s.most))
	return out
}

// stats returns the statistics of a column by class over rows counted by class.
func (d *dictionary) stats(a *cloud.Added, counts *[256]int64) *parquet.Statistics {
	s := noStats
	var least, most []byte
	for class, n := range counts {
		switch {
		case n == 0:
		case d.set[class] == 0:
			s.nulls += n
		case a.Type == cloud.Label:
			v := d.values[d.code[class]]
			if least == nil || bytes.Compare(v, least) < 0 {
				least = v
			}
			if most == nil || bytes.Compare(v, most) > 0 {
				most = v
			}
		default:
			v := a.ByClass[class].Number
			s.merge(stats{least: v, most: v})
		}
	}
	if a.Type != cloud.Label {
		return s.thrift(a.Type)
	}
	return &parquet.Statistics{NullCount: &s.nulls, MinValue: least, MaxValue: most}
}
