package csvfile

import (
	"fmt"
	"io"
	"slices"
	"strconv"

	"bentray/io/cloud"
)

// encoder is what Begin makes of a layout.
type encoder struct {
	out    io.WriteCloser // nil where the file is only read
	layout cloud.Layout
	order  [3]int  // coordinates as their columns stand in the file: 0 for x
	pieces []piece // of a row, behind the raw copies
	empty  string  // a field without a value
}

// piece is a column held by row, or a run of columns held by class.
type piece struct {
	column   int // in Chunk.Added
	decimals int
	names    [][]byte // of a label held by row, as fields; nil for numbers
	byClass  [][]byte // by class: the run's fields, each with its separator in front
}

// Begin fixes what is decoded and written, and writes the header. It fails
// where a position, the number of classes or the decimals make no sense.
func (f *File) Begin(read cloud.Request, write cloud.Layout, out io.Writer) error {
	wanted := slices.Concat(read.Numbers, read.Texts, read.Stored)
	if out != nil {
		wanted = append(wanted, write.XYZ[:]...)
	}
	f.read, f.located = read, 0
	for _, column := range wanted {
		if column < 0 || column >= len(f.columns) {
			return fmt.Errorf("%s: column %d is asked for, want 0 to %d", f.path, column, len(f.columns)-1)
		}
		f.located = max(f.located, column+1)
	}
	if out == nil {
		return nil
	}
	if err := f.setLayout(write); err != nil {
		return fmt.Errorf("%s: %w", f.path, err)
	}
	var err error
	if f.out, err = f.codec.writer(out); err != nil {
		return err
	}
	_, err = f.out.Write(f.headerOut())
	return err
}

func (f *File) setLayout(write cloud.Layout) error {
	f.layout = write
	x := write.XYZ
	if x[0] == x[1] || x[0] == x[2] || x[1] == x[2] {
		return fmt.Errorf("x, y and z are columns %d, %d and %d, want three different ones", x[0], x[1], x[2])
	}
	if err := checkDecimals("coordinates", write.Decimals); err != nil {
		return err
	}
	f.order = [3]int{0, 1, 2}
	slices.SortFunc(f.order[:], func(a, b int) int { return x[a] - x[b] })
	if f.sep == blanks {
		f.empty = `""`
	}
	f.pieces = nil
	for i, a := range write.Added {
		if err := f.addColumn(i, a); err != nil {
			return err
		}
	}
	return nil
}

// addColumn adds a column to the pieces, to the last one where both go by class.
func (f *File) addColumn(i int, a cloud.Added) error {
	classes := len(f.layout.Moved)
	switch {
	case a.ByClass == nil && a.Type == cloud.Label:
		return f.addNames(i, a)
	case a.ByClass == nil:
		decimals := a.Decimals
		if a.Type == cloud.Count {
			decimals = 0
		}
		f.pieces = append(f.pieces, piece{column: i, decimals: decimals})
		return checkDecimals(strconv.Quote(a.Name), decimals)
	case len(a.ByClass) != classes:
		return fmt.Errorf("column %q has values for %d classes, want %d", a.Name, len(a.ByClass), classes)
	}
	if len(f.pieces) == 0 || f.pieces[len(f.pieces)-1].byClass == nil {
		f.pieces = append(f.pieces, piece{byClass: make([][]byte, classes)})
	}
	run := f.pieces[len(f.pieces)-1].byClass
	for class, v := range a.ByClass {
		run[class] = append(run[class], byte(f.sep))
		if v.Set {
			run[class] = f.sep.appendField(run[class], v.Text)
		} else {
			run[class] = append(run[class], f.empty...)
		}
	}
	return nil
}

func checkDecimals(what string, decimals int) error {
	if decimals < 0 || decimals > maxDecimals {
		return fmt.Errorf("decimals of %s are %d, want 0 to %d", what, decimals, maxDecimals)
	}
	return nil
}

// headerOut returns the output up to its first row.
func (f *File) headerOut() []byte {
	names := slices.Clone(f.layout.RawNames[:])
	for _, a := range f.layout.Added {
		names = append(names, a.Name)
	}
	h := slices.Concat(f.preamble, f.header, []byte{byte(f.sep)})
	h = f.sep.appendFields(h, names)
	return append(h, f.lineEnd...)
}

// Encode makes the output's bytes from Class, XYZ and Added. It fails where a
// row's position in a label's names is none of them.
func (f *File) Encode(c *cloud.Chunk) error {
	if err := f.checkPositions(c); err != nil {
		return fmt.Errorf("%s: %w", f.path, err)
	}
	b := c.Format.(*block)
	out := b.out[:0]
	for i := range b.rows[:c.Rows] {
		out = f.appendRow(out, b, c, i)
	}
	b.out = append(out, b.text[b.tail:]...)
	return nil
}

// appendRow appends row i and the empty lines before it.
func (f *File) appendRow(out []byte, b *block, c *cloud.Chunk, i int) []byte {
	r, class := &b.rows[i], c.Class[i]
	at := r.from
	if f.layout.Moved[class] {
		for _, k := range f.order {
			out = append(out, b.text[at:r.xyz[k].begin]...)
			out = f.appendNumber(out, c.XYZ[k][i], f.layout.Decimals)
			at = r.xyz[k].end
		}
	}
	out = append(out, b.text[at:r.end]...)
	for k := range r.xyz {
		out = append(out, byte(f.sep))
		out = append(out, r.xyz[k].of(b.text)...)
	}
	for k := range f.pieces {
		p := &f.pieces[k]
		if p.byClass != nil {
			out = append(out, p.byClass[class]...)
			continue
		}
		out = append(out, byte(f.sep))
		if v := c.Added[p.column][i]; p.names != nil && v == v {
			out = append(out, p.names[int(v)]...)
		} else {
			out = f.appendNumber(out, v, p.decimals)
		}
	}
	return append(out, b.text[r.end:r.next]...)
}

// appendNumber appends a field with fixed decimals, or an empty one where v is
// not finite.
func (f *File) appendNumber(dst []byte, v float64, decimals int) []byte {
	if v-v != 0 { // NaN or infinite
		return append(dst, f.empty...)
	}
	return appendFixed(dst, v, decimals)
}

// Put appends the chunk's bytes to the output.
func (f *File) Put(c *cloud.Chunk) error {
	_, err := f.out.Write(c.Format.(*block).out)
	return err
}

// Finish ends the compressed member or frame; the writer stays open.
func (f *File) Finish() error { return f.out.Close() }
