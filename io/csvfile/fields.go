package csvfile

import (
	"bytes"
	"encoding/binary"
	"math/bits"
	"strings"
)

// span is a stretch of bytes, end not included.
type span struct{ begin, end uint32 }

func (s span) of(text []byte) []byte { return text[s.begin:s.end] }

// separator is the byte between two fields; blanks stands for runs of spaces
// and tabs.
type separator byte

const blanks separator = ' '

// split locates the first len(spans) fields of a row and returns how many
// fields it has, and the first quote that is neither around a whole field nor
// doubled within such quotes, or -1. The row has no line end.
func (s separator) split(row []byte, spans []span) (count, stray int) {
	switch {
	case s == blanks:
		return splitBlanks(row, spans)
	case bytes.IndexByte(row, '"') >= 0:
		return splitQuoted(row, byte(s), spans)
	}
	return splitPlain(row, byte(s), spans), -1
}

// splitPlain is split for a row without quotes. It looks at eight bytes at once:
// a byte of word is 0 where the text has the separator, and in hits just those
// bytes have their high bit set.
func splitPlain(row []byte, sep byte, spans []span) int {
	const ones, low7 = 0x0101010101010101, 0x7f7f7f7f7f7f7f7f
	count, begin, i := 0, 0, 0
	for ; i+8 <= len(row); i += 8 {
		word := binary.LittleEndian.Uint64(row[i:]) ^ ones*uint64(sep)
		for hits := ^((word&low7 + low7) | word | low7); hits != 0; hits &= hits - 1 {
			end := i + bits.TrailingZeros64(hits)/8
			place(spans, count, begin, end)
			count, begin = count+1, end+1
		}
	}
	for ; i < len(row); i++ {
		if row[i] == sep {
			place(spans, count, begin, i)
			count, begin = count+1, i+1
		}
	}
	place(spans, count, begin, len(row))
	return count + 1
}

// splitQuoted is split for a row that may have quotes.
func splitQuoted(row []byte, sep byte, spans []span) (count, stray int) {
	stray = -1
	for begin := 0; ; count++ {
		end, wrong := fieldEnd(row, begin, sep)
		if stray < 0 {
			stray = wrong
		}
		place(spans, count, begin, end)
		if end == len(row) {
			return count + 1, stray
		}
		begin = end + 1
	}
}

// fieldEnd returns where a field ends, and the quote in it that is wrong, or -1.
func fieldEnd(row []byte, begin int, sep byte) (end, stray int) {
	open := begin
	for open < len(row) && isBlank(row[open]) && row[open] != sep {
		open++
	}
	if open == len(row) || row[open] != '"' {
		end = indexFrom(row, begin, sep)
		if i := bytes.IndexByte(row[begin:end], '"'); i >= 0 {
			return end, begin + i
		}
		return end, -1
	}
	quote := closing(row, open)
	if quote < 0 {
		return len(row), open
	}
	end = indexFrom(row, quote, sep)
	if len(trim(row[quote+1:end])) > 0 {
		return end, quote
	}
	return end, -1
}

// indexFrom finds a byte from a position on; the length where it is not there.
func indexFrom(row []byte, from int, c byte) int {
	if i := bytes.IndexByte(row[from:], c); i >= 0 {
		return from + i
	}
	return len(row)
}

// splitBlanks is split for runs of blanks; those before the first field and
// behind the last separate nothing.
func splitBlanks(row []byte, spans []span) (count, stray int) {
	stray = -1
	for i := 0; ; count++ {
		for i < len(row) && isBlank(row[i]) {
			i++
		}
		if i == len(row) {
			return count, stray
		}
		end, wrong := wordEnd(row, i)
		if stray < 0 {
			stray = wrong
		}
		place(spans, count, i, end)
		i = end
	}
}

// wordEnd is fieldEnd where blanks separate.
func wordEnd(row []byte, begin int) (end, stray int) {
	end, stray = begin, -1
	if row[begin] == '"' {
		quote := closing(row, begin)
		if quote < 0 {
			return len(row), begin
		}
		end = quote + 1
		if end < len(row) && !isBlank(row[end]) {
			stray = quote
		}
	}
	for ; end < len(row) && !isBlank(row[end]); end++ {
		if row[end] == '"' && stray < 0 {
			stray = end
		}
	}
	return end, stray
}

// place sets span k where there is room for it.
func place(spans []span, k, begin, end int) {
	if k < len(spans) {
		spans[k] = span{uint32(begin), uint32(end)}
	}
}

func isBlank(c byte) bool { return c == ' ' || c == '\t' }

// trim cuts blanks off both ends.
func trim(s []byte) []byte {
	for len(s) > 0 && isBlank(s[0]) {
		s = s[1:]
	}
	for len(s) > 0 && isBlank(s[len(s)-1]) {
		s = s[:len(s)-1]
	}
	return s
}

// isQuoted tells whether quotes enclose a trimmed field.
func isQuoted(s []byte) bool {
	return len(s) >= 2 && s[0] == '"' && s[len(s)-1] == '"'
}

// appendContent appends what a field says: without the quotes around it, with
// doubled quotes made single, trimmed of blanks.
func appendContent(dst, field []byte) []byte {
	field = trim(field)
	if !isQuoted(field) {
		return append(dst, field...)
	}
	field = trim(field[1 : len(field)-1])
	for {
		i := bytes.Index(field, []byte(`""`))
		if i < 0 {
			return append(dst, field...)
		}
		dst = append(dst, field[:i+1]...)
		field = field[i+2:]
	}
}

// appendField appends a text as a field that reads as that text: quoted where
// the separator, a quote or a line break is in it, where it would begin a
// comment, and where blanks separate and it is empty.
func (s separator) appendField(dst []byte, text string) []byte {
	special := "\"\r\n" + string(rune(s))
	if s == blanks {
		special += "\t"
	}
	quote := strings.ContainsAny(text, special) || isComment([]byte(text)) || (s == blanks && text == "")
	if !quote {
		return append(dst, text...)
	}
	dst = append(dst, '"')
	dst = append(dst, strings.ReplaceAll(text, `"`, `""`)...)
	return append(dst, '"')
}

// appendFields appends texts as fields with separators between them.
func (s separator) appendFields(dst []byte, texts []string) []byte {
	for i, text := range texts {
		if i > 0 {
			dst = append(dst, byte(s))
		}
		dst = s.appendField(dst, text)
	}
	return dst
}
