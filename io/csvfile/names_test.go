package csvfile

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"bentray/io/cloud"
)

// testNames are names of which the first ones need quotes in some dialect.
func testNames(count int) []string {
	names := []string{`the "inner" bay`, "a,b;c\td e", "# north", "two\nlines", `"`, "Østre sund"}
	for i := len(names); i < count; i++ {
		names = append(names, fmt.Sprint("zone ", i))
	}
	return names[:count]
}

// testPositions are positions in a list of names, none in the rows from 100 to
// 299 and in a fifth of the others.
func testPositions(rows, names int, seed uint64) []float64 {
	r := rand.New(rand.NewPCG(seed, 0))
	list := make([]float64, rows)
	for i := range list {
		list[i] = float64(r.IntN(names))
		if r.IntN(5) == 0 || i >= 100 && i < 300 {
			list[i] = math.NaN()
		}
	}
	return list
}

// namesLayout adds a label held by row and a number behind it.
func namesLayout(names []string) cloud.Layout {
	return cloud.Layout{
		XYZ: [3]int{0, 1, 2}, RawNames: [3]string{"x_raw", "y_raw", "z_raw"}, Moved: []bool{true},
		Added: []cloud.Added{{Name: "zone", Type: cloud.Label, Names: names}, {Name: "depth"}},
	}
}

// rewriteNames copies rows of 1, 2, 3 in blocks of a size, and returns the
// output or the first error.
func rewriteNames(sep string, block int, names []string, positions []float64) (string, error) {
	text := strings.Join([]string{"x", "y", "z"}, sep) + "\n" + strings.Repeat(strings.Join([]string{"1", "2", "3"}, sep)+"\n", len(positions))
	f, err := openText("a.csv", text, Options{}, block)
	if err != nil {
		return "", err
	}
	defer f.Close()
	layout := namesLayout(names)
	var out bytes.Buffer
	if err := f.Begin(cloud.Request{}, layout, &out); err != nil {
		return "", err
	}
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			return out.String(), f.Finish()
		} else if err != nil {
			return "", err
		}
		if err := f.Decode(&c); err != nil {
			return "", err
		}
		c.Resize(c.Rows, layout)
		clear(c.Class)
		for k := range c.XYZ {
			for i := range c.Rows {
				c.XYZ[k][i] = 4
			}
		}
		positions = positions[copy(c.Added[0], positions):]
		for i := range c.Rows {
			c.Added[1][i] = 5
		}
		if err := f.Encode(&c); err != nil {
			return "", err
		}
		if err := f.Put(&c); err != nil {
			return "", err
		}
	}
}

// TestNames finds the names again by the standard library's reader, and by this
// package's where that does not know the separator.
func TestNames(t *testing.T) {
	const rows, seed = 1025, 3
	for _, count := range []int{1, 2, 300, 5000} {
		names, positions := testNames(count), testPositions(rows, count, seed)
		want := make([]string, rows)
		for i, v := range positions {
			if v == v {
				want[i] = names[int(v)]
			}
		}
		for _, sep := range []string{",", ";", "\t", " "} {
			for _, block := range []int{1, 500, blockSize} {
				out, err := rewriteNames(sep, block, names, positions)
				if err != nil {
					t.Fatal(err)
				}
				if got := namesIn(t, sep, out); !slices.Equal(got, want) {
					t.Errorf("%d names, %q, blocks of %d, seed %d: the names read back differ", count, sep, block, seed)
				}
			}
		}
	}
}

// namesIn reads the column of names, and wants 5 in the column behind it.
func namesIn(t *testing.T, sep, text string) (names []string) {
	t.Helper()
	if sep == " " {
		f, err := openText("out.csv", text, Options{}, 0)
		if err != nil {
			t.Fatal(err)
		}
		r, err := rewrite(f, cloud.Request{Texts: []int{6, 7}}, [3]int{0, 1, 2})
		if err != nil || slices.ContainsFunc(r.texts[1], func(s string) bool { return s != "5" }) {
			t.Fatalf("got %v and depths %q, want 5", err, r.texts[1])
		}
		return r.texts[0]
	}
	for i, fields := range readCSV(t, sep, text) {
		if i == 0 {
			continue // the header
		}
		if fields[7] != "5" {
			t.Fatalf("row %d: depth is %q, want 5", i, fields[7])
		}
		names = append(names, fields[6])
	}
	return names
}

func TestNamesByHand(t *testing.T) {
	names := []string{"bay", `5" pipe`, "east, west", ""}
	positions := []float64{1, 0, math.NaN(), 2, 3, math.Copysign(0, -1)}
	for sep, want := range map[string]string{
		",": "x,y,z,x_raw,y_raw,z_raw,zone,depth\n4,4,4,1,2,3,\"5\"\" pipe\",5\n4,4,4,1,2,3,bay,5\n4,4,4,1,2,3,,5\n4,4,4,1,2,3,\"east, west\",5\n4,4,4,1,2,3,,5\n4,4,4,1,2,3,bay,5\n",
		" ": "x y z x_raw y_raw z_raw zone depth\n4 4 4 1 2 3 \"5\"\" pipe\" 5\n4 4 4 1 2 3 bay 5\n4 4 4 1 2 3 \"\" 5\n4 4 4 1 2 3 \"east, west\" 5\n4 4 4 1 2 3 \"\" 5\n4 4 4 1 2 3 bay 5\n",
	} {
		if got, err := rewriteNames(sep, 0, names, positions); err != nil || got != want {
			t.Errorf("%q: got %q, %v\nwant %q", sep, got, err, want)
		}
	}
}

// TestNoSuchName wants a position outside the names, or between them, refused.
func TestNoSuchName(t *testing.T) {
	for _, v := range []float64{-1, 2, 0.5, 1e300, math.Inf(1), math.Inf(-1)} {
		_, err := rewriteNames(",", 0, testNames(2), []float64{1, math.NaN(), v})
		want := fmt.Sprintf(`a.csv: column "zone": a row has position %v among the names, want a whole number from 0 to 1, or NaN for none`, v)
		if err == nil || err.Error() != want {
			t.Errorf("got  %v\nwant %s", err, want)
		}
	}
}

// warmNames is warm for a label held by row.
func warmNames(tb testing.TB, rows, names int) (*File, *cloud.Chunk) {
	tb.Helper()
	f, err := openText("a.csv", "x,y,z\n"+strings.Repeat("1,2,3\n", rows), Options{}, 0)
	if err != nil {
		tb.Fatal(err)
	}
	layout, c := namesLayout(testNames(names)), new(cloud.Chunk)
	if err := f.Begin(cloud.Request{}, layout, io.Discard); err != nil {
		tb.Fatal(err)
	}
	if err := f.Next(c); err != nil {
		tb.Fatal(err)
	}
	if err := f.Decode(c); err != nil {
		tb.Fatal(err)
	}
	c.Resize(c.Rows, layout)
	clear(c.Class)
	copy(c.Added[0], testPositions(rows, names, 4))
	if err := f.Encode(c); err != nil {
		tb.Fatal(err)
	}
	return f, c
}

func TestNamesWithoutAllocation(t *testing.T) {
	f, c := warmNames(t, 2000, 300)
	n := testing.AllocsPerRun(10, func() {
		if err := f.Encode(c); err != nil {
			t.Fatal(err)
		}
	})
	if n != 0 || c.Rows != 2000 {
		t.Errorf("%v allocations, %d rows, want none, 2000", n, c.Rows)
	}
}

func BenchmarkEncodeNames(b *testing.B) {
	f, c := warmNames(b, 20000, 300)
	b.SetBytes(int64(len(c.Format.(*block).out)))
	b.ReportAllocs()
	for b.Loop() {
		if err := f.Encode(c); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(c.Rows)*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
}
