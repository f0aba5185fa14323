package csvfile

import (
	"bytes"
	"fmt"
	"io"
	"slices"
	"strings"
	"sync"
	"testing"

	"bentray/io/cloud"
)

func TestDivert(t *testing.T) {
	in := "# c\nx,y,z\n\n1,2,3\n\r\n\na,2,3\r\n\n4,5,6\n7,8\n\n\n\"b\n\n\",8,9\n10,11,12\n\nlast,,"
	want := []cloud.Reject{
		{Line: 7, Reason: `x is "a", want a number`, Text: []byte("a,2,3")},
		{Line: 10, Reason: "has 2 fields, want 3", Text: []byte("7,8")},
		{Line: 13, Reason: `x is "b\n\n", want a number`, Text: []byte("\"b\n\n\",8,9")},
		{Line: 18, Reason: `x is "last", want a number`, Text: []byte("last,,")},
	}
	const header = "x,y,z,x_raw,y_raw,z_raw,depth,outcome,n water,rays\n"
	out := "# c\n" + header + "\n2.0000,3.0000,4.0000,1,2,3" + testTail(",", 0) + "\n\r\n\n\n4,5,6,4,5,6" + testTail(",", 1) + "\n\n\n11.0000,12.0000,13.0000,10,11,12" + testTail(",", 2) + "\n\n"
	for _, block := range []int{1, 10, 20, 40, blockSize} {
		f, err := openText("a.csv", in, Options{Divert: true}, block)
		if err != nil {
			t.Fatal(err)
		}
		r, err := rewrite(f, cloud.Request{Texts: []int{2}}, [3]int{0, 1, 2})
		if err != nil {
			t.Fatal(err)
		}
		same := slices.EqualFunc(r.rejects, want, func(a, b cloud.Reject) bool {
			return a.Line == b.Line && a.Reason == b.Reason && bytes.Equal(a.Text, b.Text)
		})
		if !same {
			t.Errorf("blocks of %d: got rejects %+v", block, r.rejects)
		}
		if string(r.out) != out {
			t.Errorf("blocks of %d: got\n%q\nwant\n%q", block, r.out, out)
		}
		if !slices.Equal(r.texts[0], []string{"3", "6", "12"}) {
			t.Errorf("blocks of %d: got texts %q", block, r.texts[0])
		}
	}
}

// A chunk has no more than blockRows rows, however short they are.
func TestShortRows(t *testing.T) {
	const rows = 2*blockRows + 5
	f, err := openText("a.csv", "x,y,z\n"+strings.Repeat("1,2,\n", rows), Options{}, 0)
	if err != nil {
		t.Fatal(err)
	}
	r, err := rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
	if err != nil || r.rows != rows || !slices.Equal(r.chunks, []int{blockRows, blockRows, 5}) {
		t.Errorf("got %d rows, chunks %v, %v", r.rows, r.chunks, err)
	}
}

// slowly gives one byte a time.
type slowly struct{ in io.Reader }

func (s slowly) Read(p []byte) (int, error) { return s.in.Read(p[:min(len(p), 1)]) }

// Chunks do not depend on how much the input gives at a time.
func TestChunksOfSlowInput(t *testing.T) {
	in := makeFile(",", "\n", true, true, 200, 1).in.String()
	var chunks [2][]int
	for i, r := range []io.Reader{strings.NewReader(in), slowly{strings.NewReader(in)}} {
		f, err := newFile(&source{path: "a.csv", in: r, size: -1}, Options{})
		if err != nil {
			t.Fatal(err)
		}
		f.blockSize = 500
		got, err := rewrite(f, cloud.Request{}, madeXYZ)
		if err != nil {
			t.Fatal(err)
		}
		chunks[i] = got.chunks
	}
	if !slices.Equal(chunks[0], chunks[1]) || len(chunks[0]) < 10 {
		t.Errorf("got %v and %v", chunks[0], chunks[1])
	}
}

// The output does not depend on how many chunks are in work at once.
func TestWorkers(t *testing.T) {
	m := makeFile(",", "\n", true, true, 2000, 4)
	for _, workers := range []int{1, 2, 7} {
		f, err := openText("a.csv", m.in.String(), Options{}, 1000)
		if err != nil {
			t.Fatal(err)
		}
		if got := rewriteParallel(t, f, workers); got != m.out.String() {
			t.Errorf("%d workers: got\n%s\nwant\n%s", workers, got, m.out.String())
		}
	}
}

// rewriteParallel does what rewrite does, a batch of chunks at a time.
func rewriteParallel(t *testing.T, f *File, workers int) string {
	t.Helper()
	layout := testLayout(madeXYZ)
	var out bytes.Buffer
	if err := f.Begin(cloud.Request{Numbers: madeXYZ[:]}, layout, &out); err != nil {
		t.Fatal(err)
	}
	chunks := make([]cloud.Chunk, workers)
	row := 0
	for more := true; more; {
		var group sync.WaitGroup
		taken := 0
		for ; taken < workers && more; taken++ {
			c := &chunks[taken]
			if err := f.Next(c); err == io.EOF {
				more = false
				break
			} else if err != nil {
				t.Fatal(err)
			}
			group.Go(func() {
				if err := f.Decode(c); err != nil {
					t.Error(err)
				}
			})
		}
		group.Wait()
		for i := range taken {
			c := &chunks[i]
			first := row
			row += c.Rows
			group.Go(func() {
				c.Resize(c.Rows, layout)
				fillTest(c, first, c.Numbers)
				if err := f.Encode(c); err != nil {
					t.Error(err)
				}
			})
		}
		group.Wait()
		for i := range taken {
			if err := f.Put(&chunks[i]); err != nil {
				t.Fatal(err)
			}
		}
	}
	if err := f.Finish(); err != nil {
		t.Fatal(err)
	}
	return out.String()
}

// Reading without writing gives the same numbers, and Consumed adds up to the
// bytes of the file.
func TestReadOnly(t *testing.T) {
	m := makeFile(";", "\r\n", true, false, 100, 2)
	f, err := openText("a.csv", m.in.String(), Options{}, 700)
	if err != nil {
		t.Fatal(err)
	}
	if err := f.Begin(cloud.Request{Numbers: []int{2}}, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	var c cloud.Chunk
	var consumed int64
	rows := 0
	for f.Next(&c) == nil {
		if err := f.Decode(&c); err != nil {
			t.Fatal(err)
		}
		for i := range c.Rows {
			if got := fmt.Sprintf("%.3f", c.Numbers[0][i]); got != m.z[rows+i] {
				t.Fatalf("row %d: got %s, want %s", rows+i, got, m.z[rows+i])
			}
		}
		rows += c.Rows
		consumed += c.Consumed
	}
	if rows != 100 || consumed != int64(m.in.Len()) {
		t.Errorf("got %d rows, %d bytes, want 100, %d", rows, consumed, m.in.Len())
	}
	if err := f.Next(&c); err != io.EOF {
		t.Errorf("after the end: got %v, want %v", err, io.EOF)
	}
}

func TestReadNumbers(t *testing.T) {
	f, err := openText("t.csv", "gps_time;x;y\n1;2;3\n4;;6\n", Options{}, 0)
	if err != nil {
		t.Fatal(err)
	}
	table, err := cloud.ReadNumbers(f, "y", "gps_time")
	if err != nil || !slices.Equal(table[0], []float64{3, 6}) || !slices.Equal(table[1], []float64{1, 4}) {
		t.Errorf("got %v, %v", table, err)
	}
}
