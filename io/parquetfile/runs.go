package parquetfile

import "encoding/binary"

// appendRuns encodes small numbers of the given width (1 to 8 bits) as the mix
// of runs and bit-packed groups of 8 that hybrid reads. Runs of 8 and more,
// and the end, become runs.
func appendRuns(b []byte, list []uint8, width uint) []byte {
	for i := 0; i < len(list); {
		n := runLength(list[i:])
		if n >= 8 || i+n == len(list) {
			b = appendRun(b, n, list[i])
			i += n
			continue
		}
		from := i
		for i < len(list) && runLength(list[i:min(i+8, len(list))]) < 8 {
			i = min(i+8, len(list))
		}
		b = appendPacked(b, list[from:i], width)
	}
	return b
}

// runLength counts how often the first number is repeated.
func runLength(list []uint8) int {
	n := 1
	for n < len(list) && list[n] == list[0] {
		n++
	}
	return n
}

// appendRun encodes one number count times.
func appendRun(b []byte, count int, v uint8) []byte {
	if count == 0 {
		return b
	}
	return append(binary.AppendUvarint(b, uint64(count)<<1), v)
}

// appendPacked encodes numbers in groups of 8, the last one filled with zeros.
func appendPacked(b []byte, list []uint8, width uint) []byte {
	b = binary.AppendUvarint(b, uint64(len(list)+7)/8<<1|1)
	for len(list) > 0 {
		var word uint64
		n := min(len(list), 8)
		for i, v := range list[:n] {
			word |= uint64(v) << (uint(i) * width)
		}
		for range width {
			b = append(b, byte(word))
			word >>= 8
		}
		list = list[n:]
	}
	return b
}
