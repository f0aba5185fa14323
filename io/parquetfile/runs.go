package parquetfile

import "encoding/binary"

// code is a number that is stored in as few bits as its column needs: a level,
// or the position of a value in a dictionary.
type code interface{ uint8 | uint32 }

// appendRuns encodes numbers of the given width (1 to 32 bits) as the mix of
// runs and bit-packed groups of 8 that hybrid reads. Runs of 8 and more, and
// the end, become runs.
func appendRuns[T code](b []byte, list []T, width uint) []byte {
	for i := 0; i < len(list); {
		n := runLength(list[i:])
		if n >= 8 || i+n == len(list) {
			b = appendRun(b, n, list[i], width)
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
func runLength[T code](list []T) int {
	n := 1
	for n < len(list) && list[n] == list[0] {
		n++
	}
	return n
}

// appendRun encodes one number count times: it takes the whole bytes that its
// width needs.
func appendRun[T code](b []byte, count int, v T, width uint) []byte {
	if count == 0 {
		return b
	}
	b = binary.AppendUvarint(b, uint64(count)<<1)
	for bit := uint(0); bit < width; bit += 8 {
		b = append(b, byte(v>>bit))
	}
	return b
}

// appendPacked encodes numbers in groups of 8, the last one filled with zeros.
func appendPacked[T code](b []byte, list []T, width uint) []byte {
	groups := (len(list) + 7) / 8
	b = binary.AppendUvarint(b, uint64(groups)<<1|1)
	end := len(b) + groups*int(width)
	var word uint64
	used := uint(0) // bits of word, below 32
	for _, v := range list {
		word |= uint64(v) << (used & 31)
		if used += width; used >= 32 {
			b = binary.LittleEndian.AppendUint32(b, uint32(word))
			word >>= 32
			used -= 32
		}
	}
	for len(b) < end {
		b = append(b, byte(word))
		word >>= 8
	}
	return b
}
