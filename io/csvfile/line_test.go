package csvfile

import (
	"fmt"
	"os"
	"path/filepath"
	"testing"

	"bentray/io/cloud"
)

// Every row's line is that on which its text begins, whatever stands before it, in every
// block of a file.
func TestLine(t *testing.T) {
	for name, c := range map[string]struct {
		text string
		want []int64
	}{
		"plain":           {"a,b\n1,2\n3,4\n", []int64{2, 3}},
		"comments":        {"# one\n\n// two\na,b\n1,2\n\n\n3,4", []int64{5, 8}},
		"CR LF":           {"a,b\r\n1,2\r\n\r\n3,4\r\n", []int64{2, 4}},
		"breaks in quote": {"a,b\n1,\"x\ny\"\n\n2,\"\n\n\"\n3,4\n", []int64{2, 5, 8}},
		"blanks":          {"a b\n  1 2\n \t \n3 4\n", []int64{2, 4}},
	} {
		for _, size := range []int{1, 7, 1 << 20} {
			t.Run(fmt.Sprint(name, " by ", size), func(t *testing.T) {
				path := filepath.Join(t.TempDir(), "a.csv")
				if err := os.WriteFile(path, []byte(c.text), 0o600); err != nil {
					t.Fatal(err)
				}
				f, err := Open(path, Options{})
				if err != nil {
					t.Fatal(err)
				}
				defer f.Close()
				f.blockSize = size
				if err := f.Begin(cloud.Request{Texts: []int{0}}, cloud.Layout{}, nil); err != nil {
					t.Fatal(err)
				}
				var got []int64
				if err := cloud.EachChunk(f, func(c *cloud.Chunk) {
					for i := range c.Rows {
						got = append(got, f.Line(c, i))
					}
				}); err != nil {
					t.Fatal(err)
				}
				if fmt.Sprint(got) != fmt.Sprint(c.want) {
					t.Errorf("lines are %d, want %d", got, c.want)
				}
			})
		}
	}
}
