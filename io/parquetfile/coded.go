package parquetfile

import "fmt"

// block is how many values are decoded at a time where a decoder works in two
// steps: what is between them stays in the first cache.
const block = 1024

// indices reads the positions of values in a dictionary.
type indices struct {
	hybrid hybrid
	size   int // of the dictionary
	buffer [block]uint64
}

// reset begins with the data of a page: one byte for the width of an index,
// then the indices.
func (x *indices) reset(data []byte, size int) error {
	if len(data) == 0 {
		return errShort
	}
	if data[0] > 32 {
		return fmt.Errorf("dictionary indices have %d bits, want at most 32", data[0])
	}
	x.hybrid.reset(data[1:], uint(data[0]))
	x.size = size
	return nil
}

// next reads up to a block of indices, all within the dictionary.
func (x *indices) next(n int) ([]uint64, error) {
	list := x.buffer[:min(n, block)]
	if err := x.hybrid.next(list); err != nil {
		return nil, err
	}
	for _, i := range list {
		if i >= uint64(x.size) {
			return nil, fmt.Errorf("value %d of a dictionary of %d is asked for", i+1, x.size)
		}
	}
	return list, nil
}

// codedNumbers are stored as indices into a dictionary.
type codedNumbers struct {
	indices
	dict []float64
}

func (c *codedNumbers) next(dst []float64) error {
	for len(dst) > 0 {
		list, err := c.indices.next(len(dst))
		if err != nil {
			return err
		}
		for i, at := range list {
			dst[i] = c.dict[at]
		}
		dst = dst[len(list):]
	}
	return nil
}

// runBooleans are stored as runs of width 1.
type runBooleans struct {
	hybrid hybrid
	buffer [block]uint64
}

func (r *runBooleans) next(dst []float64) error {
	for len(dst) > 0 {
		list := r.buffer[:min(len(dst), block)]
		if err := r.hybrid.next(list); err != nil {
			return err
		}
		for i, v := range list {
			dst[i] = float64(v)
		}
		dst = dst[len(list):]
	}
	return nil
}
