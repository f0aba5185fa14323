package csvfile

import (
	"os"
	"path/filepath"
	"slices"
	"testing"

	"bentray/io/cloud"
)

// storedOf reads columns of a text as they stand, and the lines and texts of rejects.
func storedOf(t *testing.T, text string, o Options, columns ...int) (stored [][]string, rejects []cloud.Reject) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "a.csv")
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := Open(path, o)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if err := f.Begin(cloud.Request{Stored: columns}, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	stored = make([][]string, len(columns))
	err = cloud.EachChunk(f, func(c *cloud.Chunk) {
		for k := range columns {
			for i := range c.Rows {
				stored[k] = append(stored[k], string(c.Stored[k].At(i)))
			}
		}
		rejects = append(rejects, c.Rejects...)
	})
	if err != nil {
		t.Fatal(err)
	}
	return stored, rejects
}

// Stored fields keep blanks and quotes, which texts do not.
func TestStored(t *testing.T) {
	got, _ := storedOf(t, "x,y,name\n1.50, 2,\"a \"\"b\"\"\"\n-0,,\"two\nlines\"\r\n", Options{}, 2, 1, 0)
	want := [][]string{{`"a ""b"""`, "\"two\nlines\""}, {" 2", ""}, {"1.50", "-0"}}
	for k := range want {
		if !slices.Equal(got[k], want[k]) {
			t.Errorf("column %d: %q, want %q", k, got[k], want[k])
		}
	}
}

// Rows that begin on a passed line are rejects without a reason, whatever is in them;
// lines are counted through line breaks in quotes and empty lines.
func TestPassed(t *testing.T) {
	text := "x,name\n1,a\n\n2,\"b\nb\"\n3\n4,d\n"
	got, rejects := storedOf(t, text, Options{Divert: true, Passed: []int64{4, 6, 99}}, 0)
	if want := []string{"1", "4"}; !slices.Equal(got[0], want) {
		t.Errorf("rows %q, want %q", got[0], want)
	}
	if len(rejects) != 2 || rejects[0].Line != 4 || string(rejects[0].Text) != "2,\"b\nb\"" || rejects[0].Reason != "" || rejects[1].Line != 6 || rejects[1].Reason != "" {
		t.Errorf("rejects %+v", rejects)
	}
	if _, rejects = storedOf(t, text, Options{Divert: true, Passed: []int64{4, 7}}, 0); len(rejects) != 3 || rejects[1].Reason != "has 1 field, want 2" {
		t.Errorf("rejects %+v", rejects)
	}
}

// Fault says of a row alone what reading it says.
func TestFault(t *testing.T) {
	path := filepath.Join(t.TempDir(), "a.csv")
	text := "x,y,name\n1,2,a\n1,?,b\n1\n\"1\",2,\"q\"\"r\"\n1,2,a\"b\n"
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	for _, c := range []struct {
		row     string
		numbers []int
		want    string
	}{
		{"1,2,a", []int{0, 1}, ""},
		{"1,?,b", []int{0}, ""},
		{"1,?,b", []int{0, 1}, `y is "?", want a number`},
		{"1,2,a", []int{2}, `name is "a", want a number`},
		{"1", nil, "has 1 field, want 3"},
		{`"1",2,"q""r"`, []int{0, 1}, ""},
		{`1,2,a"b`, nil, "name has a quote within a field, want quotes around the whole field"},
		{"1,2\r3,a", nil, "has a carriage return within, want LF or CR LF at its end; convert the line ends first"},
	} {
		if got := f.Fault(cloud.Reject{Line: 2, Text: []byte(c.row)}, c.numbers...); got != c.want {
			t.Errorf("%q read for %v: %q, want %q", c.row, c.numbers, got, c.want)
		}
	}
}
