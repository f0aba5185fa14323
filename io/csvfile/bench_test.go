package csvfile

import (
	"io"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"bentray/io/cloud"
)

// benchText is a cloud of ten columns; decimals -1 gives all digits a double
// has.
func benchText(rows, decimals int) string {
	r := rand.New(rand.NewPCG(1, 0))
	var b []byte
	b = append(b, "x,y,z,gps_time,intensity,return_number,number_of_returns,classification,scan_angle,point_source_id\n"...)
	for range rows {
		for _, v := range []float64{500000 + 2000*r.Float64(), 4100000 + 2000*r.Float64(), -15 * r.Float64(), 3e8 + 1e5*r.Float64()} {
			b = append(strconv.AppendFloat(b, v, 'f', decimals, 64), ',')
		}
		b = append(strconv.AppendInt(b, r.Int64N(4096), 10), ",1,2,40,-12.345,137\n"...)
	}
	return string(b)
}

// benchLayout has nine columns by row and fifteen by class.
func benchLayout() cloud.Layout {
	l := cloud.Layout{XYZ: [3]int{0, 1, 2}, RawNames: [3]string{"x_raw", "y_raw", "z_raw"}, Decimals: 4, Moved: []bool{true}}
	for i := range 9 {
		l.Added = append(l.Added, cloud.Added{Name: "n" + strconv.Itoa(i), Decimals: 4 + i%2})
	}
	for i := range 15 {
		l.Added = append(l.Added, cloud.Added{Name: "c" + strconv.Itoa(i), ByClass: []cloud.Value{{Set: true, Text: "1.340012345"}}})
	}
	return l
}

// warm returns a file and its first chunk, decoded and ready to be encoded.
func warm(tb testing.TB, text string, o Options) (*File, *cloud.Chunk) {
	tb.Helper()
	f, err := openText("a.csv", text, o, 0)
	if err != nil {
		tb.Fatal(err)
	}
	c := new(cloud.Chunk)
	if err := f.Begin(cloud.Request{Numbers: []int{0, 1, 2, 3}, Texts: []int{4}}, benchLayout(), io.Discard); err != nil {
		tb.Fatal(err)
	}
	if err := f.Next(c); err != nil {
		tb.Fatal(err)
	}
	step(tb, f, c)
	return f, c
}

// step decodes a chunk, moves its points and encodes it.
func step(tb testing.TB, f *File, c *cloud.Chunk) {
	if err := f.Decode(c); err != nil {
		tb.Fatal(err)
	}
	move(f, c)
	if err := f.Encode(c); err != nil {
		tb.Fatal(err)
	}
}

func move(f *File, c *cloud.Chunk) {
	c.Resize(c.Rows, f.layout)
	clear(c.Class)
	for k := range c.XYZ {
		copy(c.XYZ[k], c.Numbers[k])
	}
	for k, a := range c.Added {
		for i := range a {
			a[i] = c.Numbers[2][i] * float64(k+1)
		}
	}
}

func TestNoAllocationPerRow(t *testing.T) {
	for name, text := range map[string]string{
		"plain": benchText(2000, 3), "all digits": benchText(2000, -1),
		"quoted": strings.ReplaceAll(benchText(2000, 3), ",1,2,", ",\"1\",2,"), "blanks": strings.ReplaceAll(benchText(2000, 3), ",", " "),
	} {
		f, c := warm(t, text, Options{})
		if n := testing.AllocsPerRun(10, func() { step(t, f, c) }); n != 0 || c.Rows != 2000 {
			t.Errorf("%s: %v allocations, %d rows, want none, 2000", name, n, c.Rows)
		}
	}
}

var benchTexts = []struct {
	name     string
	decimals int
}{{"mm", 3}, {"all-digits", -1}}

func BenchmarkDecode(b *testing.B) {
	for _, v := range benchTexts {
		for name, change := range map[string]*strings.Replacer{
			"comma": strings.NewReplacer(), "blanks": strings.NewReplacer(",", " "), "crlf": strings.NewReplacer("\n", "\r\n"), "quoted": strings.NewReplacer(",1,2,", `,"1","2",`),
		} {
			b.Run(v.name+"/"+name, func(b *testing.B) {
				f, c := warm(b, change.Replace(benchText(20000, v.decimals)), Options{})
				b.SetBytes(int64(len(c.Format.(*block).text)))
				b.ReportAllocs()
				for b.Loop() {
					if err := f.Decode(c); err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(float64(c.Rows)*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
			})
		}
	}
}

func BenchmarkEncode(b *testing.B) {
	f, c := warm(b, benchText(20000, 3), Options{})
	b.SetBytes(int64(len(c.Format.(*block).out)))
	b.ReportAllocs()
	for b.Loop() {
		if err := f.Encode(c); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(c.Rows)*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
}

// The whole file in one goroutine, by block size.
func BenchmarkFile(b *testing.B) {
	const rows = 200000
	text := benchText(rows, 3)
	for _, size := range []int{1 << 18, 1 << 19, 1 << 20, 1 << 21, 1 << 22} {
		b.Run(strconv.Itoa(size>>10)+"KiB", func(b *testing.B) {
			b.SetBytes(int64(len(text)))
			b.ReportAllocs()
			for b.Loop() {
				f, err := openText("a.csv", text, Options{}, size)
				if err != nil {
					b.Fatal(err)
				}
				if err := f.Begin(cloud.Request{Numbers: []int{0, 1, 2, 3}}, benchLayout(), io.Discard); err != nil {
					b.Fatal(err)
				}
				var c cloud.Chunk
				for f.Next(&c) == nil {
					step(b, f, &c)
					if err := f.Put(&c); err != nil {
						b.Fatal(err)
					}
				}
			}
			b.ReportMetric(rows*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
		})
	}
}

func BenchmarkParseNumber(b *testing.B) {
	for name, text := range map[string]string{"mm": "4100922.772", "17digits": "4100922.7724354411", "blanks": " 4100922.772"} {
		b.Run(name, func(b *testing.B) {
			field := []byte(text)
			b.ReportAllocs()
			for b.Loop() {
				parseNumber(field)
			}
		})
	}
}

func BenchmarkAppendFixed(b *testing.B) {
	dst := make([]byte, 0, 64)
	for b.Loop() {
		dst = appendFixed(dst[:0], 4100922.77243, 4)
	}
}
