package parquetfile

import (
	"fmt"
	"slices"

	"bentray/io/cloud"
)

// beginReading makes a cursor for each column that is read.
func (f *File) beginReading(read cloud.Request, write cloud.Layout, laidOut bool) error {
	var xyz []int
	if laidOut {
		xyz = write.XYZ[:]
	}
	for _, i := range xyz {
		c, err := f.newCoordinate(i)
		if err != nil {
			return err
		}
		f.raw = append(f.raw, c)
	}
	for n, i := range read.Numbers {
		if k := slices.Index(xyz, i); k >= 0 {
			f.numbers = append(f.numbers, source{raw: k})
			continue
		}
		c, err := f.newCursor(i, false)
		if err != nil {
			return err
		}
		if read.Steps != nil {
			c.step = read.Steps[n]
		}
		f.numbers = append(f.numbers, source{cursor: c})
	}
	f.checks = read.Checks
	for _, i := range read.Texts {
		c, err := f.newCursor(i, true)
		if err != nil {
			return err
		}
		f.texts = append(f.texts, c)
	}
	for _, i := range read.Stored {
		c, err := f.newStored(i)
		if err != nil {
			return err
		}
		f.stored = append(f.stored, c)
	}
	return nil
}

// newCoordinate prepares to read x, y or z.
func (f *File) newCoordinate(i int) (*cursor, error) {
	l := &f.leaves[i]
	switch l.kind {
	case booleans, millis, micros, nanos:
		return nil, fmt.Errorf("%s: column %q is %s, want a coordinate (DOUBLE, FLOAT, INT32 or INT64)", f.path, l.name, l.typ)
	}
	c, err := f.newCursor(i, false)
	if err == nil {
		c.step = f.options.finestStep()
	}
	return c, err
}

// newCursor prepares to read a column, after checks that need no data.
func (f *File) newCursor(i int, text bool) (*cursor, error) {
	l := &f.leaves[i]
	switch isText := l.kind == texts; {
	case l.kind == opaque:
		return nil, fmt.Errorf("%s: column %q is %s, want a flat column of DOUBLE, FLOAT, INT32, INT64, TIMESTAMP or text; it can only be copied; store it as DOUBLE or text", f.path, l.name, l.typ)
	case text && !isText:
		return nil, fmt.Errorf("%s: column %q is %s, want a text (BYTE_ARRAY)", f.path, l.name, l.typ)
	case !text && isText:
		return nil, fmt.Errorf("%s: column %q is %s, want a number (DOUBLE, FLOAT, INT32, INT64 or TIMESTAMP)", f.path, l.name, l.typ)
	}
	return f.cursorOf(l, i)
}

// cursorOf makes the cursor of a column whose leaf says how it is read.
func (f *File) cursorOf(l *leaf, i int) (*cursor, error) {
	c := &cursor{file: f, leaf: l, index: i, scratch: scratch{beside: f.options.Output}}
	for g := range f.groups {
		if err := c.begin(g); err != nil {
			return nil, err
		}
	}
	return c, nil
}
