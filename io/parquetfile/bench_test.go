package parquetfile

import (
	"fmt"
	"io"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

const benchRows = 4 * pieceRows

// benchColumn has numbers that do not repeat, or few.
func benchColumn(name string, e parquet.Encoding, codec parquet.CompressionCodec, few bool) built {
	c := built{name: name, typ: parquet.Type_DOUBLE, encoding: e, codec: codec}
	for i := range benchRows {
		v := float64(i) / 7
		if few {
			v = float64(i * i % 1000)
		}
		c.values = append(c.values, v)
	}
	return c
}

// BenchmarkDecode reads one OPTIONAL column of doubles.
func BenchmarkDecode(b *testing.B) {
	cases := []struct {
		name     string
		encoding parquet.Encoding
		codec    parquet.CompressionCodec
		few      bool
	}{
		{"plain", parquet.Encoding_PLAIN, parquet.CompressionCodec_UNCOMPRESSED, false},
		{"plain snappy", parquet.Encoding_PLAIN, parquet.CompressionCodec_SNAPPY, false},
		{"plain zstd", parquet.Encoding_PLAIN, parquet.CompressionCodec_ZSTD, false},
		{"dictionary", parquet.Encoding_RLE_DICTIONARY, parquet.CompressionCodec_UNCOMPRESSED, true},
		{"byte stream split", parquet.Encoding_BYTE_STREAM_SPLIT, parquet.CompressionCodec_UNCOMPRESSED, false},
	}
	for _, c := range cases {
		column := benchColumn("v", c.encoding, c.codec, c.few)
		column.style = packedOnly
		for range benchRows / pieceRows {
			column.pages = append(column.pages, pieceRows)
		}
		path := buildFile(b, []built{column}, []int{benchRows}, nil)
		b.Run(c.name, func(b *testing.B) {
			b.SetBytes(8 * benchRows)
			b.ReportAllocs()
			for b.Loop() {
				f, err := Open(path, Options{})
				if err != nil {
					b.Fatal(err)
				}
				if err := f.Begin(cloud.Request{Numbers: []int{0}}, cloud.Layout{}, nil); err != nil {
					b.Fatal(err)
				}
				drain(b, f)
				f.Close()
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/benchRows, "ns/row")
		})
	}
}

func drain(b *testing.B, f *File) {
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			return
		} else if err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkEncode makes pages of 3 coordinates and 6 added columns.
func BenchmarkEncode(b *testing.B) {
	columns := []built{
		benchColumn("x", parquet.Encoding_PLAIN, parquet.CompressionCodec_UNCOMPRESSED, false),
		benchColumn("y", parquet.Encoding_PLAIN, parquet.CompressionCodec_UNCOMPRESSED, false),
		benchColumn("z", parquet.Encoding_PLAIN, parquet.CompressionCodec_UNCOMPRESSED, false),
	}
	f, err := Open(buildFile(b, columns, []int{benchRows}, nil), Options{})
	if err != nil {
		b.Fatal(err)
	}
	defer f.Close()
	layout := surveyLayout()
	layout.XYZ = [3]int{0, 1, 2}
	if err := f.Begin(cloud.Request{Numbers: []int{0, 1, 2}}, layout, io.Discard); err != nil {
		b.Fatal(err)
	}
	var c cloud.Chunk
	if err := f.Next(&c); err != nil {
		b.Fatal(err)
	}
	c.Resize(c.Rows, layout)
	for i := range c.Rows {
		c.Class[i] = uint8(i / 100 % 2)
		c.Added[0][i], c.Added[1][i] = float64(i), 4
	}
	b.SetBytes(int64(8 * c.Rows * 5))
	b.ReportAllocs()
	for b.Loop() {
		if err := f.Encode(&c); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(c.Rows), "ns/row")
}

// BenchmarkLabels makes pages of a label held by row, in runs and without.
func BenchmarkLabels(b *testing.B) {
	for _, count := range []int{3, 300, 5000} {
		b.Run(fmt.Sprint(count, " names"), func(b *testing.B) {
			d, err := newNames(&cloud.Added{Names: labelNames(count), Type: cloud.Label})
			if err != nil {
				b.Fatal(err)
			}
			var e encoder
			var g pages
			positions := labelPositions(count, 1)[:pieceRows]
			b.SetBytes(8 * pieceRows)
			b.ReportAllocs()
			for b.Loop() {
				g.bytes, g.ends, g.stats = g.bytes[:0], g.ends[:0], g.stats[:0]
				if err := e.labels(&g, positions, d); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/pieceRows, "ns/row")
		})
	}
}

// BenchmarkRewrite copies a whole file with two workers.
func BenchmarkRewrite(b *testing.B) {
	columns := survey(benchRows)
	path := buildFile(b, columns, []int{benchRows / 2, benchRows / 2}, nil)
	b.ReportAllocs()
	for b.Loop() {
		f, err := Open(path, Options{})
		if err != nil {
			b.Fatal(err)
		}
		if err := rewriteTo(io.Discard, f, cloud.Request{Numbers: []int{1, 2, 3}}, surveyLayout(), 2, fillSurvey); err != nil {
			b.Fatal(err)
		}
		f.Close()
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/benchRows, "ns/row")
}
