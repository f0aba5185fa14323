package parquetfile

import (
	"encoding/binary"
	"errors"
	"math/bits"
)

var errShort = errors.New("the data end before the values do")

// unpack reads unsigned numbers of a fixed width of 0 to 64 bits, packed from the low
// bits up, beginning at the given bit of data. All of them must be there.
func unpack(dst []uint64, data []byte, bit int, width uint) error {
	if bit+len(dst)*int(width) > 8*len(data) {
		return errShort
	}
	i := 0
	if width <= 56 { // with the 7 bits of an odd start they fit in one word
		mask := uint64(1)<<width - 1
		for ; i < len(dst) && bit>>3+8 <= len(data); i++ {
			dst[i] = binary.LittleEndian.Uint64(data[bit>>3:]) >> (bit & 7) & mask
			bit += int(width)
		}
	}
	for ; i < len(dst); i++ {
		dst[i] = bitsAt(data, bit, width)
		bit += int(width)
	}
	return nil
}

// bitsAt reads one number byte by byte: at the data's end, and for wide ones.
func bitsAt(data []byte, bit int, width uint) (v uint64) {
	for got := uint(0); got < width; {
		b := uint64(data[bit>>3]) >> (bit & 7)
		v |= b << got
		n := uint(8 - bit&7)
		got += n
		bit += int(n)
	}
	if width < 64 {
		v &= 1<<width - 1
	}
	return v
}

// ones counts the bits set among the first n of data.
func ones(data []byte, n int) (count int) {
	for ; n >= 64; n -= 64 {
		count += bits.OnesCount64(binary.LittleEndian.Uint64(data))
		data = data[8:]
	}
	for ; n > 0; n -= 8 {
		b := data[0]
		if n < 8 {
			b &= 1<<n - 1
		}
		count += bits.OnesCount8(b)
		data = data[1:]
	}
	return count
}

// uvarint takes an unsigned LEB128 number off the front of data.
func uvarint(data []byte) (uint64, []byte, error) {
	v, n := binary.Uvarint(data)
	if n <= 0 {
		return 0, nil, errors.New("a length is damaged")
	}
	return v, data[n:], nil
}
