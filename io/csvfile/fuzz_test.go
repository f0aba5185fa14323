package csvfile

import (
	"bytes"
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
		kept, rows := withoutRejects(body, file.sep, line, r)
		if rows != r.rows {
			t.Fatalf("%d rows read, %d written, of %q", rows, r.rows, in)
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
}

// plainRows parts a text byte by byte.
func plainRows(text []byte, sep separator) (rows []plainRow) {
	for len(text) > 0 {
		r := plainRow{text: text}
		inside, inField, begin := false, sep != blanks, 0
		length := len(text)
		for i, c := range text {
			if c == '\n' && !inside {
				length = i + 1
				break
			}
			if c == '"' {
				inside = !inside
			}
		}
		r.text, text = text[:length], text[length:]
		if n := len(r.text); n > 0 && r.text[n-1] == '\n' {
			cut := n - 1
			if cut > 0 && r.text[cut-1] == '\r' {
				cut--
			}
			r.text, r.end = r.text[:cut], r.text[cut:]
		}
		inside = false
		for i, c := range r.text {
			separates := !inside && (c == byte(sep) || sep == blanks && c == '\t')
			if c == '"' {
				inside = !inside
			}
			switch {
			case separates && inField:
				r.fields = append(r.fields, [2]int{begin, i})
				begin, inField = i+1, sep != blanks
			case !separates && !inField:
				begin, inField = i, true
			}
		}
		if inField {
			r.fields = append(r.fields, [2]int{begin, len(r.text)})
		}
		rows = append(rows, r)
	}
	return rows
}

func (r plainRow) isEmpty() bool { return len(r.text) == 0 || len(r.fields) == 0 }

// withoutRejects cuts the rejected rows out of a text; it counts the others.
func withoutRejects(text []byte, sep separator, line int64, r result) (kept []byte, rows int) {
	for _, row := range plainRows(text, sep) {
		whole := append(bytes.Clone(row.text), row.end...)
		rejected := !row.isEmpty() && len(r.rejects) > 0 && r.rejects[0].Line == line && bytes.Equal(r.rejects[0].Text, row.text)
		line += int64(bytes.Count(whole, []byte("\n")))
		if rejected {
			r.rejects = r.rejects[1:]
			continue
		}
		kept = append(kept, whole...)
		if !row.isEmpty() {
			rows++
		}
	}
	if len(r.rejects) > 0 {
		return nil, -1
	}
	return kept, rows
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
