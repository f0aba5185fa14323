package csvfile

import (
	"bytes"
	"math"
	"math/bits"
	"strconv"
	"unsafe"
)

// exactPowers are the powers of ten that a double holds exactly.
var exactPowers = [23]float64{
	1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11,
	1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
}

// wholePowers are the powers of ten below 2^64.
var wholePowers = func() (p [20]uint64) {
	p[0] = 1
	for i := 1; i < len(p); i++ {
		p[i] = 10 * p[i-1]
	}
	return p
}()

// parseNumber reads a field as the nearest double; an empty field is NaN. Plain
// decimals of up to 19 digits are done here: where they make a whole number up to
// 2^53, that and the power of ten are exact doubles, so that their quotient is
// rounded once (Clinger 1990, How to read floating point numbers accurately);
// else integers are divided. The rest is left to strconv.
func parseNumber(field []byte) (float64, bool) {
	var digits uint64
	begin, point := 0, -1
	if len(field) > 0 && field[0] == '-' {
		begin = 1
	}
	for i := begin; i < len(field); i++ {
		d := uint64(field[i]) - '0'
		if d <= 9 {
			digits = digits*10 + d
		} else if field[i] == '.' && point < 0 {
			point = i
		} else {
			return parseAny(field)
		}
	}
	count, decimals := len(field)-begin, 0
	if point >= 0 {
		count--
		decimals = len(field) - 1 - point
	}
	var v float64
	switch {
	case count == 0:
		return parseAny(field)
	case count > 19: // may have overflowed
		return parseDecimal(field), true
	case digits > 1<<53:
		v = quotient(digits, decimals)
	default:
		v = float64(digits) / exactPowers[decimals]
	}
	if begin > 0 {
		v = -v
	}
	return v, true
}

// quotient returns the double nearest to n/10^decimals, n above 0 and decimals
// up to 19. The integer quotient has 63 bits or more, ten more than a double; a
// remainder is told by its last bit, so that the conversion rounds as if it saw
// all digits.
func quotient(n uint64, decimals int) float64 {
	d := wholePowers[decimals]
	up, down := bits.LeadingZeros64(n), bits.LeadingZeros64(d)
	n, d = n<<up, d<<down
	q, rest := bits.Div64(n>>1, n<<63, d) // n 2^63 / d
	if rest != 0 {
		q |= 1
	}
	power := uint64(1023+down-up-63) << 52
	return float64(q) * math.Float64frombits(power)
}

// parseAny reads every number that parseNumber accepts.
func parseAny(field []byte) (float64, bool) {
	field = trim(field)
	if isQuoted(field) {
		field = trim(field[1 : len(field)-1])
	}
	if len(field) == 0 {
		return math.NaN(), true
	}
	if !isDecimal(field) {
		return parseWord(field)
	}
	return parseDecimal(field), true
}

// parseDecimal reads what isDecimal accepts. Beyond the range of doubles it is
// an infinity.
func parseDecimal(field []byte) float64 {
	v, _ := strconv.ParseFloat(unsafe.String(&field[0], len(field)), 64) // only the range can be wrong
	return v
}

// isDecimal tells whether a text is a decimal number, with or without sign,
// point and exponent.
func isDecimal(s []byte) bool {
	s = afterSign(s)
	whole := digitsAhead(s)
	s = s[whole:]
	part := 0
	if len(s) > 0 && s[0] == '.' {
		part = digitsAhead(s[1:])
		s = s[1+part:]
	}
	if whole+part == 0 {
		return false
	}
	if len(s) == 0 {
		return true
	}
	exponent := afterSign(s[1:])
	return s[0]|0x20 == 'e' && len(exponent) > 0 && digitsAhead(exponent) == len(exponent)
}

func afterSign(s []byte) []byte {
	if len(s) > 0 && (s[0] == '-' || s[0] == '+') {
		return s[1:]
	}
	return s
}

func digitsAhead(s []byte) int {
	n := 0
	for n < len(s) && s[n]-'0' <= 9 {
		n++
	}
	return n
}

// parseWord reads the words for what is not a finite number.
func parseWord(s []byte) (float64, bool) {
	sign := 1
	if s[0] == '-' {
		sign = -1
	}
	word := afterSign(s)
	switch {
	case bytes.EqualFold(word, []byte("nan")):
		return math.NaN(), true
	case bytes.EqualFold(word, []byte("inf")), bytes.EqualFold(word, []byte("infinity")):
		return math.Inf(sign), true
	}
	return 0, false
}
