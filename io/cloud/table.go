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
	numbers, _, err := ReadAll(r, read)
	return numbers, err
}

// ReadAll reads the columns of a whole file, in the order of the request. It does
// not close r.
func ReadAll(r Rewriter, read Request) (numbers [][]float64, texts [][]string, err error) {
	if err := r.Begin(read, Layout{}, nil); err != nil {
		return nil, nil, err
	}
	numbers, texts = make([][]float64, len(read.Numbers)), make([][]string, len(read.Texts))
	err = EachChunk(r, func(c *Chunk) {
		for k := range numbers {
			numbers[k] = append(numbers[k], c.Numbers[k]...)
		}
		for k := range texts {
			for row := range c.Rows {
				texts[k] = append(texts[k], string(c.Texts[k].At(row)))
			}
		}
	})
	return numbers, texts, err
}

// EachChunk reads a file, for which Begin was called, to its end and hands over
// every decoded chunk. The chunk is valid until the function returns.
func EachChunk(r Rewriter, do func(*Chunk)) error {
	var c Chunk
	for {
		if err := r.Next(&c); err == io.EOF {
			return nil
		} else if err != nil {
			return err
		}
		if err := r.Decode(&c); err != nil {
			return err
		}
		do(&c)
	}
}
