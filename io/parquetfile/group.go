package parquetfile

import (
	"fmt"
	"slices"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// endGroup writes the new chunks of a row group and describes it for the footer.
func (o *output) endGroup(group int) error {
	added := make([]*parquet.ColumnChunk, len(o.stats))
	for k := range added {
		var err error
		if added[k], err = o.writeChunk(k); err != nil {
			return fmt.Errorf("%s: row group %d: %w", o.file.path, group+1, err)
		}
	}
	o.release()
	old := o.file.groups[group]
	columns := make([]*parquet.ColumnChunk, 0, len(o.paths))
	for i := range old.Columns {
		if k := slices.Index(o.layout.XYZ[:], i); k >= 0 {
			columns = append(columns, added[k])
		} else {
			columns = append(columns, o.movedChunk(old.Columns[i], i))
		}
	}
	for _, i := range o.layout.XYZ {
		columns = append(columns, o.movedChunk(old.Columns[i], i))
	}
	columns = append(columns, added[3:]...)
	for i, c := range columns {
		c.MetaData.PathInSchema = o.paths[i]
	}
	o.groups = append(o.groups, o.describe(old, columns))
	return nil
}

// describe sums up a row group. An order of rows is kept unless it goes by the
// coordinates, which are others now.
func (o *output) describe(old *parquet.RowGroup, columns []*parquet.ColumnChunk) *parquet.RowGroup {
	g := &parquet.RowGroup{Columns: columns, NumRows: old.NumRows}
	var packed int64
	for _, c := range columns {
		packed += c.MetaData.TotalCompressedSize
		g.TotalByteSize += c.MetaData.TotalUncompressedSize
	}
	g.TotalCompressedSize = &packed
	if n := len(o.groups); n <= 1<<15-1 {
		ordinal := int16(n)
		g.Ordinal = &ordinal
	}
	start := o.copied[0].start
	g.FileOffset = &start
	byXYZ := func(s *parquet.SortingColumn) bool { return slices.Contains(o.layout.XYZ[:], int(s.ColumnIdx)) }
	if !slices.ContainsFunc(old.SortingColumns, byXYZ) {
		g.SortingColumns = old.SortingColumns
	}
	return g
}

// writeChunk writes new column k: its dictionary, if any, and its pages.
func (o *output) writeChunk(k int) (*parquet.ColumnChunk, error) {
	start := o.at
	m := &parquet.ColumnMetaData{
		Type:      parquet.Type_DOUBLE,
		Codec:     parquet.CompressionCodec_UNCOMPRESSED,
		Encodings: []parquet.Encoding{parquet.Encoding_PLAIN, parquet.Encoding_RLE},
	}
	t := cloud.Float
	if k < 3 {
		m.Statistics = o.stats[k].thrift(t)
	} else {
		a, d := &o.layout.Added[k-3], o.dictionaries[k-3]
		t = a.Type
		if err := o.describeAdded(m, a, d, k); err != nil {
			return nil, err
		}
	}
	m.Type = physicalTypes[t]
	m.DataPageOffset = o.at
	if err := o.writePages(k); err != nil {
		return nil, err
	}
	m.TotalCompressedSize = o.at - start
	m.TotalUncompressedSize = m.TotalCompressedSize
	for _, n := range o.counts {
		m.NumValues += n
	}
	return &parquet.ColumnChunk{FileOffset: start, MetaData: m}, nil
}

// describeAdded fills in what differs between numbers by row and columns with a
// dictionary, and writes the latter's.
func (o *output) describeAdded(m *parquet.ColumnMetaData, a *cloud.Added, d *dictionary, k int) error {
	if d == nil {
		m.Statistics = o.stats[k].thrift(a.Type)
		return nil
	}
	if d.byPosition != nil {
		m.Statistics = d.nameStats(o.stats[k])
	} else {
		m.Statistics = d.stats(a, &o.counts)
	}
	if len(d.page) == 0 {
		return nil
	}
	start := o.at
	m.DictionaryPageOffset = &start
	m.Encodings = append(m.Encodings, parquet.Encoding_RLE_DICTIONARY)
	return o.write(d.page)
}

// movedChunk describes an old chunk at its new place. What points elsewhere in
// the old file (indexes, filters) is left out.
func (o *output) movedChunk(c *parquet.ColumnChunk, i int) *parquet.ColumnChunk {
	m := *c.MetaData
	start := o.copied[i].start
	old := chunkStart(&m)
	m.DictionaryPageOffset = nil
	if old < m.DataPageOffset {
		m.DictionaryPageOffset = &start
	}
	m.DataPageOffset += start - old
	m.IndexPageOffset, m.BloomFilterOffset = nil, nil
	m.Statistics = o.keptStats(m.Statistics, i)
	return &parquet.ColumnChunk{FileOffset: start, MetaData: &m}
}
