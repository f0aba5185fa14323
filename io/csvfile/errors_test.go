package csvfile

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"bentray/io/cloud"
)

var filler = strings.Repeat("1,2,3\n", 9<<20/6)

func TestErrors(t *testing.T) {
	tests := []struct{ name, in, want string }{
		{"empty", "", `a.csv is empty, want a header line`},
		{"byte order mark alone", "\xef\xbb\xbf", `a.csv is empty, want a header line`},
		{"comments alone", "# a\n\n", `a.csv has only comments and empty lines, want a header line`},
		{"UTF-16 little endian", "\xff\xfex\x00,\x00", `a.csv is UTF-16 text, want UTF-8; convert it first`},
		{"UTF-16 big endian", "\xfe\xff\x00x", `a.csv is UTF-16 text, want UTF-8; convert it first`},
		{"binary", "LASF\x00\x00", `a.csv has NUL bytes near its start, want UTF-8 text; convert it first if it is UTF-16, else it is no text file`},
		{"carriage returns", "x,y,z\r1,2,3\r", `a.csv has lines that end in a carriage return alone, want LF or CR LF; convert its line ends first`},
		{"carriage returns behind a comment", "# 5\"\rx,y,z\r1,2,3\r", `a.csv has lines that end in a carriage return alone, want LF or CR LF; convert its line ends first`},
		{"carriage return later", "x,y,z\n1,2,3\n1,2,3\r4,5,6\n", `a.csv: line 3 has a carriage return within, want LF or CR LF at its end; convert the line ends first`},
		{"carriage return last", "x,y,z\r\n1,2,3\r", `a.csv: line 2 has a carriage return within, want LF or CR LF at its end; convert the line ends first`},
		{"one column", "# c\nx|y|z\n1|2|3\n", `a.csv: line 2 has one field, want at least two, separated by commas, semicolons, tabs or blanks`},
		{"no header", "# c\n1,-2.5,\"3\",\n", `a.csv: line 2 has only numbers, want a header line`},
		{"text", "x,y,z\n1,2,-9999m\n", `a.csv: line 2: z is "-9999m", want a number`},
		{"quoted text", "x,y,z\n1,2,\" b \"\"c\"\" \"\n", `a.csv: line 2: z is "b \"c\"", want a number`},
		{"decimal comma", "x,y,z\n1,2,3\n1,\"12,5\",3\n", `a.csv: line 3: y is "12,5", want a number with a decimal point, not a comma`},
		{"two commas", "x,y,z\n1,\"1,234,5\",3\n", `a.csv: line 2: y is "1,234,5", want a number`},
		{"long text", "x,y,z\n1,2," + strings.Repeat("b", 100) + "\n", `a.csv: line 2: z is "` + strings.Repeat("b", 40) + `...", want a number`},
		{"long text, cut between characters", "x,y,z\n1,2,b" + strings.Repeat("é", 30) + "\n", `a.csv: line 2: z is "b` + strings.Repeat("é", 19) + `...", want a number`},
		{"too few fields", "x,y,z\n1,2\n", `a.csv: line 2 has 2 fields, want 3`},
		{"one field", "x,y,z\n1\n", `a.csv: line 2 has 1 field, want 3`},
		{"too many fields", "x,y,z\n1,2,3,\n", `a.csv: line 2 has 4 fields, want 3`},
		{"too many blanks", "x y z\n1 2 3 4\n", `a.csv: line 2 has 4 fields, want 3`},
		{"comment among rows", "x,y,z\n# 1\n", `a.csv: line 2 has 1 field, want 3`},
		{"line numbers", "# c\n\nx,y,z\n1,2,\"3\"\n\n\"\n\n\",5,6\n7,8,\"9\n\"\n", `a.csv: line 6: x is "\n\n", want a number`},
		{"first of two", "x,y,z\na,2,3\n1,b,3\n", `a.csv: line 2: x is "a", want a number`},
		{"open quote", "x,y,z,n\n1,2,3,\"a\nb\"\n1,2,3,\"c\n7,8,9,d\n", `a.csv: line 4 has a quote that is not closed, want a closing quote before the end of the file`},
		{"stray quote", "x,y,z\n1,2,3\n4,5\" wide,6\n7,\"8\",9\n", `a.csv: line 3: y has a quote within a field, want quotes around the whole field`},
		{"quote behind a blank", "x,y,z\n1,2,a \"3\"\n", `a.csv: line 2: z has a quote within a field, want quotes around the whole field`},
		{"text behind a quoted field", "x,y,z\n1,\"2\" m,3\n", `a.csv: line 2: y has a quote within a field, want quotes around the whole field`},
		{"two quoted texts in a field", "x,y,z\n\"1\" \"2\",2,3\n", `a.csv: line 2: x has a quote within a field, want quotes around the whole field`},
		{"quote of a later line", "x,y,z\n1,\"2,3\n4,5,6\n7,\"8,9\n", `a.csv: line 2: y has a quote within a field on line 4, want quotes around the whole field`},
		{"quote in a field too many", "x,y,z\n1,2,3,4\"\n", `a.csv: line 2 has a quote within a field, want quotes around the whole field`},
		{"quote within a word", "x y z\n\"1\"\t2 \"3\" \n1 2 3\"\n", `a.csv: line 3: z has a quote within a field, want quotes around the whole field`},
		{"text behind a quoted word", "x y z\n1 \"2\"3 4\n", `a.csv: line 2: y has a quote within a field, want quotes around the whole field`},
		{"quote within a field of the header", "# c\nx,y,5\" z\n1,2,3\n", `a.csv: line 2 has a quote within a field, want quotes around the whole field`},
		{"quote within a header alone", "x,y,5\"", `a.csv: line 1 has a quote within a field, want quotes around the whole field`},
		{"quote within a word of the header", "x y z\"\n1 2 3\n", `a.csv: line 1 has a quote within a field, want quotes around the whole field`},
		{"carriage returns and a quoted header", "x,y,\"z\"\r1,2,\"3\"\r", `a.csv has lines that end in a carriage return alone, want LF or CR LF; convert its line ends first`},
		{"open quote in the header", "# c\nx,y,\"z\n1,2,3\n", `a.csv: line 2 has a quote that is not closed, want a closing quote before the end of the file`},
		{"open quote, long file", "x,y,z\n1,2,3\n4,\"5,6\n" + filler + filler, `a.csv: line 3 has a quote that is not closed within 16 MiB, want a closing quote`},
		{"open quote in the header, long file", "x,\"y,z\n" + filler + filler, `a.csv: line 1 has a quote that is not closed within 16 MiB, want a closing quote`},
		{"long row", "x,y,z\n1,2,3\n" + strings.ReplaceAll(filler+filler, "\n", " "), `a.csv: line 3 begins a row of more than 16 MiB, want shorter rows`},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			if got := errorOf("a.csv", test.in, Options{}, 0); got != test.want {
				t.Errorf("got  %s\nwant %s", got, test.want)
			}
		})
	}
}

// errorOf rewrites a text and returns the error as text.
func errorOf(path, in string, o Options, block int) string {
	f, err := openText(path, in, o, block)
	if err == nil {
		_, err = rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
	}
	if err == nil {
		return "no error"
	}
	return err.Error()
}

func TestErrorsOfNames(t *testing.T) {
	got := errorOf("a.csv", "\n1,2,3\n", Options{Names: []string{"x", "y"}}, 0)
	if want := `a.csv: line 2 has 3 fields, want 2 as in [input.csv] names`; got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
}

// The line of a row error does not depend on where blocks end.
func TestErrorLineAcrossBlocks(t *testing.T) {
	in := "# c\r\n\r\nx,y,z\r\n" + strings.Repeat("1,2,\"3\"\r\n\r\n\"1\",2,3\r\n", 700) + "1,2\r\n"
	for _, block := range []int{1, 7, 64, 1000, blockSize} {
		if got, want := errorOf("a.csv", in, Options{}, block), "a.csv: line 2104 has 2 fields, want 3"; got != want {
			t.Errorf("blocks of %d: got %s, want %s", block, got, want)
		}
	}
}

func TestErrNoHeader(t *testing.T) {
	if _, err := openText("a.csv", "1,2,3\n", Options{}, 0); !errors.Is(err, ErrNoHeader) || err.Error() != "a.csv: line 1 has only numbers, want a header line" {
		t.Errorf("got %v", err)
	}
	if _, err := openText("a.csv", "1,2,3\n", Options{Names: []string{"x", "y", "z"}}, 0); err != nil {
		t.Errorf("with names: got %v", err)
	}
}

func TestRowErrorType(t *testing.T) {
	f, err := openText("a.csv", "x,y,z\n1,2,q\n", Options{}, 0)
	if err != nil {
		t.Fatal(err)
	}
	_, err = rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
	var row *cloud.RowError
	if !errors.As(err, &row) || row.Path != "a.csv" || row.Line != 2 || row.Row != 0 || row.Column != "z" {
		t.Errorf("got %#v", err)
	}
}

func TestOpenErrors(t *testing.T) {
	if _, err := Open("none.csv", Options{}); err == nil || !errors.Is(err, os.ErrNotExist) || err.Error() != "none.csv: no such file or directory" {
		t.Errorf("got %v", err)
	}
	folder := filepath.Join(t.TempDir(), "a.csv")
	if err := os.Mkdir(folder, 0o777); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(folder, Options{}); err == nil || err.Error() != folder+": is a directory" {
		t.Errorf("got %v", err)
	}
}

func TestShrinkingInput(t *testing.T) {
	path := filepath.Join(t.TempDir(), "a.csv")
	text := "x,y,z\n" + filler[:6<<15]
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if err := os.Truncate(path, 6<<14); err != nil {
		t.Fatal(err)
	}
	_, err = rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
	if want := path + " ends after 98304 bytes, had 196614 when it was opened; leave it unchanged during a run"; err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

// failing gives its text, then an error.
type failing struct{ in io.Reader }

func (f failing) Read(p []byte) (int, error) {
	n, err := f.in.Read(p)
	if err == io.EOF {
		err = &os.PathError{Op: "read", Path: "a.csv", Err: errors.New("input/output error")}
	}
	return n, err
}

func TestFailingInput(t *testing.T) {
	f, err := newFile(&source{path: "a.csv", in: failing{strings.NewReader("x,y,z\n" + filler)}, size: -1}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	_, err = rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
	if err == nil || err.Error() != "a.csv: input/output error" {
		t.Errorf("got %v", err)
	}
}

func TestBeginErrors(t *testing.T) {
	layout := testLayout([3]int{0, 1, 2})
	tests := []struct {
		want   string
		change func(*cloud.Layout, *cloud.Request)
	}{
		{"a.csv: column 3 is asked for, want 0 to 2", func(_ *cloud.Layout, r *cloud.Request) { r.Numbers = []int{3} }},
		{"a.csv: column -1 is asked for, want 0 to 2", func(l *cloud.Layout, _ *cloud.Request) { l.XYZ[2] = -1 }},
		{"a.csv: x, y and z are columns 0, 1 and 1, want three different ones", func(l *cloud.Layout, _ *cloud.Request) { l.XYZ[2] = 1 }},
		{"a.csv: decimals of coordinates are 16, want 0 to 15", func(l *cloud.Layout, _ *cloud.Request) { l.Decimals = 16 }},
		{`a.csv: decimals of "d" are -1, want 0 to 15`, func(l *cloud.Layout, _ *cloud.Request) { l.Added = []cloud.Added{{Name: "d", Decimals: -1}} }},
		{`a.csv: column "d" is a label held by row without names, want names, or one by class`, func(l *cloud.Layout, _ *cloud.Request) { l.Added = []cloud.Added{{Name: "d", Type: cloud.Label}} }},
		{`a.csv: column "d" has values for 1 classes, want 2`, func(l *cloud.Layout, _ *cloud.Request) {
			l.Added = []cloud.Added{{Name: "d", ByClass: make([]cloud.Value, 1)}}
		}},
	}
	for _, test := range tests {
		f, err := openText("a.csv", "x,y,z\n", Options{}, 0)
		if err != nil {
			t.Fatal(err)
		}
		l, r := layout, cloud.Request{}
		test.change(&l, &r)
		if err := f.Begin(r, l, io.Discard); err == nil || err.Error() != test.want {
			t.Errorf("got  %v\nwant %s", err, test.want)
		}
	}
}
