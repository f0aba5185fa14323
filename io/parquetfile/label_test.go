package parquetfile

import (
	"bytes"
	"fmt"
	"math"
	"math/bits"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// labelGroups are rows by group: the first has pieces with, without and with
// values, the second has no value at all.
var labelGroups = []int{2*pieceRows + 1000, 500, 33}

// labelNames are names in no order, the first ones with what other formats
// would quote.
func labelNames(count int) []string {
	names := []string{`the "inner" bay`, "a,b;c\td e", "", "two\nlines", "Østre sund"}
	for i := len(names); i < count; i++ {
		names = append(names, fmt.Sprint("zone ", i))
	}
	return names[:count]
}

// labelPositions are positions in a list of names: a part in runs, none in the
// second piece of the first group and in the second group.
func labelPositions(names int, seed uint64) []float64 {
	r := rand.New(rand.NewPCG(seed, 0))
	list := make([]float64, labelGroups[0]+labelGroups[1]+labelGroups[2])
	for i := range list {
		switch {
		case i >= pieceRows && i < 2*pieceRows || i >= labelGroups[0] && i < labelGroups[0]+labelGroups[1] || r.IntN(9) == 0:
			list[i] = math.NaN()
		case i > 0 && list[i-1] == list[i-1] && i/3000%2 == 1 && r.IntN(50) > 0:
			list[i] = list[i-1]
		default:
			list[i] = float64(r.IntN(names))
		}
	}
	return list
}

// labelLayout adds a label held by row and a number behind it.
func labelLayout(names []string) cloud.Layout {
	return cloud.Layout{
		XYZ: [3]int{0, 1, 2}, RawNames: rawNames, Moved: []bool{true},
		Added: []cloud.Added{{Name: "zone", Type: cloud.Label, Names: names}, {Name: "row"}},
	}
}

// labelInput writes a file of points whose x is the number of the row.
func labelInput(t testing.TB, groups []int) string {
	t.Helper()
	x := built{name: "x", typ: parquet.Type_DOUBLE, required: true}
	for _, rows := range groups {
		for range rows {
			x.values = append(x.values, float64(len(x.values)))
		}
	}
	y, z := x, x
	y.name, z.name = "y", "z"
	return buildFile(t, []built{x, y, z}, groups, nil)
}

// rewriteLabels gives each row its position.
func rewriteLabels(path string, names []string, positions []float64, workers int) ([]byte, error) {
	return rewrite(path, Options{}, cloud.Request{Numbers: []int{0}}, labelLayout(names), workers, func(c *cloud.Chunk) {
		clear(c.Class)
		for i, row := range c.Numbers[0] {
			c.Added[0][i], c.Added[1][i] = positions[int(row)], row
		}
	})
}

// TestLabels finds the names again by the reader that TestRead and
// TestEngineFiles hold to other programs' encodings, and by their statistics;
// 1, 2 and 7 workers write the same bytes.
func TestLabels(t *testing.T) {
	const seed = 5
	path := labelInput(t, labelGroups)
	for _, count := range []int{1, 2, 5, 300, 5000, 70_000} {
		names, positions := labelNames(count), labelPositions(count, seed)
		var first []byte
		for _, workers := range []int{1, 2, 7} {
			out, err := rewriteLabels(path, names, positions, workers)
			if err != nil {
				t.Fatal(err)
			}
			if first == nil {
				first = out
			} else if !bytes.Equal(first, out) {
				t.Errorf("%d names: %d workers write other bytes than 1", count, workers)
			}
		}
		texts := make([]string, len(positions))
		for i, v := range positions {
			if v == v {
				texts[i] = names[int(v)]
			}
		}
		t.Run(fmt.Sprintf("%d names, seed %d", count, seed), func(t *testing.T) {
			checkLabels(t, first, texts, positions, count)
		})
	}
}

// checkLabels compares an output with its texts; a row without one has NaN for
// its position.
func checkLabels(t *testing.T, out []byte, texts []string, positions []float64, count int) {
	t.Helper()
	numbers, got, err := readBytes(out, Options{}, cloud.Request{Numbers: []int{7}, Texts: []int{6}})
	if err != nil {
		t.Fatal(err)
	}
	for row, text := range texts {
		if got[0][row] != text || numbers[0][row] != float64(row) {
			t.Fatalf("row %d is %q and %v, want %q", row, got[0][row], numbers[0][row], text)
		}
	}
	f, err := newFile("made.parquet", memory{bytes.NewReader(out)}, int64(len(out)), Options{})
	if err != nil {
		t.Fatal(err)
	}
	from := 0
	for g, rows := range labelGroups {
		m := f.groups[g].Columns[6].MetaData
		checkLabelChunk(t, m, texts[from:from+rows], positions[from:from+rows])
		if size, most := m.TotalCompressedSize, labelBytes(labelNames(count), rows); size > most {
			t.Errorf("row group %d takes %d bytes, want at most %d", g+1, size, most)
		}
		from += rows
	}
}

// labelBytes is what a group takes at most: its names, and by row the bits of a
// position, one of its level, and one for the beginnings of runs; for a page, a
// hundred bytes.
func labelBytes(names []string, rows int) int64 {
	size := 100
	for _, s := range names {
		size += 4 + len(s)
	}
	return int64(size + rows*(bits.Len(uint(len(names)))+2)/8 + 100*(rows/pieceRows+1))
}

// checkLabelChunk wants the statistics that the standard library finds.
func checkLabelChunk(t *testing.T, m *parquet.ColumnMetaData, texts []string, positions []float64) {
	t.Helper()
	var set []string
	for i, v := range positions {
		if v == v {
			set = append(set, texts[i])
		}
	}
	var least, most []byte
	if len(set) > 0 {
		least, most = []byte(slices.Min(set)), []byte(slices.Max(set))
	}
	s := m.Statistics
	if s.GetNullCount() != int64(len(texts)-len(set)) || !bytes.Equal(s.MinValue, least) || !bytes.Equal(s.MaxValue, most) || (s.MinValue == nil) != (least == nil) {
		t.Errorf("%d nulls, %q to %q, want %d, %q to %q", s.GetNullCount(), s.MinValue, s.MaxValue, len(texts)-len(set), least, most)
	}
	if !slices.Contains(m.Encodings, parquet.Encoding_RLE_DICTIONARY) || m.GetDictionaryPageOffset() >= m.DataPageOffset {
		t.Errorf("encodings are %v, dictionary at %d before pages at %d, want one", m.Encodings, m.GetDictionaryPageOffset(), m.DataPageOffset)
	}
}

// TestSameName stores a name that is there twice once. The page is worked out by
// hand from the format: lengths in 4 bytes, names in the order of their bytes.
func TestSameName(t *testing.T) {
	d, err := newNames(&cloud.Added{Name: "zone", Type: cloud.Label, Names: []string{"b", "a", "b", "é", "Z"}})
	if err != nil {
		t.Fatal(err)
	}
	want := "\x01\x00\x00\x00Z\x01\x00\x00\x00a\x01\x00\x00\x00b\x02\x00\x00\x00é"
	if !strings.HasSuffix(string(d.page), want) || len(d.values) != 4 || d.width != 2 {
		t.Errorf("%d values of %d bits in page %q, want 4 of 2 in %q", len(d.values), d.width, d.page, want)
	}
	if codes := []uint32{2, 1, 2, 3, 0}; !slices.Equal(d.byPosition, codes) {
		t.Errorf("codes are %v, want %v", d.byPosition, codes)
	}
}

func TestLabelErrors(t *testing.T) {
	path := labelInput(t, []int{3})
	for _, v := range []float64{-1, 2, 0.5, 1e300, math.Inf(1), math.Inf(-1)} {
		_, err := rewriteLabels(path, []string{"a", "b"}, []float64{math.NaN(), 1, v}, 1)
		want := fmt.Sprintf(`%s: column "zone": a row has position %v among the names, want a whole number from 0 to 1, or NaN for none`, path, v)
		if err == nil || err.Error() != want {
			t.Errorf("got  %v\nwant %s", err, want)
		}
	}
	large := make([]string, 33)
	for i := range large {
		large[i] = strings.Repeat(string(rune('A'+i)), 1<<20)
	}
	for want, names := range map[string][]string{
		`: column "zone" is a text by row without names, want names, or texts by class`: {},
		`: column "zone": the values have 34603140 bytes, want at most 33554432`:        large,
	} {
		if _, err := rewriteLabels(path, names, []float64{0, 0, 0}, 1); err == nil || err.Error() != path+want {
			t.Errorf("got  %v\nwant %s", err, want)
		}
	}
}

// TestLabelAllocations wants as few allocations for many rows as for few: those
// of the page header.
func TestLabelAllocations(t *testing.T) {
	d, err := newNames(&cloud.Added{Type: cloud.Label, Names: labelNames(5000)})
	if err != nil {
		t.Fatal(err)
	}
	var e encoder
	var g pages
	positions := labelPositions(5000, 6)[:pieceRows]
	if n := testing.AllocsPerRun(10, func() {
		g.bytes, g.ends, g.stats = g.bytes[:0], g.ends[:0], g.stats[:0]
		if err := e.labels(&g, positions, d); err != nil {
			t.Fatal(err)
		}
	}); n > 20 {
		t.Errorf("%v allocations for %d rows, want at most 20", n, len(positions))
	}
}
