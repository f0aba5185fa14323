package parquetfile

import (
	"bytes"
	"context"
	"encoding/binary"
	"hash/crc32"
	"math/bits"
	"testing"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"
)

func thriftBytes(t testing.TB, s thrift.TStruct) []byte {
	t.Helper()
	b := &thrift.TMemoryBuffer{Buffer: new(bytes.Buffer)}
	if err := s.Write(context.Background(), thrift.NewTCompactProtocolConf(b, nil)); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func crcOf(b []byte) uint32 { return crc32.ChecksumIEEE(b) }

func (c *built) encode(set, dict []any) []byte {
	switch c.encoding {
	case parquet.Encoding_PLAIN_DICTIONARY, parquet.Encoding_RLE_DICTIONARY:
		return indexBytes(set, dict, c.style)
	case parquet.Encoding_BYTE_STREAM_SPLIT:
		return splitBytes(plainBytes(set), len(set))
	case parquet.Encoding_DELTA_BINARY_PACKED:
		return deltaBytes(integers(set))
	case parquet.Encoding_DELTA_LENGTH_BYTE_ARRAY:
		return lengthBytes(set)
	case parquet.Encoding_DELTA_BYTE_ARRAY:
		return frontBytes(set)
	case parquet.Encoding_RLE:
		var list []uint64
		for _, v := range set {
			list = append(list, map[any]uint64{false: 0, true: 1}[v])
		}
		data := hybridBytes(list, 1, c.style)
		return append(binary.LittleEndian.AppendUint32(nil, uint32(len(data))), data...)
	}
	return plainBytes(set)
}

func indexBytes(set, dict []any, s style) []byte {
	where := map[any]uint64{}
	for i, v := range dict {
		where[v] = uint64(i)
	}
	var list []uint64
	for _, v := range set {
		list = append(list, where[v])
	}
	width := 0
	if len(dict) > 1 {
		width = bits.Len(uint(len(dict) - 1))
	}
	return append([]byte{byte(width)}, hybridBytes(list, width, s)...)
}

// bitWriter packs numbers from the low bits up.
type bitWriter struct {
	b    []byte
	used int
}

func (w *bitWriter) add(v uint64, width int) {
	for i := range width {
		if w.used%8 == 0 {
			w.b = append(w.b, 0)
		}
		w.b[w.used/8] |= byte(v>>i&1) << (w.used % 8)
		w.used++
	}
}

// hybridBytes makes runs, or bit-packed groups, or runs of even length of
// either kind in turn. The last packed group is cut short behind its last value.
func hybridBytes(list []uint64, width int, s style) (b []byte) {
	for turn := 0; len(list) > 0; turn++ {
		packed := s == packedOnly || s == mixed && turn%2 == 0
		n := 1
		switch {
		case packed && s == mixed:
			n = min(24, len(list))
		case packed:
			n = len(list)
		default:
			for n < len(list) && list[n] == list[0] {
				n++
			}
		}
		if packed {
			b = binary.AppendUvarint(b, uint64((n+7)/8)<<1|1)
			var w bitWriter
			for _, v := range list[:n] {
				w.add(v, width)
			}
			b = append(b, w.b...)
		} else {
			b = binary.AppendUvarint(b, uint64(n)<<1)
			for i := 0; i < (width+7)/8; i++ {
				b = append(b, byte(list[0]>>(8*i)))
			}
		}
		list = list[n:]
	}
	return b
}

func splitBytes(plain []byte, n int) (b []byte) {
	if n == 0 {
		return nil
	}
	size := len(plain) / n
	for k := range size {
		for i := range n {
			b = append(b, plain[i*size+k])
		}
	}
	return b
}

func integers(set []any) (list []int64) {
	for _, v := range set {
		switch v := v.(type) {
		case int32:
			list = append(list, int64(v))
		case int64:
			list = append(list, v)
		}
	}
	return list
}

// deltaBytes uses blocks of 128 values in 4 mini-blocks.
func deltaBytes(list []int64) []byte {
	b := binary.AppendUvarint(nil, 128)
	b = binary.AppendUvarint(b, 4)
	b = binary.AppendUvarint(b, uint64(len(list)))
	if len(list) == 0 {
		return binary.AppendVarint(b, 0)
	}
	b = binary.AppendVarint(b, list[0])
	var steps []int64
	for i := 1; i < len(list); i++ {
		steps = append(steps, list[i]-list[i-1])
	}
	for len(steps) > 0 {
		n := min(128, len(steps))
		b = deltaBlock(b, steps[:n])
		steps = steps[n:]
	}
	return b
}

func deltaBlock(b []byte, steps []int64) []byte {
	least := steps[0]
	for _, s := range steps {
		least = min(least, s)
	}
	b = binary.AppendVarint(b, least)
	var widths, data []byte
	for m := range 4 {
		from, to := min(32*m, len(steps)), min(32*m+32, len(steps))
		if from == to {
			widths = append(widths, 0xee) // what is not used may hold anything
			continue
		}
		width := 0
		for _, s := range steps[from:to] {
			width = max(width, bits.Len64(uint64(s-least)))
		}
		var w bitWriter
		for i := range 32 {
			if from+i < to {
				w.add(uint64(steps[from+i]-least), width)
			} else {
				w.add(0, width)
			}
		}
		widths, data = append(widths, byte(width)), append(data, w.b...)
	}
	return append(append(b, widths...), data...)
}

func lengthBytes(set []any) []byte {
	var lengths []int64
	var all []byte
	for _, v := range set {
		lengths = append(lengths, int64(len(v.(string))))
		all = append(all, v.(string)...)
	}
	return append(deltaBytes(lengths), all...)
}

func frontBytes(set []any) []byte {
	var prefixes []int64
	var rest []any
	last := ""
	for _, v := range set {
		s, n := v.(string), 0
		for n < min(len(s), len(last)) && s[n] == last[n] {
			n++
		}
		prefixes, rest = append(prefixes, int64(n)), append(rest, s[n:])
		last = s
	}
	return append(deltaBytes(prefixes), lengthBytes(rest)...)
}
