package csvfile

import (
	"bytes"
	"errors"
	"fmt"
	"strings"
	"unicode/utf8"

	"bentray/io/cloud"
)

// Decode fills Rows, Numbers, Texts and Rejects. The first bad row is the error,
// a *cloud.RowError, unless Options.Divert is set.
func (f *File) Decode(c *cloud.Chunk) error {
	b := c.Format.(*block)
	f.clear(c, b)
	loneReturns := hasLoneReturns(b.text)
	from := 0
	for begin, next := 0, 0; begin < len(b.text); begin = next {
		next = f.nextRow(b, begin)
		text := withoutEnd(b.text[begin:next])
		if len(text) == 0 || f.sep == blanks && len(trim(text)) == 0 {
			continue
		}
		if f.passes(b, begin) {
			c.Rejects = append(c.Rejects, cloud.Reject{Line: b.line, Text: bytes.Clone(text)})
			from = b.remove(from, begin, next)
			continue
		}
		if bad := f.decodeRow(c, b, text, begin, loneReturns); bad != nil {
			bad.Line = b.lineAt(begin)
			if !f.divert {
				return bad
			}
			c.Rejects = append(c.Rejects, cloud.Reject{Line: bad.Line, Reason: reason(bad), Text: bytes.Clone(text)})
			from = b.remove(from, begin, next)
			continue
		}
		r := &b.rows[c.Rows]
		r.from, r.end, r.next = uint32(from), uint32(begin+len(text)), uint32(next)
		c.Rows++
		from = next
	}
	b.tail = uint32(from)
	for k := range c.Numbers {
		c.Numbers[k] = c.Numbers[k][:c.Rows]
	}
	return nil
}

// nextRow returns where the row behind the one that begins at a position begins.
func (f *File) nextRow(b *block, begin int) int {
	length := 0
	if b.quoted {
		length, _ = f.sep.rowEnd(b.text[begin:])
	} else {
		length = bytes.IndexByte(b.text[begin:], '\n') + 1
	}
	if length <= 0 { // the last row has no line end
		return len(b.text)
	}
	return begin + length
}

// clear empties a chunk and makes room for the rows of its block.
func (f *File) clear(c *cloud.Chunk, b *block) {
	c.Rows = 0
	c.Rejects = c.Rejects[:0]
	c.Numbers = cloud.Grow(c.Numbers, len(f.read.Numbers))
	for k := range c.Numbers {
		c.Numbers[k] = cloud.Grow(c.Numbers[k], b.most)
	}
	c.Texts = cloud.Grow(c.Texts, len(f.read.Texts))
	for k := range c.Texts {
		c.Texts[k].Reset()
	}
	c.Stored = cloud.Grow(c.Stored, len(f.read.Stored))
	for k := range c.Stored {
		c.Stored[k].Reset()
	}
	b.rows = cloud.Grow(b.rows, b.most)
	b.fields = cloud.Grow(b.fields, f.located)
}

// decodeRow reads one row into place c.Rows. What is wrong with it comes back
// without its line.
func (f *File) decodeRow(c *cloud.Chunk, b *block, text []byte, begin int, loneReturns bool) *cloud.RowError {
	count, stray := 0, -1
	if b.quoted || f.sep == blanks {
		count, stray = f.sep.split(text, b.fields)
	} else {
		count = splitPlain(text, byte(f.sep), b.fields)
	}
	if loneReturns && hasLoneReturn(text) {
		return &cloud.RowError{Path: f.path, Err: errors.New("has a carriage return within, want LF or CR LF at its end; convert the line ends first")}
	}
	if stray >= 0 {
		return f.strayQuote(text, stray, b.lineAt(begin))
	}
	if count != len(f.columns) {
		return &cloud.RowError{Path: f.path, Err: fmt.Errorf("has %s, want %d", plural(count, "field"), len(f.columns))}
	}
	for k, column := range f.read.Numbers {
		v, ok := parseNumber(b.fields[column].of(text))
		if !ok {
			return &cloud.RowError{Path: f.path, Column: shorten(f.columns[column].Name), Err: notNumber(b.fields[column].of(text))}
		}
		c.Numbers[k][c.Rows] = v
	}
	if bad := f.decodeTexts(c, b, text); bad != nil {
		return bad
	}
	for k, column := range f.read.Stored {
		c.Stored[k].Append(b.fields[column].of(text))
	}
	if f.out != nil {
		r := &b.rows[c.Rows]
		for k, column := range f.layout.XYZ {
			field := b.fields[column]
			r.xyz[k] = span{uint32(begin) + field.begin, uint32(begin) + field.end}
		}
	}
	return nil
}

// decodeTexts appends a row's texts, or nothing where a check refuses one.
func (f *File) decodeTexts(c *cloud.Chunk, b *block, text []byte) *cloud.RowError {
	for k, column := range f.read.Texts {
		t := &c.Texts[k]
		t.Bytes = appendContent(t.Bytes, b.fields[column].of(text))
		t.Ends = append(t.Ends, len(t.Bytes))
		if f.read.Checks == nil || f.read.Checks[k] == nil {
			continue
		}
		if err := f.read.Checks[k](t.At(c.Rows)); err != nil {
			for cut := range c.Texts[:k+1] {
				c.Texts[cut].Cut(c.Rows)
			}
			return &cloud.RowError{Path: f.path, Column: shorten(f.columns[column].Name), Err: err}
		}
	}
	return nil
}

// errStrayQuote is what is wrong with a row or header with a quote elsewhere than
// around a field.
var errStrayQuote = errors.New("has a quote within a field, want quotes around the whole field")

// strayQuote explains a quote within a field, naming its column, and its line
// where that is not the row's.
func (f *File) strayQuote(text []byte, quote int, line int64) *cloud.RowError {
	bad := &cloud.RowError{Path: f.path, Err: errStrayQuote}
	if lines := bytes.Count(text[:quote], lineFeed); lines > 0 {
		bad.Err = fmt.Errorf("has a quote within a field on line %d, want quotes around the whole field", line+int64(lines))
	}
	if fields, _ := f.sep.split(text[:quote], nil); fields <= len(f.columns) {
		bad.Column = shorten(f.columns[fields-1].Name)
	}
	return bad
}

// lineAt returns the line number at a position, which may not fall from call to
// call.
func (b *block) lineAt(position int) int64 {
	b.line += int64(bytes.Count(b.text[b.counted:position], lineFeed))
	b.counted = position
	return b.line
}

// remove takes a row out of the block: the empty lines before it, from..begin,
// move to its end. It returns where they begin then.
func (b *block) remove(from, begin, next int) int {
	b.lineAt(next) // before bytes move
	kept := next - (begin - from)
	copy(b.text[kept:next], b.text[from:begin])
	return kept
}

// hasLoneReturns tells whether carriage returns stand elsewhere than in CR LF;
// they may be within quotes.
func hasLoneReturns(text []byte) bool {
	n := bytes.Count(text, carriageReturn)
	return n > 0 && n != bytes.Count(text, []byte("\r\n"))
}

// reason is what is wrong with a row, without file and line.
func reason(e *cloud.RowError) string {
	if e.Column == "" {
		return e.Err.Error()
	}
	return e.Column + " " + e.Err.Error()
}

// notNumber says what a field is instead of a number.
func notNumber(field []byte) error {
	text := string(appendContent(nil, field))
	if strings.Count(text, ",") == 1 {
		if _, ok := parseNumber([]byte(strings.Replace(text, ",", ".", 1))); ok {
			return fmt.Errorf("is %q, want a number with a decimal point, not a comma", shorten(text))
		}
	}
	return fmt.Errorf("is %q, want a number", shorten(text))
}

// shorten cuts a long text for a message, between two characters.
func shorten(text string) string {
	most := 40
	if len(text) <= most {
		return text
	}
	for most > 0 && !utf8.RuneStart(text[most]) {
		most--
	}
	return text[:most] + "..."
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
