package pipeline

import (
	"fmt"
	"slices"

	"bentray/io/cloud"
)

// ownColumns returns the columns that an output has of its raw cloud: those before the
// raw copies of the coordinates.
func (s *survey) ownColumns(columns []cloud.Column) ([]cloud.Column, error) {
	xyz, err := cloud.Coordinates(columns, s.job.Input.Columns)
	if err != nil {
		return nil, err
	}
	own := slices.IndexFunc(columns, func(c cloud.Column) bool { return c.Name == columns[xyz[0]].Name+"_raw" })
	if own < 0 {
		return nil, fmt.Errorf("no column %q, want the raw copies behind the columns of the raw cloud; the columns are %s", columns[xyz[0]].Name+"_raw", cloud.Names(columns))
	}
	if own <= max(xyz[0], xyz[1], xyz[2]) {
		return nil, fmt.Errorf("column %q stands before the coordinates, want it behind the columns of the raw cloud", columns[own].Name)
	}
	return columns[:own], nil
}

// takeRaw reads the raw copies in place of the coordinates of an output that has so many
// columns of its raw cloud.
func (r *reading) takeRaw(own int) {
	for k, i := range r.xyz {
		for _, list := range [][]int{r.request.Numbers, r.request.Texts} {
			if at := slices.Index(list, i); at >= 0 {
				list[at] = own + k
			}
		}
	}
}

// recheck is an output on its way through the calculation again.
type recheck struct {
	*survey
	path    string
	file    cloud.Rewriter
	isText  bool
	read    *reading
	layout  *layout
	xyz     [3]int // where the chunk's numbers hold the output's coordinates
	added   []int  // where the chunk's numbers, or texts for labels, hold the added columns
	columns []agreement
	tally   *tally
	rows    int64
	found   *deviations
}

// begin finds the columns of the raw cloud, lays out what a run would add to them, and
// asks for all of it.
func (c *recheck) begin() error {
	columns := c.file.Columns()
	own, err := c.ownColumns(columns)
	if err != nil {
		return err
	}
	if c.read, err = newReading(c.survey, own); err != nil {
		return err
	}
	if c.layout, err = newLayout(c.survey, own, c.read); err != nil {
		return err
	}
	if err := c.checkNames(columns[len(own):]); err != nil {
		return err
	}
	c.read.takeRaw(len(own))
	for k, i := range c.layout.XYZ {
		c.xyz[k] = c.read.number(i)
	}
	for i, a := range c.layout.Added {
		column := len(own) + len(c.xyz) + i
		if a.Type == cloud.Label {
			c.added = append(c.added, c.read.text(column))
		} else {
			c.added = append(c.added, c.read.number(column))
		}
	}
	c.agree()
	return c.file.Begin(c.read.request, cloud.Layout{}, nil)
}

// checkNames refuses other columns behind those of the raw cloud than a run adds.
func (c *recheck) checkNames(columns []cloud.Column) error {
	want := c.layout.names()
	for k := range max(len(columns), len(want)) {
		switch {
		case k >= len(want):
			return fmt.Errorf("has a column %q at its end, which the settings of the receipt do not give", columns[k].Name)
		case k >= len(columns):
			return fmt.Errorf("has no column %q, which the settings of the receipt give", want[k])
		case columns[k].Name != want[k]:
			return fmt.Errorf("has a column %q where the settings of the receipt give %q", columns[k].Name, want[k])
		}
	}
	return nil
}
