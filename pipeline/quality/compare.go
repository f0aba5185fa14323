package quality

import (
	"bytes"
	"context"
	"fmt"

	"bentray/io/cloud"
)

// comparison goes through the rows of two files side by side. Rows belong together
// by their order; where raw coordinates differ, it looks ahead.
type comparison struct {
	a, b        *side
	pairs       []pairing // as stored in both, the coordinates first
	coordinates int       // of pairs, how many are raw coordinates
	f           *findings
	together    func(a *cloud.Chunk, atA int, b *cloud.Chunk, atB, rows int) // rows that belong together
	alone       func(b *cloud.Chunk, at, rows int)                           // rows of b that belong to none of a

	stride   int    // rows compared at once; few where rows differ often
	last     uint64 // key of the row of b before the next
	searches int
	far      int            // searches beyond the window that were in vain
	partners map[int64]bool // rows of b, from 0, whose swap is told already
}

// run compares to the end of both files.
func (c *comparison) run(ctx context.Context) error {
	c.stride, c.partners = 1, map[int64]bool{}
	for {
		if err := ctx.Err(); err != nil {
			return err
		}
		inA, errA := c.a.ready()
		inB, errB := c.b.ready()
		switch {
		case errA != nil:
			return errA
		case errB != nil:
			return errB
		case !inA && !inB:
			return nil
		case !inA:
			c.extra(c.b.left())
		case !inB:
			c.dropped(c.a.left())
		default:
			if err := c.step(); err != nil {
				return err
			}
		}
	}
}

// step passes the rows that agree, or resolves the first that does not.
func (c *comparison) step() error {
	rows := min(c.a.left(), c.b.left(), c.stride)
	same := c.agree(rows)
	if same > 0 {
		c.pass(same)
	}
	if same < rows {
		c.stride = 1
		return c.resolve()
	}
	c.stride = min(2*c.stride, 1<<20)
	return nil
}

// agree counts the rows at hand that agree in all columns.
func (c *comparison) agree(rows int) int {
	a, b := c.a.queue[0], c.b.queue[0]
	for k := range c.pairs {
		if rows == 0 || equalRows(&a.Stored[k], c.a.at, &b.Stored[k], c.b.at, rows) {
			continue
		}
		for i := range rows {
			if !bytes.Equal(a.Stored[k].At(c.a.at+i), b.Stored[k].At(c.b.at+i)) {
				rows = i
				break
			}
		}
	}
	return rows
}

// pass takes the next rows of both as belonging together.
func (c *comparison) pass(rows int) {
	c.together(c.a.queue[0], c.a.at, c.b.queue[0], c.b.at, rows)
	c.remember(rows)
	c.a.pass(rows)
	c.b.pass(rows)
}

// remember keeps the key of the last of the rows of b that are passed next.
func (c *comparison) remember(rows int) {
	c.last = keyOf(c.b.queue[0], c.b.at+rows-1, c.coordinates)
}

// resolve finds out what happened to the next rows, which differ.
func (c *comparison) resolve() error {
	if c.partners[c.b.done] {
		delete(c.partners, c.b.done)
		c.skip()
		return nil
	}
	same, err := c.meet(0, 0, 1)
	if err != nil {
		return err
	}
	if same || c.searches >= maxSearches {
		c.changed()
		return nil
	}
	c.searches++
	return c.search()
}

// skip passes one row of each that do not belong together.
func (c *comparison) skip() {
	c.alone(c.b.queue[0], c.b.at, 1)
	c.remember(1)
	c.a.pass(1)
	c.b.pass(1)
}

// dropped passes rows of a that b does not have; they may reach beyond the chunk.
func (c *comparison) dropped(rows int) {
	for range rows {
		if ok, err := c.a.ready(); !ok || err != nil {
			return // the error comes again
		}
		row := c.a.done + 1
		c.f.add(Finding{Kind: KindDropped, RawRow: row, Text: fmt.Sprintf("row %d of the raw cloud is missing, want it as row %d", row, c.b.done+1)})
		c.a.pass(1)
	}
}

// extra passes rows of b that a does not have.
func (c *comparison) extra(rows int) {
	for range rows {
		if ok, err := c.b.ready(); !ok || err != nil {
			return // the error comes again
		}
		row := c.b.done + 1
		if row > 1 && keyOf(c.b.queue[0], c.b.at, c.coordinates) == c.last {
			c.f.add(Finding{Kind: KindDoubled, Row: row, Text: fmt.Sprintf("row %d repeats the row before it", row)})
		} else {
			c.f.add(Finding{Kind: KindInserted, Row: row, Text: fmt.Sprintf("row %d is not in the raw cloud at this place", row)})
		}
		c.alone(c.b.queue[0], c.b.at, 1)
		c.remember(1)
		c.b.pass(1)
	}
}

// changed tells which values of the next rows differ, and passes them as belonging
// together.
func (c *comparison) changed() {
	a, b := c.a.queue[0], c.b.queue[0]
	for k, p := range c.pairs {
		got, want := b.Stored[k].At(c.b.at), a.Stored[k].At(c.a.at)
		if bytes.Equal(got, want) {
			continue
		}
		c.f.changed[p.name] = true
		d := Finding{Kind: KindChanged}
		if !c.f.isFull() {
			d.RawRow, d.Row, d.Column = c.a.done+1, c.b.done+1, p.name
			d.Got, d.Want = c.b.file.Show(p.b, got), c.a.file.Show(p.a, want)
			d.Text = fmt.Sprintf("row %d: %s is %s, want %s", d.Row, p.name, d.Got, d.Want)
		}
		c.f.add(d)
	}
	c.pass(1)
}
