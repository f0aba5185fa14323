package quality

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"bentray/io/cloud"
)

// reading says what is decoded of a corrected file, and where each column stands in
// a chunk's numbers or texts; -1 where the file does not have it.
type reading struct {
	request   cloud.Request
	xyz, raw  [3]int
	depth     int
	level     int
	incidence int
	outcome   int // in the texts
	line      int // of the flight: in the texts where lineText is set, else in the numbers
	lineText  bool
	lineName  string
}

// newReading finds the columns; with lines that of flight lines
// too, which the receipt may tell.
func newReading(columns []cloud.Column, o *output, lines bool, made *provenance) (*reading, error) {
	r := &reading{line: -1}
	for k := range r.xyz {
		r.xyz[k] = r.number(o.xyz[k])
		r.raw[k] = r.number(o.raw + k)
	}
	r.depth, r.level, r.incidence = r.number(o.at("depth")), r.number(o.at("water_level")), r.number(o.at("incidence_deg"))
	r.request.Texts = []int{o.at("outcome")}
	if !lines {
		return r, nil
	}
	var mapped map[string]string
	if made != nil {
		mapped = made.job.Input.Columns
	}
	return r, r.findLine(columns, mapped)
}

func (r *reading) number(column int) int {
	if column < 0 {
		return -1
	}
	if i := slices.Index(r.request.Numbers, column); i >= 0 {
		return i
	}
	r.request.Numbers = append(r.request.Numbers, column)
	return len(r.request.Numbers) - 1
}

// lineColumns tell flight lines or passes apart, the first that is there.
var lineColumns = []string{"point_source_id", "sensor"}

func (r *reading) findLine(columns []cloud.Column, mapped map[string]string) error {
	for _, name := range lineColumns {
		i, err := cloud.FindRole(columns, name, mapped)
		if err != nil {
			return err
		}
		if i < 0 {
			continue
		}
		r.lineName = columns[i].Name
		if columns[i].Type != "text" && columns[i].Type != "BYTE_ARRAY UTF8" && columns[i].Type != "BYTE_ARRAY" {
			r.line = r.number(i)
			return nil
		}
		r.request.Texts = append(r.request.Texts, i)
		r.line, r.lineText = 1, true
		return nil
	}
	return callErrorf("--overlap needs a column %q or %q that tells flight lines apart; the columns are %s", lineColumns[0], lineColumns[1], cloud.Names(columns))
}

// names numbers texts in the order of their appearance.
type names struct {
	list   []string
	number map[string]int
	last   int // the same text often comes again
}

func newNames(list ...string) *names {
	n := &names{number: map[string]int{}}
	for _, s := range list {
		n.of([]byte(s))
	}
	return n
}

// of returns the number of a text.
func (n *names) of(text []byte) int {
	if n.last < len(n.list) && string(text) == n.list[n.last] {
		return n.last
	}
	i, ok := n.number[string(text)]
	if !ok {
		i = len(n.list)
		n.list = append(n.list, string(text))
		n.number[n.list[i]] = i
	}
	n.last = i
	return i
}

// lineOf returns the name of a row's flight line; empty where it has none.
func (r *reading) lineOf(c *cloud.Chunk, i int, buffer []byte) []byte {
	if r.lineText {
		return c.Texts[r.line].At(i)
	}
	v := c.Numbers[r.line][i]
	if v != v {
		return nil
	}
	return strconv.AppendFloat(buffer[:0], v, 'f', -1, 64)
}

// levelOf returns the water level at a corrected point: the column, or in a lean
// output what depth and height come to.
func (r *reading) levelOf(c *cloud.Chunk, i int) float64 {
	if r.level >= 0 {
		return c.Numbers[r.level][i]
	}
	return c.Numbers[r.depth][i] + c.Numbers[r.xyz[2]][i]
}

// checkAgreement looks at a row's coordinates beside its own columns: a point that was
// not corrected repeats its raw coordinates; one that was has a depth, which is level
// minus height. It returns the number that does not agree, -1 where all do.
func (r *reading) checkAgreement(c *cloud.Chunk, i int, corrected bool, tolerance float64) (number int, want float64) {
	n := c.Numbers
	if !corrected {
		for k := range r.xyz {
			got, raw := n[r.xyz[k]][i], n[r.raw[k]][i]
			if got != raw && (got == got || raw == raw) {
				return r.xyz[k], raw
			}
		}
		return -1, 0
	}
	for _, k := range [...]int{r.xyz[0], r.xyz[1], r.xyz[2], r.depth, r.level} {
		if k >= 0 && n[k][i]-n[k][i] != 0 {
			return k, math.NaN()
		}
	}
	if r.level < 0 {
		return -1, 0
	}
	want = n[r.level][i] - n[r.depth][i]
	if !(math.Abs(n[r.xyz[2]][i]-want) <= tolerance) {
		return r.xyz[2], want
	}
	return -1, 0
}

// moved notes a row whose coordinates do not agree with its own columns; want is NaN
// where a corrected point lacks a number.
func (f *findings) moved(row int64, name string, got, want float64, corrected bool) {
	d := Finding{Kind: KindMoved}
	if !f.isFull() {
		d.Row, d.Column = row, name
		d.Got, d.Want = strconv.FormatFloat(got, 'f', -1, 64), strconv.FormatFloat(want, 'f', -1, 64)
		wanted := fmt.Sprintf("%.4f, the raw value, since the point is not corrected", want)
		switch {
		case corrected && want != want:
			d.Want = "a number"
			wanted = "a number, since the point is corrected"
		case corrected:
			wanted = fmt.Sprintf("%.4f, water_level minus depth: one of the three was changed", want)
		}
		d.Text = fmt.Sprintf("row %d: %s is %s, want %s", row, name, d.Got, wanted)
	}
	f.add(d)
}

// forget drops the names from a number on.
func (n *names) forget(from int) {
	for _, s := range n.list[from:] {
		delete(n.number, s)
	}
	n.list, n.last = n.list[:from], 0
}
