package parquetfile

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// readAll returns what a request finds in a whole file.
func readAll(path string, o Options, read cloud.Request) (numbers [][]float64, texts [][]string, err error) {
	f, err := Open(path, o)
	if err != nil {
		return nil, nil, err
	}
	return readOpen(f, read)
}

// memory is a file that is not on disk.
type memory struct{ *bytes.Reader }

func (memory) Close() error { return nil }

// readBytes is readAll for a file in memory, called "made.parquet".
func readBytes(b []byte, o Options, read cloud.Request) (numbers [][]float64, texts [][]string, err error) {
	f, err := newFile("made.parquet", memory{bytes.NewReader(b)}, int64(len(b)), o)
	if err != nil {
		return nil, nil, err
	}
	return readOpen(f, read)
}

// readOpen reads and closes a file.
func readOpen(f *File, read cloud.Request) (numbers [][]float64, texts [][]string, err error) {
	defer f.Close()
	if err := f.Begin(read, cloud.Layout{}, nil); err != nil {
		return nil, nil, err
	}
	numbers, texts = make([][]float64, len(read.Numbers)), make([][]string, len(read.Texts))
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			return numbers, texts, nil
		} else if err != nil {
			return nil, nil, err
		}
		if err := f.Decode(&c); err != nil {
			return nil, nil, err
		}
		for k := range numbers {
			numbers[k] = append(numbers[k], c.Numbers[k][:c.Rows]...)
		}
		for k := range texts {
			for i := range c.Rows {
				texts[k] = append(texts[k], string(c.Texts[k].At(i)))
			}
		}
	}
}

// want is the number that a value stands for, by Go's own conversions.
func want(v any) float64 {
	switch v := v.(type) {
	case float64:
		return v
	case float32:
		return float64(v)
	case int32:
		return float64(v)
	case int64:
		return float64(v)
	case bool:
		if v {
			return 1
		}
		return 0
	}
	return math.NaN()
}

func sameNumber(a, b float64) bool {
	return math.Float64bits(a) == math.Float64bits(b) || a != a && b != b
}

var codecs = []parquet.CompressionCodec{
	parquet.CompressionCodec_UNCOMPRESSED, parquet.CompressionCodec_SNAPPY, parquet.CompressionCodec_GZIP, parquet.CompressionCodec_ZSTD,
}

var nullPatterns = []struct {
	name   string
	isNull func(i int) bool
}{
	{"no nulls", func(int) bool { return false }},
	{"all null", func(int) bool { return true }},
	{"every other", func(i int) bool { return i%2 == 1 }},
	{"first rows", func(i int) bool { return i < 600 }},
	{"last rows", func(i int) bool { return i >= 1100 }},
	{"scattered", func(i int) bool { return i*i%11 == 3 }},
}

// sample makes a value of a type; few makes it one of a few.
func sample(r *rand.Rand, t parquet.Type, few bool) any {
	pick := r.Uint64()
	if few {
		pick %= 5
	}
	switch t {
	case parquet.Type_DOUBLE:
		return float64(int64(pick)) / 7
	case parquet.Type_FLOAT:
		return float32(int64(pick)) / 7
	case parquet.Type_INT32:
		return int32(pick)
	case parquet.Type_INT64:
		return int64(pick)
	case parquet.Type_BOOLEAN:
		return pick&1 == 1
	}
	return fmt.Sprintf("cam%d;%016x", pick%7, pick)[:pick%20]
}

var encodings = map[parquet.Type][]parquet.Encoding{
	parquet.Type_DOUBLE:     {parquet.Encoding_PLAIN, parquet.Encoding_RLE_DICTIONARY, parquet.Encoding_BYTE_STREAM_SPLIT},
	parquet.Type_FLOAT:      {parquet.Encoding_PLAIN, parquet.Encoding_PLAIN_DICTIONARY, parquet.Encoding_BYTE_STREAM_SPLIT},
	parquet.Type_INT32:      {parquet.Encoding_PLAIN, parquet.Encoding_RLE_DICTIONARY, parquet.Encoding_DELTA_BINARY_PACKED, parquet.Encoding_BYTE_STREAM_SPLIT},
	parquet.Type_INT64:      {parquet.Encoding_PLAIN, parquet.Encoding_RLE_DICTIONARY, parquet.Encoding_DELTA_BINARY_PACKED, parquet.Encoding_BYTE_STREAM_SPLIT},
	parquet.Type_BOOLEAN:    {parquet.Encoding_PLAIN, parquet.Encoding_RLE},
	parquet.Type_BYTE_ARRAY: {parquet.Encoding_PLAIN, parquet.Encoding_RLE_DICTIONARY, parquet.Encoding_DELTA_LENGTH_BYTE_ARRAY, parquet.Encoding_DELTA_BYTE_ARRAY},
}

// TestRead reads every type, encoding, codec, page version and null pattern that
// can be read, as encoded by hand.
func TestRead(t *testing.T) {
	const seed, rows = 7, 1300
	for typ, list := range encodings {
		for _, encoding := range list {
			for _, codec := range codecs {
				t.Run(fmt.Sprintf("%s/%s/%s", typ, encoding, codec), func(t *testing.T) {
					r := rand.New(rand.NewPCG(seed, uint64(encoding)))
					var columns []built
					for version := 1; version <= 2; version++ {
						for _, pattern := range nullPatterns {
							c := built{
								name: fmt.Sprintf("%s, version %d", pattern.name, version), typ: typ, encoding: encoding, codec: codec, version: version,
								pages: []int{1, 0, 1024, 7}, style: style(len(columns) % 3), checksum: len(columns)%2 == 0,
								required: pattern.name == "no nulls" && version == 1,
							}
							for i := range rows {
								v := sample(r, typ, len(columns)%2 == 0)
								if pattern.isNull(i) {
									v = nil
								}
								c.values = append(c.values, v)
							}
							columns = append(columns, c)
						}
					}
					checkColumns(t, columns, buildFile(t, columns, []int{1, rows - 10, 9}, nil))
				})
			}
		}
	}
}

func checkColumns(t *testing.T, columns []built, path string) {
	t.Helper()
	var read cloud.Request
	text := columns[0].typ == parquet.Type_BYTE_ARRAY
	for i := range columns {
		if text {
			read.Texts = append(read.Texts, i)
		} else {
			read.Numbers = append(read.Numbers, i)
		}
	}
	numbers, texts, err := readAll(path, Options{}, read)
	if err != nil {
		t.Fatal(err)
	}
	for k, c := range columns {
		for i, v := range c.values {
			if text {
				s, _ := v.(string)
				if texts[k][i] != s {
					t.Fatalf("%s: row %d is %q, want %q", c.name, i, texts[k][i], s)
				}
			} else if !sameNumber(numbers[k][i], want(v)) {
				t.Fatalf("%s: row %d is %v, want %v", c.name, i, numbers[k][i], want(v))
			}
		}
	}
}
