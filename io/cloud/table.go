package cloud

import (
	"fmt"
	"io"
)

// ReadNumbers reads the named columns of a whole file, for the small files that
// go with a cloud (a trajectory, say). It returns one slice a name, all of one
// length, in the file's units; NaN for empty or null. It does not close r.
func ReadNumbers(r Rewriter, names ...string) ([][]float64, error) {
	return ReadNumbersWithin(r, nil, names...)
}

// ReadNumbersWithin is ReadNumbers with the Steps of a Request.
func ReadNumbersWithin(r Rewriter, steps []float64, names ...string) ([][]float64, error) {
	read := Request{Steps: steps}
	for _, name := range names {
		i, err := Find(r.Columns(), name)
		if err != nil {
			return nil, err
		}
		if i < 0 {
			return nil, fmt.Errorf("no column %q; the columns are %s", name, Names(r.Columns()))
		}
		read.Numbers = append(read.Numbers, i)
	}
	if err := r.Begin(read, Layout{}, nil); err != nil {
		return nil, err
	}
	table := make([][]float64, len(names))
	var c Chunk
	for {
		if err := r.Next(&c); err == io.EOF {
			return table, nil
		} else if err != nil {
			return nil, err
		}
		if err := r.Decode(&c); err != nil {
			return nil, err
		}
		for k := range names {
			table[k] = append(table[k], c.Numbers[k]...)
		}
	}
}
