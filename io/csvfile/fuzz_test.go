package csvfile

import (
	"bytes"
	"encoding/csv"
	"testing"

	"bentray/io/cloud"
)

// FuzzRewrite rewrites any bytes. Where they are accepted, every row is written
// or rejected, and the output less its added columns, with the raw copies put
// back, is the input less its rejected rows.
func FuzzRewrite(f *testing.F) {
	for _, sep := range []string{",", ";", "\t", " "} {
		f.Add([]byte(makeFile(sep, "\r\n", true, true, 5, 1).in.String()), true, false, uint8(20))
	}
	f.Add([]byte("x;y;z;n\r\n1; \"2\" ;3;\"a;\n\"\"b\"\"\"\r\n\r\n4;;5;c"), false, false, uint8(9))
	f.Add([]byte("# c\n\n1,2,3\n4,\"5\",6\n"), false, true, uint8(1))
	f.Add([]byte("\xef\xbb\xbfx y z\n  1  2 3 \n \n\"\" \t 1e5 -inf"), false, false, uint8(0))
	f.Add([]byte("x,y,z\n\na,2,3\n\n\n1,2\n1,2,3\r4,5,6\n"), true, false, uint8(3))
	f.Add([]byte("x,y,z,n\n1,2,3,5\" pipe\n1,2,3,a\n1,2,3,6\" pipe\n1,\"2\",3,\"a\nb\"\n"), true, false, uint8(30))
	f.Add([]byte("x y z\n1 2 \"3\n4 5 \"6\n7 8 \" 9\"\n"), true, false, uint8(4))
	f.Fuzz(func(t *testing.T, in []byte, divert, named bool, block uint8) {
		o := Options{Divert: divert}
		if named {
			o.Names = []string{"x", "y", "z"}
		}
		file, err := openText("a.csv", string(in), o, int(block))
		if err != nil || len(file.columns) < 3 {
			return
		}
		line := file.line
		r, err := rewrite(file, cloud.Request{}, [3]int{0, 1, 2})
		if err != nil {
			return
		}
		head := file.headerOut()
		if !bytes.HasPrefix(r.out, head) {
			t.Fatalf("output %q does not begin with %q", r.out, head)
		}
		body := in[len(file.preamble):]
		if !named {
			body = body[len(file.header)+len(file.lineEnd):]
		}
		if file.sep != blanks && len(r.rejects) == 0 && isRefused(in[len(file.preamble):], file.sep) {
			t.Fatalf("accepted %q, which the standard library refuses", in)
		}
		kept, rows, ok := withoutRejects(body, file.sep, line, r)
		if !ok || rows != r.rows {
			t.Fatalf("%d rows read, %d written, rejects %+v, of %q", rows, r.rows, r.rejects, in)
		}
		if got := restore(r.out[len(head):], file.sep, len(file.columns)); !bytes.Equal(got, kept) {
			t.Fatalf("restored %q, want %q", got, kept)
		}
	})
}

// plainRow is a row as the reference reader of this test sees it.
type plainRow struct {
	text, end []byte
	fields    [][2]int // begin and end in text
	bad       bool     // a quote is where none may be
}

// plainRows parts a text byte by byte.
func plainRows(text []byte, sep separator) (rows []plainRow) {
	for len(text) > 0 {
		r := onePlainRow(text, sep)
		text = text[len(r.text)+len(r.end):]
		rows = append(rows, r)
	}
	return rows
}

// onePlainRow reads the first row of a text, by what may come next: the blanks
// before a field, a bare field, a quoted one, or what stands behind its quote.
func onePlainRow(text []byte, sep separator) (r plainRow) {
	const (
		before = iota
		bare
		quoted
		behind
	)
	state, begin, i := before, 0, 0
	for ; i < len(text) && (state == quoted || text[i] != '\n'); i++ {
		c := text[i]
		separates := c == byte(sep) || sep == blanks && c == '\t'
		switch {
		case state == quoted && c == '"' && i+1 < len(text) && text[i+1] == '"':
			i++
		case state == quoted && c == '"':
			state = behind
		case state == quoted:
		case separates:
			if sep != blanks || state != before {
				r.fields = append(r.fields, [2]int{begin, i})
			}
			state, begin = before, i+1
		case c == '"' && state == before:
			state = quoted
		case c == '"':
			r.bad = true
		case c != ' ' && c != '\t' && c != '\r' && state == behind:
			r.bad = true
		case c != ' ' && c != '\t' && state == before:
			state = bare
		}
	}
	end := i
	if i < len(text) {
		i++
		if end > 0 && text[end-1] == '\r' {
			end--
		}
	}
	r.text, r.end = text[:end], text[end:i]
	if sep != blanks || begin < end && state != before {
		r.fields = append(r.fields, [2]int{begin, end})
	}
	r.bad = r.bad || state == quoted
	return r
}

func (r plainRow) isEmpty() bool { return len(r.text) == 0 || len(r.fields) == 0 }

// withoutRejects cuts the rejected rows out of a text; it counts the others. It
// tells whether all rejects were there and no other row is bad.
func withoutRejects(text []byte, sep separator, line int64, r result) (kept []byte, rows int, ok bool) {
	for len(text) > 0 {
		length, rejected := 0, false
		if len(r.rejects) > 0 && r.rejects[0].Line == line {
			length, rejected = rejectedLength(text, r.rejects[0].Text)
			r.rejects = r.rejects[1:]
			if !rejected {
				return kept, rows, false
			}
		} else {
			row := onePlainRow(text, sep)
			if length = len(row.text) + len(row.end); row.bad {
				return kept, rows, false
			}
			kept = append(kept, text[:length]...)
			if !row.isEmpty() {
				rows++
			}
		}
		line += int64(bytes.Count(text[:length], []byte("\n")))
		text = text[length:]
	}
	return kept, rows, len(r.rejects) == 0
}

// rejectedLength returns the length of a rejected row with its line end.
func rejectedLength(text, row []byte) (length int, ok bool) {
	rest, ok := bytes.CutPrefix(text, row)
	switch {
	case !ok || len(row) == 0:
		return 0, false
	case bytes.HasPrefix(rest, []byte("\r\n")):
		return len(row) + 2, true
	case bytes.HasPrefix(rest, []byte("\n")):
		return len(row) + 1, true
	}
	return len(row), len(rest) == 0
}

// isRefused tells whether the standard library's reader refuses a text. It
// takes no blanks beside quotes: where there are some, it is not asked.
func isRefused(text []byte, sep separator) bool {
	for _, blank := range []string{" ", "\t"} {
		beside := bytes.Contains(text, []byte(blank+`"`)) || bytes.Contains(text, []byte(`"`+blank))
		if beside && blank != string(rune(sep)) {
			return false
		}
	}
	r := csv.NewReader(bytes.NewReader(text))
	r.Comma, r.FieldsPerRecord = rune(sep), -1
	_, err := r.ReadAll()
	return err != nil
}

// restore undoes a rewrite of the first three of some columns.
func restore(out []byte, sep separator, columns int) (text []byte) {
	for _, row := range plainRows(out, sep) {
		if !row.isEmpty() {
			at := 0
			for k := range 3 {
				raw := row.fields[columns+k]
				text = append(text, row.text[at:row.fields[k][0]]...)
				text = append(text, row.text[raw[0]:raw[1]]...)
				at = row.fields[k][1]
			}
			text = append(text, row.text[at:row.fields[columns][0]-1]...)
		} else {
			text = append(text, row.text...)
		}
		text = append(text, row.end...)
	}
	return text
}
