package parquetfile

import (
	"encoding/binary"
	"fmt"

	"bentray/io/cloud"
)

// words decodes the texts of one page, in order.
type words interface {
	// next appends count texts.
	next(t *cloud.Texts, count int) error
}

// appendText adds one text to a piece's column, which has a cap: a dictionary
// lets a small file ask for any length.
func appendText(t *cloud.Texts, s []byte) error {
	if err := checkText(t, len(s)); err != nil {
		return err
	}
	t.Append(s)
	return nil
}

func checkText(t *cloud.Texts, n int) error {
	if len(t.Bytes)+n > maxTextBytes {
		return fmt.Errorf("the texts of %d rows are longer than %d bytes", len(t.Ends)+1, maxTextBytes)
	}
	return nil
}

// plainWords are stored with their length in 4 bytes before each.
type plainWords struct{ data []byte }

func (p *plainWords) next(t *cloud.Texts, count int) error {
	for range count {
		s, err := p.one()
		if err != nil {
			return err
		}
		if err := appendText(t, s); err != nil {
			return err
		}
	}
	return nil
}

func (p *plainWords) one() ([]byte, error) {
	if len(p.data) < 4 {
		return nil, errShort
	}
	n := int64(binary.LittleEndian.Uint32(p.data))
	if n > int64(len(p.data)-4) {
		return nil, fmt.Errorf("a text has %d bytes, want at most the %d that are left", n, len(p.data)-4)
	}
	s := p.data[4 : 4+n]
	p.data = p.data[4+n:]
	return s, nil
}

// codedWords are stored as indices into a dictionary.
type codedWords struct {
	indices
	dict *cloud.Texts
}

func (c *codedWords) next(t *cloud.Texts, count int) error {
	for count > 0 {
		list, err := c.indices.next(count)
		if err != nil {
			return err
		}
		for _, i := range list {
			if err := appendText(t, c.dict.At(int(i))); err != nil {
				return err
			}
		}
		count -= len(list)
	}
	return nil
}

// lengthWords are stored as DELTA_LENGTH_BYTE_ARRAY: all lengths, then all bytes.
type lengthWords struct {
	lengths delta
	data    []byte
	buffer  [block]int64
}

// reset begins with the data of a page of count texts.
func (l *lengthWords) reset(data []byte, count int) error {
	if err := resetCount(&l.lengths, data, count); err != nil {
		return err
	}
	ahead := l.lengths
	var err error
	l.data, err = ahead.end()
	return err
}

func (l *lengthWords) next(t *cloud.Texts, count int) error {
	for count > 0 {
		list := l.buffer[:min(count, block)]
		if err := l.lengths.next(list); err != nil {
			return err
		}
		for _, n := range list {
			s, err := l.one(n)
			if err != nil {
				return err
			}
			if err := appendText(t, s); err != nil {
				return err
			}
		}
		count -= len(list)
	}
	return nil
}

func (l *lengthWords) one(n int64) ([]byte, error) {
	if n < 0 || n > int64(len(l.data)) {
		return nil, fmt.Errorf("a text has %d bytes, want at most the %d that are left", n, len(l.data))
	}
	s := l.data[:n]
	l.data = l.data[n:]
	return s, nil
}

// frontWords are stored as DELTA_BYTE_ARRAY: how many bytes each takes from the
// text before it, then what follows them.
type frontWords struct {
	prefixes delta
	suffixes lengthWords
	last     []byte
	buffer   [block]int64
	sizes    [block]int64
}

// reset begins with the data of a page of count texts.
func (f *frontWords) reset(data []byte, count int) error {
	f.last = f.last[:0]
	if err := resetCount(&f.prefixes, data, count); err != nil {
		return err
	}
	ahead := f.prefixes
	rest, err := ahead.end()
	if err != nil {
		return err
	}
	return f.suffixes.reset(rest, count)
}

func (f *frontWords) next(t *cloud.Texts, count int) error {
	for count > 0 {
		n := min(count, block)
		if err := f.prefixes.next(f.buffer[:n]); err != nil {
			return err
		}
		if err := f.suffixes.lengths.next(f.sizes[:n]); err != nil {
			return err
		}
		for i := range n {
			if err := f.one(f.buffer[i], f.sizes[i]); err != nil {
				return err
			}
			if err := appendText(t, f.last); err != nil {
				return err
			}
		}
		count -= n
	}
	return nil
}

func (f *frontWords) one(prefix, size int64) error {
	if prefix < 0 || prefix > int64(len(f.last)) {
		return fmt.Errorf("a text takes %d bytes from the one before, which has %d", prefix, len(f.last))
	}
	s, err := f.suffixes.one(size)
	if err != nil {
		return err
	}
	f.last = append(f.last[:prefix], s...)
	return nil
}

// resetCount begins delta data that must have count values.
func resetCount(d *delta, data []byte, count int) error {
	if err := d.reset(data); err != nil {
		return err
	}
	if d.total != count {
		return fmt.Errorf("delta data have %d values, want %d as the page has", d.total, count)
	}
	return nil
}
