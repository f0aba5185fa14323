package parquetfile

import (
	"encoding/binary"
	"fmt"
	"io"
	"slices"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// Column is a column of a table that is written from memory.
type Column struct {
	Name   string
	Values any // []float64 (DOUBLE; NaN becomes null), []int64 (INT64), []int32 (INT32) or []string (text)
}

// WriteTable writes columns of one length as a Parquet file, in row groups of
// groupRows rows of which the last may have fewer; all in one group where
// groupRows is 0. It is for tables that fit in memory, such as made-up clouds:
// each column of a group is one page, PLAIN and not compressed. Equal columns
// give equal bytes.
//
// Errors: a column of another type or length, a name that is there twice, a
// page beyond 64 MiB, and those of the writer.
func WriteTable(w io.Writer, columns []Column, groupRows int) error {
	t := &tableWriter{writer: w, columns: columns}
	if err := t.describe(); err != nil {
		return err
	}
	if groupRows <= 0 {
		groupRows = max(t.rows, 1)
	}
	if err := t.write([]byte(magic)); err != nil {
		return err
	}
	for from := 0; from < t.rows; from += groupRows {
		if err := t.writeGroup(from, min(from+groupRows, t.rows)); err != nil {
			return err
		}
	}
	footer, err := sealed(&t.meta)
	if err != nil {
		return err
	}
	return t.write(footer)
}

// tableWriter is a table on its way to a file.
type tableWriter struct {
	writer  io.Writer
	columns []Column
	rows    int
	at      int64 // bytes written
	meta    parquet.FileMetaData
	page    pages
	work    encoder
	plain   []byte
}

// describe checks the columns and makes the schema.
func (t *tableWriter) describe() error {
	count := int32(len(t.columns))
	t.meta = parquet.FileMetaData{
		Version: 1, Schema: []*parquet.SchemaElement{{Name: "table", NumChildren: &count}},
		RowGroups: []*parquet.RowGroup{}, CreatedBy: createdBy(""),
	}
	taken := map[string]bool{}
	for i, c := range t.columns {
		element, rows, err := c.describe()
		switch {
		case err != nil:
			return err
		case taken[c.Name]:
			return fmt.Errorf("column %q is there twice, want each name once", c.Name)
		case i > 0 && rows != t.rows:
			return fmt.Errorf("column %q has %d rows, want %d as %q", c.Name, rows, t.rows, t.columns[0].Name)
		}
		t.rows, taken[c.Name] = rows, true
		t.meta.Schema = append(t.meta.Schema, element)
		t.meta.ColumnOrders = append(t.meta.ColumnOrders, &parquet.ColumnOrder{TYPE_ORDER: parquet.NewTypeDefinedOrder()})
	}
	t.meta.NumRows = int64(t.rows)
	return nil
}

// describe returns how a column is stored, and its rows.
func (c Column) describe() (*parquet.SchemaElement, int, error) {
	switch v := c.Values.(type) {
	case []float64:
		return newElement(c.Name, cloud.Float), len(v), nil
	case []int32:
		return newElement(c.Name, cloud.Count), len(v), nil
	case []string:
		return newElement(c.Name, cloud.Label), len(v), nil
	case []int64:
		e, physical := newElement(c.Name, cloud.Count), parquet.Type_INT64
		e.Type = &physical
		return e, len(v), nil
	}
	return nil, 0, fmt.Errorf("column %q holds %T, want []float64, []int64, []int32 or []string", c.Name, c.Values)
}

func (t *tableWriter) write(b []byte) error {
	n, err := t.writer.Write(b)
	t.at += int64(n)
	return err
}

// writeGroup writes the rows from..to-1 as one row group.
func (t *tableWriter) writeGroup(from, to int) error {
	g, start := &parquet.RowGroup{NumRows: int64(to - from)}, t.at
	for i, c := range t.columns {
		at := t.at
		statistics, err := t.encode(c.Values, from, to)
		if err == nil && len(t.page.bytes) > maxPageBytes {
			err = fmt.Errorf("a page has %d bytes, want at most %d; write smaller row groups", len(t.page.bytes), maxPageBytes)
		}
		if err != nil {
			return fmt.Errorf("column %q: %w", c.Name, err)
		}
		if err := t.write(t.page.bytes); err != nil {
			return err
		}
		g.Columns = append(g.Columns, &parquet.ColumnChunk{FileOffset: at, MetaData: &parquet.ColumnMetaData{
			Type: *t.meta.Schema[1+i].Type, Encodings: []parquet.Encoding{parquet.Encoding_PLAIN, parquet.Encoding_RLE},
			PathInSchema: []string{c.Name}, Codec: parquet.CompressionCodec_UNCOMPRESSED, NumValues: g.NumRows,
			TotalUncompressedSize: t.at - at, TotalCompressedSize: t.at - at, DataPageOffset: at, Statistics: statistics,
		}})
	}
	packed := t.at - start
	g.TotalByteSize, g.TotalCompressedSize, g.FileOffset = packed, &packed, &start
	t.meta.RowGroups = append(t.meta.RowGroups, g)
	return nil
}

// encode makes the page of some rows of a column and returns its statistics.
func (t *tableWriter) encode(values any, from, to int) (*parquet.Statistics, error) {
	t.page.bytes, t.page.ends, t.page.stats = t.page.bytes[:0], t.page.ends[:0], t.page.stats[:0]
	switch v := values.(type) {
	case []float64:
		err := t.work.numbers(&t.page, v[from:to], cloud.Float, isNaN)
		if err != nil {
			return nil, err
		}
		return t.page.stats[0].thrift(cloud.Float), nil
	case []int64:
		return encodeIntegers(t, v[from:to])
	case []int32:
		return encodeIntegers(t, v[from:to])
	}
	return t.encodeTexts(values.([]string)[from:to])
}

func encodeIntegers[T int32 | int64](t *tableWriter, list []T) (*parquet.Statistics, error) {
	t.plain = appendPlain(t.plain[:0], list...)
	s := &parquet.Statistics{NullCount: new(int64), MinValue: appendPlain(nil, slices.Min(list)), MaxValue: appendPlain(nil, slices.Max(list))}
	return s, t.wholePage(len(list))
}

func appendPlain[T int32 | int64](b []byte, list ...T) []byte {
	b, _ = binary.Append(b, binary.LittleEndian, list) // fails for types of no fixed size alone
	return b
}

func (t *tableWriter) encodeTexts(list []string) (*parquet.Statistics, error) {
	t.plain = t.plain[:0]
	for _, s := range list {
		t.plain = append(binary.LittleEndian.AppendUint32(t.plain, uint32(len(s))), s...)
	}
	s := &parquet.Statistics{NullCount: new(int64), MinValue: []byte(slices.Min(list)), MaxValue: []byte(slices.Max(list))}
	return s, t.wholePage(len(list))
}

// wholePage makes a page without nulls of the values in plain.
func (t *tableWriter) wholePage(rows int) error {
	levels := t.work.appendLevels(nil, rows, rows)
	if err := t.page.header(parquet.Encoding_PLAIN, rows, len(levels)+len(t.plain)); err != nil {
		return err
	}
	t.page.bytes = append(append(t.page.bytes, levels...), t.plain...)
	return nil
}
