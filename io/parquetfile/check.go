package parquetfile

import (
	"cmp"
	"fmt"
	"slices"

	"github.com/xitongsys/parquet-go/parquet"
)

// span is a run of bytes in the file.
type span struct{ start, end int64 }

// place is where a chunk lies, and which it is.
type place struct {
	span
	column, group int
}

// checkGroups proves that the footer describes a file that can be copied: every
// chunk is there, is what the schema says, lies before the footer and shares no
// byte with another. It returns the groups that have rows.
func checkGroups(meta *parquet.FileMetaData, leaves []leaf, footer int64) ([]*parquet.RowGroup, error) {
	groups, err := filledGroups(meta)
	if err != nil {
		return nil, err
	}
	var places []place
	for g, group := range groups {
		if len(group.Columns) != len(leaves) {
			return nil, fmt.Errorf("row group %d has %d columns, want %d as in the schema", g+1, len(group.Columns), len(leaves))
		}
		for i, chunk := range group.Columns {
			if err := checkChunk(chunk, &leaves[i], group.NumRows); err != nil {
				return nil, fmt.Errorf("column %q, row group %d: %w", leaves[i].name, g+1, err)
			}
			s, err := chunkSpan(chunk.MetaData, footer)
			if err != nil {
				return nil, fmt.Errorf("column %q, row group %d: %w", leaves[i].name, g+1, err)
			}
			places = append(places, place{s, i, g})
		}
	}
	return groups, checkOverlap(places, leaves)
}

// filledGroups returns the groups that have rows, whose sum must be the file's.
func filledGroups(meta *parquet.FileMetaData) ([]*parquet.RowGroup, error) {
	var groups []*parquet.RowGroup
	left := meta.NumRows
	for g, group := range meta.RowGroups {
		if group.NumRows < 0 || group.NumRows > left {
			return nil, fmt.Errorf("row group %d has %d rows, want 0 to %d as the file has %d", g+1, group.NumRows, max(left, 0), meta.NumRows)
		}
		left -= group.NumRows
		if group.NumRows > 0 {
			groups = append(groups, group)
		}
	}
	if left != 0 {
		return nil, fmt.Errorf("the row groups have %d rows, want %d as the file says", meta.NumRows-left, meta.NumRows)
	}
	return groups, nil
}

func checkChunk(chunk *parquet.ColumnChunk, l *leaf, rows int64) error {
	m := chunk.MetaData
	switch {
	case chunk.CryptoMetadata != nil || chunk.EncryptedColumnMetadata != nil:
		return errEncrypted
	case chunk.GetFilePath() != "":
		return fmt.Errorf("lies in another file, %q, want it in this one", clip(chunk.GetFilePath()))
	case m == nil:
		return fmt.Errorf("has no description in the footer")
	case m.Type != l.physical:
		return fmt.Errorf("is stored as %s, want %s as in the schema", m.Type, l.physical)
	case !slices.Equal(m.PathInSchema, l.path):
		return fmt.Errorf("is called %q there, not as in the schema; the file is damaged", clip(fmt.Sprint(m.PathInSchema)))
	case l.flat && m.NumValues != rows:
		return fmt.Errorf("has %d values, want %d as the group has rows", m.NumValues, rows)
	case m.TotalUncompressedSize < 0:
		return fmt.Errorf("has a decompressed size of %d bytes", m.TotalUncompressedSize)
	}
	return nil
}

// chunkStart returns where a chunk begins: with its dictionary page, if it has
// one. Some writers say that it is at 0 when there is none.
func chunkStart(m *parquet.ColumnMetaData) int64 {
	if d := m.GetDictionaryPageOffset(); d > 0 && d < m.DataPageOffset {
		return d
	}
	return m.DataPageOffset
}

// chunkSpan returns where a chunk lies.
func chunkSpan(m *parquet.ColumnMetaData, footer int64) (span, error) {
	start, size := chunkStart(m), m.TotalCompressedSize
	if start < int64(len(magic)) || size < 0 || start > footer || size > footer-start {
		return span{}, fmt.Errorf("lies at byte %d with %d bytes, want it between %d and the footer at %d", start, size, len(magic), footer)
	}
	return span{start, start + size}, nil
}

// checkOverlap refuses chunks that share bytes: a small file could stand for
// any amount of data.
func checkOverlap(places []place, leaves []leaf) error {
	slices.SortStableFunc(places, func(a, b place) int { return cmp.Compare(a.start, b.start) })
	var last place
	for _, p := range places {
		if p.start < last.end && p.end > p.start {
			return fmt.Errorf("column %q, row group %d: shares the bytes from %d to %d with column %q of row group %d",
				leaves[p.column].name, p.group+1, p.start, min(last.end, p.end), leaves[last.column].name, last.group+1)
		}
		if p.end > last.end {
			last = p
		}
	}
	return nil
}

// clip shortens what a file says about itself for a message.
func clip(s string) string {
	const most = 60
	if len(s) > most {
		return s[:most] + "..."
	}
	return s
}
