package parquetfile

import (
	"fmt"
	"io"
	"strings"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// TestGiantTexts reads pages of texts that are too large for the usual memory.
func TestGiantTexts(t *testing.T) {
	const rows = 300_000
	for _, encoding := range encodings[parquet.Type_BYTE_ARRAY] {
		t.Run(encoding.String(), func(t *testing.T) {
			c := built{name: "views", typ: parquet.Type_BYTE_ARRAY, codec: parquet.CompressionCodec_SNAPPY, encoding: encoding}
			for i := range rows {
				c.values = append(c.values, any(fmt.Sprintf("%09d cam%d;cam%d", i*7919%1_000_003, i, i+1)))
				if i%1000 == 3 {
					c.values[i] = nil
				}
			}
			c.values[77] = strings.Repeat("long", 50_000) // more than a buffer
			checkColumns(t, []built{c}, buildFile(t, []built{c}, []int{rows}, nil))
		})
	}
}

// TestLongTexts ends pieces where their texts are long, and loses no row.
func TestLongTexts(t *testing.T) {
	const rows, long = 20_000, 2 << 10
	number := built{name: "n", typ: parquet.Type_INT32, required: true}
	text := built{name: "a", typ: parquet.Type_BYTE_ARRAY, required: true, encoding: parquet.Encoding_RLE_DICTIONARY}
	for i := range rows {
		number.values = append(number.values, int32(i))
		text.values = append(text.values, any(strings.Repeat(string(rune('a'+i%26)), long)))
	}
	other := text
	other.name = "b"
	f, err := Open(buildFile(t, []built{number, text, other}, []int{rows}, nil), Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if err := f.Begin(cloud.Request{Numbers: []int{0}, Texts: []int{1, 2}}, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	var c cloud.Chunk
	row := 0
	for {
		if err := f.Next(&c); err == io.EOF {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		if n := len(c.Texts[0].Bytes) + len(c.Texts[1].Bytes); n > 17<<20 {
			t.Errorf("a piece has %d bytes of texts, want at most 17 MiB", n)
		}
		for i := range c.Rows {
			if got := c.Texts[1].At(i); c.Numbers[0][i] != float64(row) || len(got) != long || got[0] != byte('a'+row%26) {
				t.Fatalf("row %d is number %v and %d of %q", row, c.Numbers[0][i], len(got), got[:1])
			}
			row++
		}
	}
	if row != rows {
		t.Errorf("%d rows, want %d", row, rows)
	}
}
