package pipeline

import (
	"bytes"
	"context"
	"encoding/binary"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"

	"bentray/io/cloud"
	"bentray/io/parquetfile"
)

// formats are the endings of the names of clouds for tests that hold for all.
var formats = []string{"csv", "parquet"}

// encode is a CSV table in a format.
func encode(t *testing.T, format, text string) string {
	t.Helper()
	if format == "parquet" {
		return parquetOf(t, text, 0, nil)
	}
	return text
}

// decode reads a table in a format; null is empty.
func decode(t *testing.T, format, data string) table {
	t.Helper()
	if format == "parquet" {
		return readParquet(t, data)
	}
	return readTable(t, data)
}

// parquetOf makes a Parquet file of a CSV table: a column of the given type or,
// where none is given, DOUBLE where all its fields are numbers or empty, else
// text. Empty numbers and NaN are null. All rows are in one group where
// groupRows is 0.
func parquetOf(t *testing.T, text string, groupRows int, types map[string]string) string {
	t.Helper()
	tb := readTable(t, text)
	var columns []parquetfile.Column
	for _, name := range tb.names {
		fields := tb.column(t, name)
		numbers, all := numbersOf(fields)
		var values any = numbers
		switch {
		case types[name] == "INT32":
			values = convertAll[int32](numbers)
		case types[name] == "INT64":
			values = convertAll[int64](numbers)
		case types[name] == "text" || !all:
			values = fields
		}
		columns = append(columns, parquetfile.Column{Name: name, Values: values})
	}
	return tableOf(t, groupRows, columns...)
}

func tableOf(t *testing.T, groupRows int, columns ...parquetfile.Column) string {
	t.Helper()
	var b bytes.Buffer
	if err := parquetfile.WriteTable(&b, columns, groupRows); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func numbersOf(fields []string) (numbers []float64, all bool) {
	numbers = make([]float64, len(fields))
	for i, f := range fields {
		v, err := strconv.ParseFloat(f, 64)
		if f == "" {
			v = math.NaN()
		} else if err != nil {
			return nil, false
		}
		numbers[i] = v
	}
	return numbers, true
}

func convertAll[T int32 | int64](numbers []float64) []T {
	list := make([]T, len(numbers))
	for i, v := range numbers {
		list[i] = T(v)
	}
	return list
}

// readParquet reads all columns; numbers with the digits that give them back.
func readParquet(t *testing.T, data string) table {
	t.Helper()
	f := openParquet(t, data)
	defer f.Close()
	var tb table
	var read cloud.Request
	for i, c := range f.Columns() {
		tb.names = append(tb.names, c.Name)
		if strings.HasPrefix(c.Type, "BYTE_ARRAY") {
			read.Texts = append(read.Texts, i)
		} else {
			read.Numbers = append(read.Numbers, i)
		}
	}
	if err := f.Begin(read, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			return tb
		} else if err != nil {
			t.Fatal(err)
		}
		for i := range c.Rows {
			fields := make([]string, len(tb.names))
			for k, at := range read.Texts {
				fields[at] = string(c.Texts[k].At(i))
			}
			for k, at := range read.Numbers {
				if v := c.Numbers[k][i]; v == v {
					fields[at] = exact(v)
				}
			}
			tb.rows = append(tb.rows, fields)
		}
	}
}

// openParquet opens a file that is in memory.
func openParquet(t *testing.T, data string) *parquetfile.File {
	t.Helper()
	path := filepath.Join(t.TempDir(), "a.parquet")
	if err := os.WriteFile(path, []byte(data), 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := parquetfile.Open(path, parquetfile.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// footerOf reads a file's description by the format's own structures.
func footerOf(t *testing.T, data string) *parquet.FileMetaData {
	t.Helper()
	end := len(data) - 8
	start := end - int(binary.LittleEndian.Uint32([]byte(data[end:])))
	meta, buffer := parquet.NewFileMetaData(), &thrift.TMemoryBuffer{Buffer: bytes.NewBufferString(data[start:end])}
	if err := meta.Read(context.Background(), thrift.NewTCompactProtocolConf(buffer, nil)); err != nil {
		t.Fatal(err)
	}
	return meta
}

// withFooter is the file with another description of the same pages.
func withFooter(t *testing.T, data string, change func(*parquet.FileMetaData)) string {
	t.Helper()
	meta, buffer := footerOf(t, data), &thrift.TMemoryBuffer{Buffer: new(bytes.Buffer)}
	change(meta)
	if err := meta.Write(context.Background(), thrift.NewTCompactProtocolConf(buffer, nil)); err != nil {
		t.Fatal(err)
	}
	end := len(data) - 8
	pages := data[:end-int(binary.LittleEndian.Uint32([]byte(data[end:])))]
	size := binary.LittleEndian.AppendUint32(nil, uint32(buffer.Len()))
	return pages + buffer.String() + string(size) + "PAR1"
}

// placeOf is the position of a flat column.
func placeOf(t *testing.T, meta *parquet.FileMetaData, name string) int {
	t.Helper()
	i := slices.IndexFunc(meta.Schema, func(e *parquet.SchemaElement) bool { return e.Name == name })
	if i < 1 {
		t.Fatalf("no column %q", name)
	}
	return i - 1
}

// asTimestamps makes an INT64 column one of microseconds since 1970, UTC.
func asTimestamps(t *testing.T, data, name string) string {
	t.Helper()
	return withFooter(t, data, func(meta *parquet.FileMetaData) {
		micros := parquet.ConvertedType_TIMESTAMP_MICROS
		meta.Schema[1+placeOf(t, meta, name)].ConvertedType = &micros
	})
}

// asFloats makes INT32 columns FLOAT ones of the same bytes.
func asFloats(t *testing.T, data string, names ...string) string {
	t.Helper()
	return withFooter(t, data, func(meta *parquet.FileMetaData) {
		for _, name := range names {
			i, float := placeOf(t, meta, name), parquet.Type_FLOAT
			meta.Schema[1+i].Type = &float
			for _, g := range meta.RowGroups {
				g.Columns[i].MetaData.Type, g.Columns[i].MetaData.Statistics = float, nil
			}
		}
	})
}

// chunksOf returns the bytes of a column's chunks, one a row group.
func chunksOf(t *testing.T, data, name string) (chunks []string) {
	t.Helper()
	meta := footerOf(t, data)
	i := placeOf(t, meta, name)
	for _, g := range meta.RowGroups {
		m := g.Columns[i].MetaData
		start := m.DataPageOffset
		if d := m.GetDictionaryPageOffset(); d > 0 && d < start {
			start = d
		}
		chunks = append(chunks, data[start:start+m.TotalCompressedSize])
	}
	return chunks
}
