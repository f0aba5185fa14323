package csvfile

import (
	"fmt"
	"io"
	"math/rand/v2"
	"strings"
	"testing"

	"bentray/io/cloud"
)

// part is what a chunk took: bytes of the file, bytes of text, and rows.
type part struct {
	consumed   int64
	text, rows int
}

// parts reads the last column of a file to its end, and returns the sum of what
// its chunks consumed too.
func parts(t *testing.T, path, in string, o Options, size int) (all []part, total int64) {
	t.Helper()
	f, err := openText(path, in, o, size)
	if err != nil {
		t.Fatal(err)
	}
	if err := f.Begin(cloud.Request{Numbers: []int{len(f.columns) - 1}}, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			return all, total
		} else if err != nil {
			t.Fatal(err)
		}
		if err := f.Decode(&c); err != nil {
			t.Fatal(err)
		}
		if c.Consumed < 0 {
			t.Fatalf("chunk %d consumed %d bytes", len(all), c.Consumed)
		}
		all = append(all, part{c.Consumed, len(c.Format.(*block).text), c.Rows})
		total += c.Consumed
	}
}

// A chunk of a plain file consumes its text, the first also what stands before
// its rows.
func TestConsumedPlain(t *testing.T) {
	rows := makeFile(",", "\r\n", true, false, 900, 2).in.String() + "\r\n\r\n"
	header := strings.Index(rows, "\n") + 1
	const ahead = "\xef\xbb\xbf# c\n\n"
	numbers := ahead + rows[header:]
	tests := []struct {
		name, in string
		o        Options
		before   int // bytes before the first chunk's text
	}{
		{"header", rows, Options{}, header},
		{"comment and header", ahead + rows, Options{}, len(ahead) + header},
		{"names", numbers, Options{Names: strings.Split("n,x,z,f,y", ",")}, len(ahead)},
	}
	for _, test := range tests {
		for _, size := range []int{1, 500, 30000, blockSize} {
			all, total := parts(t, "a.csv", test.in, test.o, size)
			for i, p := range all {
				want := p.text
				if i == 0 {
					want += test.before
				}
				if p.consumed != int64(want) {
					t.Fatalf("%s, blocks of %d: chunk %d consumed %d bytes, want %d", test.name, size, i, p.consumed, want)
				}
			}
			if total != int64(len(test.in)) {
				t.Errorf("%s, blocks of %d: consumed %d bytes, want %d", test.name, size, total, len(test.in))
			}
		}
	}
}

// The rows of the first chunk, scaled by the bytes it consumed, estimate the
// rows of the file: exactly but for the header where rows are alike, and within
// a twentieth in compressed files of random rows.
func TestConsumedEstimatesRows(t *testing.T) {
	const rows, seed = 50000, 6
	r := rand.New(rand.NewPCG(seed, 0))
	short := "x,y,z\n" + strings.Repeat("1.5,2.5,-3.5\n", rows)
	var b strings.Builder
	b.WriteString("x,y,z\n")
	for range rows {
		fmt.Fprintf(&b, "%.1f,%.1f,%.1f\n", 10*r.Float64(), 10*r.Float64(), -9*r.Float64())
	}
	for _, test := range []struct {
		name, in string
		within   float64
	}{
		{"a.csv", short, 1e-4},
		{"a.csv.gz", pack(t, "a.csv.gz", b.String()), 0.05},
		{"a.csv.zst", pack(t, "a.csv.zst", b.String()), 0.05},
	} {
		all, total := parts(t, test.name, test.in, Options{}, 0)
		if total != int64(len(test.in)) || len(all) < 2 {
			t.Errorf("%s: %d chunks consumed %d bytes, want 2 at least and %d", test.name, len(all), total, len(test.in))
		}
		got := float64(all[0].rows) * float64(len(test.in)) / float64(all[0].consumed)
		if got < rows*(1-test.within) || got > rows*(1+test.within) {
			t.Errorf("%s, seed %d: estimate %.0f rows, want %d", test.name, seed, got, rows)
		}
	}
}

// Compressed files are consumed to their last byte, wherever blocks end: there
// may be empty members or frames behind the last text.
func TestConsumedCompressed(t *testing.T) {
	text := "x,y,z\n" + filler[:6*3000]
	for _, name := range []string{"a.csv.gz", "a.csv.zst"} {
		in := pack(t, name, text[:7000], text[7000:], "", "")
		for _, size := range []int{1, 600, 6 * 1500, len(text) - 6, len(text), blockSize} {
			if _, total := parts(t, name, in, Options{}, size); total != int64(len(in)) {
				t.Errorf("%s, blocks of %d: consumed %d bytes, want %d", name, size, total, len(in))
			}
		}
	}
}
