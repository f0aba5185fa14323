package csvfile

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"strings"

	"bentray/io/cloud"
)

// openText opens a text as if it were a file; block is the block size, 0 for
// the usual one.
func openText(path, text string, o Options, block int) (*File, error) {
	f, err := newFile(&source{path: path, in: strings.NewReader(text), size: -1}, o)
	if err == nil && block > 0 {
		f.blockSize = block
	}
	return f, err
}

// testLayout adds a column of each kind. Rows of class 0 are moved.
func testLayout(xyz [3]int) cloud.Layout {
	return cloud.Layout{
		XYZ: xyz, RawNames: [3]string{"x_raw", "y_raw", "z_raw"}, Decimals: 4, Moved: []bool{true, false},
		Added: []cloud.Added{
			{Name: "depth", Decimals: 3},
			{Name: "outcome", Type: cloud.Label, ByClass: []cloud.Value{{Set: true, Text: "corrected"}, {Set: true, Text: `not "so", ; this	one`}}},
			{Name: "n water", ByClass: []cloud.Value{{Set: true, Text: "1.34"}, {}}},
			{Name: "rays", Type: cloud.Count},
		},
	}
}

// testTail is what testLayout adds behind the raw copies of row i.
func testTail(sep string, i int) string {
	fields := []string{fmt.Sprintf("%.3f", float64(i)/4), "corrected", "1.34", fmt.Sprint(i)}
	if i%2 == 1 {
		fields[1], fields[2] = `"not ""so"", ; this	one"`, ""
	}
	if i%5 == 4 {
		fields[0], fields[3] = "", ""
	}
	for k := range fields {
		if fields[k] == "" && sep == " " {
			fields[k] = `""`
		}
	}
	return sep + strings.Join(fields, sep)
}

// result is what came of a whole file.
type result struct {
	out     []byte
	rows    int
	chunks  []int // rows of each chunk
	numbers [][]float64
	texts   [][]string
	rejects []cloud.Reject
}

// rewrite runs a whole file through testLayout: coordinates grow by one.
func rewrite(f *File, read cloud.Request, xyz [3]int) (r result, err error) {
	defer f.Close()
	layout := testLayout(xyz)
	r.numbers = make([][]float64, len(read.Numbers))
	r.texts = make([][]string, len(read.Texts))
	all := read
	all.Numbers = append(all.Numbers[:len(read.Numbers):len(read.Numbers)], xyz[:]...)
	var out bytes.Buffer
	if err := f.Begin(all, layout, &out); err != nil {
		return r, err
	}
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			err = f.Finish()
			r.out = out.Bytes()
			return r, err
		} else if err != nil {
			return r, err
		}
		if err := f.Decode(&c); err != nil {
			return r, err
		}
		r.take(&c)
		c.Resize(c.Rows, layout)
		fillTest(&c, r.rows, c.Numbers[len(read.Numbers):])
		r.rows += c.Rows
		if err := f.Encode(&c); err != nil {
			return r, err
		}
		if err := f.Put(&c); err != nil {
			return r, err
		}
	}
}

// fillTest sets the results of a chunk whose first row has this number.
func fillTest(c *cloud.Chunk, first int, xyz [][]float64) {
	for i := range c.Rows {
		n := first + i
		c.Class[i] = uint8(n % 2)
		for k := range c.XYZ {
			c.XYZ[k][i] = xyz[k][i] + 1
		}
		c.Added[0][i], c.Added[3][i] = float64(n)/4, float64(n)
		if n%5 == 4 {
			c.Added[0][i], c.Added[3][i] = math.NaN(), math.NaN()
		}
	}
}

func (r *result) take(c *cloud.Chunk) {
	r.chunks = append(r.chunks, c.Rows)
	for k := range r.numbers {
		r.numbers[k] = append(r.numbers[k], c.Numbers[k]...)
	}
	for k := range r.texts {
		for i := range c.Rows {
			r.texts[k] = append(r.texts[k], string(c.Texts[k].At(i)))
		}
	}
	for _, reject := range c.Rejects {
		reject.Text = bytes.Clone(reject.Text)
		r.rejects = append(r.rejects, reject)
	}
}

// madeFile is a file made row by row, with the output it must give and the
// contents of its columns.
type madeFile struct {
	in, out  strings.Builder
	z, notes []string // contents of two columns
}

// makeFile writes rows of note,x,z,flag,y. Quoted files have separators, quotes
// and line breaks in their notes and quotes around some numbers.
func makeFile(sep, end string, quoted, lastEnd bool, rows int, seed uint64) *madeFile {
	r := rand.New(rand.NewPCG(seed, 1))
	m := new(madeFile)
	header := strings.Join([]string{"note", "x", "z", "flag", "y"}, sep)
	m.in.WriteString(header)
	added := `n water`
	if sep == " " {
		added = `"n water"`
	}
	m.out.WriteString(header + sep + strings.Join([]string{"x_raw", "y_raw", "z_raw", "depth", "outcome", added, "rays"}, sep))
	for i := range rows {
		m.line(end)
		m.row(sep, end, quoted, i, r)
	}
	if lastEnd {
		m.line(end)
	}
	return m
}

func (m *madeFile) line(end string) {
	m.in.WriteString(end)
	m.out.WriteString(end)
}

func (m *madeFile) row(sep, end string, quoted bool, i int, r *rand.Rand) {
	note, content := fmt.Sprintf("p%d", i), fmt.Sprintf("p%d", i)
	v := [3]int{r.IntN(1e6), -r.IntN(1e6), r.IntN(1e4)} // thousandths
	text := [3]string{thousandths(v[0]), thousandths(v[1]), thousandths(v[2])}
	if quoted && r.IntN(2) == 0 {
		note = `"a ""big""` + sep + end + `rock"`
		content = `a "big"` + sep + end + `rock`
		text[2] = `"` + text[2] + `"`
	}
	m.notes = append(m.notes, content)
	m.z = append(m.z, thousandths(v[2]))
	m.in.WriteString(strings.Join([]string{note, text[0], text[2], "1", text[1]}, sep))
	moved := text
	if i%2 == 0 {
		for k := range v {
			moved[k] = thousandths(v[k]+1000) + "0"
		}
	}
	m.out.WriteString(strings.Join([]string{note, moved[0], moved[2], "1", moved[1], text[0], text[1], text[2]}, sep) + testTail(sep, i))
}

// thousandths writes n/1000 with three decimals.
func thousandths(n int) string {
	sign := ""
	if n < 0 {
		sign, n = "-", -n
	}
	return fmt.Sprintf("%s%d.%03d", sign, n/1000, n%1000)
}
