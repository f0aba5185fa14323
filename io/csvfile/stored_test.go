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
