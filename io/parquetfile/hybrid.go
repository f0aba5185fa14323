package parquetfile

import (
	"errors"
	"fmt"
)

// hybrid reads the mix of runs and bit-packed numbers in which levels,
// dictionary indices and booleans are stored. Its width is 0 to 32 bits.
type hybrid struct {
	data   []byte
	width  uint
	left   int  // numbers left in the run at hand
	packed bool // it is bit-packed: data begins with it, bit is where its next number is
	bit    int
	end    int // of the packed run in data
	value  uint64
}

// reset begins anew with the encoded data.
func (h *hybrid) reset(data []byte, width uint) {
	*h = hybrid{data: data, width: width}
}

// next reads len(dst) numbers.
func (h *hybrid) next(dst []uint64) error {
	for len(dst) > 0 {
		if h.left == 0 {
			if err := h.run(); err != nil {
				return err
			}
		}
		n := min(len(dst), h.left)
		if err := h.fill(dst[:n]); err != nil {
			return err
		}
		h.left -= n
		dst = dst[n:]
	}
	return nil
}

func (h *hybrid) fill(dst []uint64) error {
	if !h.packed {
		for i := range dst {
			dst[i] = h.value
		}
		return nil
	}
	err := unpack(dst, h.data[:h.end], h.bit, h.width)
	h.bit += len(dst) * int(h.width)
	return err
}

// run reads the head of the next run.
func (h *hybrid) run() error {
	h.data = h.data[h.end:]
	h.bit, h.end = 0, 0
	if len(h.data) == 0 {
		return errShort
	}
	head, rest, err := uvarint(h.data)
	if err != nil {
		return err
	}
	h.packed = head&1 == 1
	count := head >> 1
	if count == 0 || count > 1<<31 {
		return fmt.Errorf("a run has %d values", count)
	}
	h.data = rest
	if h.packed {
		return h.packedRun(int(count))
	}
	return h.plainRun(int(count))
}

// packedRun begins groups of 8 numbers; the last run may be cut short where the
// numbers end.
func (h *hybrid) packedRun(groups int) error {
	h.left = 8 * groups
	h.end = min(groups*int(h.width), len(h.data))
	return nil
}

func (h *hybrid) plainRun(count int) error {
	size := int(h.width+7) / 8
	if len(h.data) < size {
		return errShort
	}
	h.left = count
	h.value = bitsAt(h.data, 0, uint(8*size))
	h.data = h.data[size:]
	if h.width < 64 && h.value>>h.width != 0 {
		return errors.New("the value of a run is too large")
	}
	return nil
}

// ones counts the ones among the next n numbers of width 1, and reads them.
func (h *hybrid) ones(n int) (count int, err error) {
	for n > 0 {
		if h.left == 0 {
			if err := h.run(); err != nil {
				return 0, err
			}
		}
		k := min(n, h.left)
		switch {
		case !h.packed:
			count += k * int(h.value)
		case k > 8*h.end:
			return 0, errShort
		default:
			count += ones(h.data[:h.end], k)
			h.bit += k
		}
		h.left -= k
		n -= k
	}
	return count, nil
}
