package parquetfile

import (
	"bufio"
	"fmt"
	"io"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// output is the file that is being written, in order.
type output struct {
	file         *File
	layout       cloud.Layout
	dictionaries []*dictionary // by added column; nil for numbers by row
	schema       []*parquet.SchemaElement
	paths        [][]string // of all columns, in the order of the row groups
	groups       []*parquet.RowGroup
	writer       *bufio.Writer
	at           int64 // bytes written

	held    []pages // of the row group at hand
	bytes   int     // of them in memory
	free    []pages // for use again
	stats   []stats // of the group's new columns
	counts  [256]int64
	copied  []span // where the group's old chunks came to lie
	scratch scratch
	buffer  []byte
}

// newOutput checks the layout and writes what stands before the first row.
func newOutput(f *File, layout cloud.Layout, out io.Writer) (*output, error) {
	o := &output{
		file:         f,
		layout:       layout,
		dictionaries: make([]*dictionary, len(layout.Added)),
		writer:       bufio.NewWriterSize(out, 64<<10),
		scratch:      scratch{beside: f.options.Output},
		buffer:       make([]byte, 1<<20), // any page of a piece fits
	}
	for i := range layout.Added {
		a := &layout.Added[i]
		if err := checkAdded(a, len(layout.Moved)); err != nil {
			return nil, err
		}
		var err error
		switch {
		case a.ByClass != nil:
			o.dictionaries[i], err = newDictionary(a)
		case a.Type == cloud.Label:
			o.dictionaries[i], err = newNames(a)
		}
		if err != nil {
			return nil, err
		}
	}
	if err := o.makeSchema(); err != nil {
		return nil, err
	}
	if err := o.checkFooter(); err != nil {
		return nil, err
	}
	return o, o.write([]byte(magic))
}

func checkAdded(a *cloud.Added, classes int) error {
	switch {
	case a.ByClass == nil && a.Type == cloud.Label && len(a.Names) == 0:
		return fmt.Errorf("column %q is a text by row without names, want names, or texts by class", a.Name)
	case a.ByClass != nil && len(a.ByClass) != classes:
		return fmt.Errorf("column %q has %d classes, want %d", a.Name, len(a.ByClass), classes)
	}
	return nil
}

func (o *output) write(b []byte) error {
	n, err := o.writer.Write(b)
	o.at += int64(n)
	return err
}

// Put writes the old chunks of a row group with its first piece, and the new
// ones with its last.
func (f *File) Put(c *cloud.Chunk) error {
	p, o := pieceOf(c), f.out
	if p.first {
		if err := o.beginGroup(p.group); err != nil {
			return fmt.Errorf("%s: %w", f.path, err)
		}
	}
	if err := o.hold(&p.pages); err != nil {
		return err
	}
	if !p.last {
		return nil
	}
	return o.endGroup(p.group)
}

func (o *output) beginGroup(group int) error {
	o.copied = o.copied[:0]
	for i, chunk := range o.file.groups[group].Columns {
		s, err := chunkSpan(chunk.MetaData, o.file.footer)
		if err != nil {
			return err
		}
		start := o.at
		if err := o.copy(s, i, group); err != nil {
			return err
		}
		o.copied = append(o.copied, span{start, o.at})
	}
	o.stats = o.stats[:0]
	for range 3 + len(o.layout.Added) {
		o.stats = append(o.stats, noStats)
	}
	o.counts = [256]int64{}
	return nil
}

// copy appends bytes of the input, a column's chunk of a group.
func (o *output) copy(s span, column, group int) error {
	for s.start < s.end {
		b := o.buffer[:min(int64(len(o.buffer)), s.end-s.start)]
		if err := readAt(o.file.input, b, s.start); err != nil {
			return fmt.Errorf("column %q, row group %d: %w", o.file.leaves[column].name, group+1, err)
		}
		if err := o.write(b); err != nil {
			return err
		}
		s.start += int64(len(b))
	}
	return nil
}

// hold keeps the pages of a piece until the group ends, and gives the piece
// other memory in return.
func (o *output) hold(p *pages) error {
	for k := range o.stats {
		o.stats[k].merge(p.stats[k])
	}
	for class, n := range p.counts {
		o.counts[class] += n
	}
	o.held = append(o.held, *p)
	o.bytes += len(p.bytes)
	*p = pages{}
	if n := len(o.free); n > 0 {
		*p, o.free = o.free[n-1], o.free[:n-1]
	}
	if o.bytes > heldBytes {
		return o.unload()
	}
	return nil
}

// unload moves the held pages to the scratch file.
func (o *output) unload() error {
	for i := range o.held {
		h := &o.held[i]
		if h.bytes == nil {
			continue
		}
		h.spot = o.scratch.written
		if err := o.scratch.write(h.bytes); err != nil {
			return err
		}
		o.free = append(o.free, pages{bytes: h.bytes})
		h.bytes = nil
	}
	o.bytes = 0
	return nil
}

// release ends a group: its memory is free for the next.
func (o *output) release() {
	for _, h := range o.held {
		if h.bytes != nil {
			o.free = append(o.free, h)
		}
	}
	o.held, o.bytes, o.scratch.written = o.held[:0], 0, 0
}

// writePages appends the pages of one new column.
func (o *output) writePages(k int) error {
	for i := range o.held {
		h := &o.held[i]
		from, to := 0, h.ends[k]
		if k > 0 {
			from = h.ends[k-1]
		}
		b := o.buffer
		if h.bytes != nil {
			b = h.bytes[from:to]
		} else {
			b = b[:to-from]
			if err := o.scratch.readAt(b, h.spot+int64(from)); err != nil {
				return err
			}
		}
		if err := o.write(b); err != nil {
			return err
		}
	}
	return nil
}
