package parquetfile

import (
	"encoding/binary"
	"errors"
	"fmt"
)

const (
	maxDeltaBlock = 1 << 16 // values of one block
	maxMiniBlocks = 1 << 9  // of one block
)

// delta reads DELTA_BINARY_PACKED integers: differences, less the smallest of
// their block, packed in mini-blocks of a width each.
type delta struct {
	data   []byte // behind the mini-block at hand
	mini   int    // values of a mini-block
	minis  int    // mini-blocks of a block
	total  int    // values in all
	left   int    // values not yet handed out
	value  int64  // the last one handed out, or the first before that
	least  int64  // smallest difference of the block
	widths []byte // of the mini-blocks to come in the block
	packed []byte // the mini-block at hand
	width  uint
	bit    int // its next difference
	inMini int // differences left in it
	buffer [block]uint64
}

// reset reads the head of the encoded data.
func (d *delta) reset(data []byte) error {
	var head [3]uint64 // values of a block, mini-blocks of a block, values
	var err error
	for i := range head {
		if head[i], data, err = uvarint(data); err != nil {
			return err
		}
	}
	size, minis := head[0], head[1]
	if size == 0 || size > maxDeltaBlock || minis == 0 || minis > maxMiniBlocks || size%minis != 0 || size/minis%8 != 0 {
		return fmt.Errorf("delta blocks have %d values in %d parts", size, minis)
	}
	if head[2] > 1<<31 {
		return fmt.Errorf("delta data have %d values", head[2])
	}
	first, n := binary.Varint(data)
	if n <= 0 {
		return errors.New("a first value is damaged")
	}
	d.data, d.mini, d.minis = data[n:], int(size/minis), int(minis)
	d.total, d.left, d.value = int(head[2]), int(head[2]), first
	d.widths, d.packed, d.inMini = nil, nil, 0
	return nil
}

// next reads len(dst) values.
func (d *delta) next(dst []int64) error {
	if len(dst) > d.left {
		return errShort
	}
	if len(dst) > 0 && d.left == d.total {
		dst[0] = d.value
		d.left--
		dst = dst[1:]
	}
	for len(dst) > 0 {
		if d.inMini == 0 {
			if err := d.nextMini(); err != nil {
				return err
			}
		}
		n := min(len(dst), d.inMini, block)
		if err := d.add(dst[:n]); err != nil {
			return err
		}
		dst = dst[n:]
	}
	return nil
}

// add sums differences of the mini-block at hand; sums wrap round as the
// format says.
func (d *delta) add(dst []int64) error {
	steps := d.buffer[:len(dst)]
	if err := unpack(steps, d.packed, d.bit, d.width); err != nil {
		return err
	}
	v := d.value
	for i, s := range steps {
		v += d.least + int64(s)
		dst[i] = v
	}
	d.value = v
	d.bit += len(dst) * int(d.width)
	d.inMini -= len(dst)
	d.left -= len(dst)
	return nil
}

// nextMini begins a mini-block, and the block before it where it is the first.
// The last one may be cut short behind its last value.
func (d *delta) nextMini() error {
	if len(d.widths) == 0 {
		least, n := binary.Varint(d.data)
		if n <= 0 || len(d.data) < n+d.minis {
			return errShort
		}
		d.least = least
		d.widths, d.data = d.data[n:n+d.minis], d.data[n+d.minis:]
	}
	if d.widths[0] > 64 {
		return fmt.Errorf("differences have %d bits, want at most 64", d.widths[0])
	}
	d.width, d.widths = uint(d.widths[0]), d.widths[1:]
	size := min(d.mini/8*int(d.width), len(d.data))
	d.packed, d.data = d.data[:size], d.data[size:]
	d.bit, d.inMini = 0, d.mini
	return nil
}

// end returns what stands behind the encoded values, without reading them.
func (d *delta) end() ([]byte, error) {
	for more := d.total - 1; more > 0; more -= d.mini {
		if err := d.nextMini(); err != nil {
			return nil, err
		}
	}
	return d.data, nil
}

// deltaNumbers are integers stored as differences.
type deltaNumbers struct {
	delta
	kind   kind
	values [block]int64
}

func (d *deltaNumbers) next(dst []float64) error {
	for len(dst) > 0 {
		list := d.values[:min(len(dst), block)]
		if err := d.delta.next(list); err != nil {
			return err
		}
		for i, v := range list {
			if d.kind.size() == 4 {
				v = int64(int32(v))
			}
			dst[i] = d.kind.number(v)
		}
		dst = dst[len(list):]
	}
	return nil
}
