package quality

import (
	"fmt"
	"slices"
	"strings"

	"bentray/io/cloud"
)

// output says where the columns of a corrected file stand.
type output struct {
	xyz  [3]int // corrected coordinates
	raw  int    // of their three raw copies the first; what stands before is the raw cloud's
	have map[string]int
}

// rawSuffix ends the name of a raw copy.
const rawSuffix = "_raw"

// findOutput recognises a corrected file: three raw copies and the depth behind the
// cloud's own columns. The last such place counts.
func findOutput(columns []cloud.Column) (*output, bool) {
	for p := len(columns) - 4; p >= 3; p-- {
		if columns[p+3].Name != "depth" {
			continue
		}
		if xyz, ok := copied(columns, p); ok {
			o := &output{xyz: xyz, raw: p, have: map[string]int{}}
			for i, c := range columns[p+3:] {
				o.have[c.Name] = p + 3 + i
			}
			return o, o.at("outcome") >= 0
		}
	}
	return nil, false
}

// copied finds the columns whose raw copies stand at p.
func copied(columns []cloud.Column, p int) (xyz [3]int, ok bool) {
	for k := range xyz {
		name, isCopy := strings.CutSuffix(columns[p+k].Name, rawSuffix)
		if xyz[k] = indexOf(columns[:p], name); !isCopy || xyz[k] < 0 {
			return xyz, false
		}
	}
	return xyz, true
}

// at returns the place of an added column, or -1.
func (o *output) at(name string) int {
	if i, ok := o.have[name]; ok {
		return i
	}
	return -1
}

func indexOf(columns []cloud.Column, name string) int {
	return slices.IndexFunc(columns, func(c cloud.Column) bool { return c.Name == name })
}

// pairing is a column of either file with the same values.
type pairing struct {
	name string // in the corrected file
	a, b int
}

// pairer finds which columns of two files must agree.
type pairer struct {
	a, b     []cloud.Column // all of both files
	from     *output        // nil where a is a raw cloud
	to       *output
	f        *findings
	pairs    []pairing // the coordinates come first
	oneSided []string  // of two corrected clouds, columns of one alone
}

// pair fills pairs, and notes what is wrong with names, order and types.
func (p *pairer) pair() {
	p.coordinates()
	own := p.own()
	next := map[string][]int{} // by name, the columns of a that are left
	for i, c := range own {
		next[c.Name] = append(next[c.Name], i)
	}
	last := -1
	for j, c := range p.b[:p.to.raw] {
		left := next[c.Name]
		if len(left) == 0 {
			p.alone(c.Name, "is not in the raw cloud", "", c.Name)
			continue
		}
		i := left[0]
		next[c.Name] = left[1:]
		if i < last && p.from == nil {
			p.f.column(c.Name, "", "", "is column %d, want its place in the raw cloud, %d", j+1, i+1)
		}
		last = max(last, i)
		if !slices.Contains(p.to.xyz[:], j) {
			p.add(i, j)
		}
	}
	for i, c := range own {
		if slices.Contains(next[c.Name], i) {
			p.alone(c.Name, "is missing", c.Name, "")
		}
	}
}

// own returns the columns of a that are not bentray's.
func (p *pairer) own() []cloud.Column {
	if p.from != nil {
		return p.a[:p.from.raw]
	}
	return p.a
}

// coordinates pairs the raw coordinates: in a raw cloud they have the names that the
// coordinates have in the corrected one.
func (p *pairer) coordinates() {
	for k, j := range p.to.xyz {
		name := p.b[j].Name
		if p.from != nil {
			name += rawSuffix
		}
		if i := indexOf(p.a, name); i >= 0 {
			p.add(i, p.to.raw+k)
		}
	}
}

// add pairs columns of one type.
func (p *pairer) add(i, j int) {
	if a, b := p.a[i].Type, p.b[j].Type; a != b {
		p.f.column(p.b[j].Name, a, b, "is stored as %s, want %s as in the raw cloud", b, a)
		return
	}
	p.pairs = append(p.pairs, pairing{p.b[j].Name, i, j})
}

// alone notes a column that the other file does not have.
func (p *pairer) alone(name, what, want, got string) {
	if p.from != nil {
		p.oneSided = append(p.oneSided, name)
		return
	}
	p.f.column(name, want, got, "%s", what)
}

// column notes what is wrong with a column as such.
func (f *findings) column(name, want, got, format string, args ...any) {
	f.changed[name] = true
	f.add(Finding{Kind: KindColumn, Column: name, Want: want, Got: got, Text: fmt.Sprintf("column %q %s", name, fmt.Sprintf(format, args...))})
}
