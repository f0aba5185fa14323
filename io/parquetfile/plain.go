package parquetfile

import (
	"encoding/binary"
	"math"
)

// numbers decodes the values of one page, in order.
type numbers interface {
	// next decodes len(dst) values.
	next(dst []float64) error
}

// plainNumbers are stored one after the other, little-endian.
type plainNumbers struct {
	kind kind
	data []byte
}

func (p *plainNumbers) next(dst []float64) error {
	n := len(dst) * p.kind.size()
	if n > len(p.data) {
		return errShort
	}
	convert(dst, p.data, p.kind)
	p.data = p.data[n:]
	return nil
}

// convert turns stored values into numbers. src holds at least len(dst) of them.
func convert(dst []float64, src []byte, k kind) {
	switch {
	case k == doubles:
		for i := range dst {
			dst[i] = math.Float64frombits(binary.LittleEndian.Uint64(src[8*i:]))
		}
	case k == floats:
		for i := range dst {
			dst[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(src[4*i:])))
		}
	case k.size() == 4:
		for i := range dst {
			dst[i] = k.number(int64(int32(binary.LittleEndian.Uint32(src[4*i:]))))
		}
	default:
		for i := range dst {
			dst[i] = k.number(int64(binary.LittleEndian.Uint64(src[8*i:])))
		}
	}
}

// number turns a stored integer into what it stands for.
func (k kind) number(v int64) float64 {
	switch k {
	case uint32s:
		return float64(uint32(v))
	case uint64s:
		return float64(uint64(v))
	case patterns:
		return math.Float64frombits(uint64(v))
	case millis:
		return seconds(v, 1e3)
	case micros:
		return seconds(v, 1e6)
	case nanos:
		return seconds(v, 1e9)
	}
	return float64(v)
}

// seconds turns a time in parts of a second into seconds. Whole and fraction
// are taken apart, since the parts since 1970 need more than the 53 bits of a
// float64: so whole seconds and binary fractions are exact.
func seconds(v, parts int64) float64 {
	return float64(v/parts) + float64(v%parts)/float64(parts)
}

// plainBooleans are bits.
type plainBooleans struct {
	data []byte
	bit  int
}

func (p *plainBooleans) next(dst []float64) error {
	if p.bit+len(dst) > 8*len(p.data) {
		return errShort
	}
	for i := range dst {
		dst[i] = float64(p.data[p.bit>>3] >> (p.bit & 7) & 1)
		p.bit++
	}
	return nil
}
