package csvfile

import (
	"encoding/binary"
	"math"
	"strconv"
)

// maxDecimals is the most decimals a column may have.
const maxDecimals = 15

// pairs holds the two digits of 0 to 99, the first in the low byte.
var pairs = func() (p [100]uint16) {
	for i := range p {
		p[i] = uint16('0'+i/10) | uint16('0'+i%10)<<8
	}
	return p
}()

// appendFixed appends a finite v with a fixed number of decimals, 0 to
// maxDecimals. It rounds v*10^decimals, a double itself, half away from zero;
// where that is 2^53 or more, the exact v is rounded by strconv. Zero has no
// sign.
func appendFixed(dst []byte, v float64, decimals int) []byte {
	scaled := math.Abs(float64(v * exactPowers[decimals])) // rounded here, so that it is not fused with what follows
	if scaled >= 1<<53 {
		return strconv.AppendFloat(dst, v, 'f', decimals, 64)
	}
	n := uint64(scaled)
	if scaled-float64(n) >= 0.5 {
		n++
	}
	return appendDigits(dst, n, decimals, v < 0 && n > 0)
}

// appendDigits appends n/10^decimals, n up to 2^53.
func appendDigits(dst []byte, n uint64, decimals int, negative bool) []byte {
	var text [20]byte // sign, 16 digits, point; or "0." and 15 decimals
	i := len(text)
	for k := decimals; k >= 2; k -= 2 {
		i -= 2
		binary.LittleEndian.PutUint16(text[i:], pairs[n%100])
		n /= 100
	}
	if decimals%2 == 1 {
		i--
		text[i] = byte('0' + n%10)
		n /= 10
	}
	if decimals > 0 {
		i--
		text[i] = '.'
	}
	for ; n >= 100; n /= 100 {
		i -= 2
		binary.LittleEndian.PutUint16(text[i:], pairs[n%100])
	}
	if n >= 10 {
		i -= 2
		binary.LittleEndian.PutUint16(text[i:], pairs[n])
	} else {
		i--
		text[i] = byte('0' + n)
	}
	if negative {
		i--
		text[i] = '-'
	}
	return append(dst, text[i:]...)
}
