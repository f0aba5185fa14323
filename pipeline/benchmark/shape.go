package main

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"os"
	"slices"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"
)

// shape is how a Parquet file is cut: its row groups, the rows of the largest
// one, and the values of the largest page of the column whose pages are the
// smallest.
type shape struct {
	groups                int
	groupRows, pageValues int64
}

func (s shape) String() string {
	if s.groups == 1 {
		return fmt.Sprintf("1 group, pages of %d", s.pageValues)
	}
	return fmt.Sprintf("%d groups, pages of %d", s.groups, s.pageValues)
}

// readShape reads the footer of a Parquet file and the headers of all its pages.
// It trusts the file: it is for those that the benchmark makes itself.
func readShape(path string) (shape, error) {
	f, err := os.Open(path)
	if err != nil {
		return shape{}, err
	}
	defer f.Close()
	meta, err := readFooter(f)
	if err != nil {
		return shape{}, fmt.Errorf("%s: footer: %w", path, err)
	}
	s := shape{groups: len(meta.RowGroups)}
	var largest []int64 // page of each column
	for _, g := range meta.RowGroups {
		s.groupRows = max(s.groupRows, g.NumRows)
		for i, c := range g.Columns {
			values, err := largestPage(f, c.MetaData)
			if err != nil {
				return shape{}, fmt.Errorf("%s: column %s: %w", path, c.MetaData.PathInSchema, err)
			}
			if i == len(largest) {
				largest = append(largest, 0)
			}
			largest[i] = max(largest[i], values)
		}
	}
	if len(largest) > 0 {
		s.pageValues = slices.Min(largest)
	}
	return s, nil
}

func readFooter(f *os.File) (*parquet.FileMetaData, error) {
	info, err := f.Stat()
	if err != nil {
		return nil, err
	}
	var end [8]byte // length and magic
	if _, err := f.ReadAt(end[:], max(info.Size()-8, 0)); err != nil {
		return nil, err
	}
	b := make([]byte, binary.LittleEndian.Uint32(end[:]))
	if _, err := f.ReadAt(b, info.Size()-8-int64(len(b))); err != nil {
		return nil, err
	}
	meta := parquet.NewFileMetaData()
	_, err = decode(b, meta)
	return meta, err
}

// largestPage walks the pages of a column chunk from header to header and
// returns the values of the largest data page.
func largestPage(f *os.File, c *parquet.ColumnMetaData) (int64, error) {
	at := c.DataPageOffset
	if c.DictionaryPageOffset != nil {
		at = min(at, *c.DictionaryPageOffset)
	}
	var largest int64
	window := make([]byte, 64<<10) // longer than a header of the engine's
	for end := at + c.TotalCompressedSize; at < end; {
		n, err := f.ReadAt(window, at)
		if err != nil && !errors.Is(err, io.EOF) {
			return 0, err
		}
		h := parquet.NewPageHeader()
		length, err := decode(window[:n], h)
		if err != nil {
			return 0, fmt.Errorf("page at byte %d: %w", at, err)
		}
		at += int64(length) + int64(h.CompressedPageSize)
		largest = max(largest, dataValues(h))
	}
	return largest, nil
}

// dataValues is 0 for pages that hold no data.
func dataValues(h *parquet.PageHeader) int64 {
	switch {
	case h.DataPageHeader != nil:
		return int64(h.DataPageHeader.NumValues)
	case h.DataPageHeaderV2 != nil:
		return int64(h.DataPageHeaderV2.NumValues)
	}
	return 0
}

// decode reads a structure from the beginning of b and returns its length.
func decode(b []byte, s thrift.TStruct) (int, error) {
	left := &thrift.TMemoryBuffer{Buffer: bytes.NewBuffer(b)}
	err := s.Read(context.Background(), thrift.NewTCompactProtocolConf(left, nil))
	return len(b) - left.Len(), err
}
