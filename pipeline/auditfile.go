package pipeline

import (
	"context"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"golang.org/x/sync/errgroup"

	"bentray/io/csvfile"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// file audits one output. Its error is the context's.
func (a *auditor) file(ctx context.Context, f *FileAudit, o auditOutput, p *proof) error {
	r, err := receipt.Read(o.path)
	if err != nil {
		f.fault("the receipt cannot be read: %v", err)
		return nil
	}
	f.checkReceipt(r, o.path)
	f.Faults = append(f.Faults, p.faults...)
	before, err := os.Stat(o.path)
	if err != nil {
		f.fault("%v", err)
		return nil
	}
	var c *recheck
	var recheckErr, hashErr error
	g, within := errgroup.WithContext(ctx)
	g.Go(func() error {
		hashErr = f.checkHash(within, r, o.path)
		return ctx.Err()
	})
	if p.survey != nil {
		g.Go(func() error {
			c, recheckErr = a.recheck(within, o, p.survey)
			return ctx.Err()
		})
	}
	if err := g.Wait(); err != nil {
		return err
	}
	if hashErr != nil {
		f.fault("%v", hashErr)
	}
	if c != nil {
		f.Rows = c.rows
		c.report(f, r, recheckErr)
	}
	if err := unchanged(o.path, before); err != nil {
		f.fault("%v", err)
	}
	return nil
}

// checkReceipt checks what a receipt says by itself and of the rejects.
func (f *FileAudit) checkReceipt(r *receipt.Receipt, path string) {
	if !isNamed(path, r) {
		f.fault("the receipt is that of %q, want %q or the end of its path", r.Output.Path, filepath.Base(path))
	}
	if len(r.Inputs) > 0 && r.OtherName() != "" {
		f.fault("%s", r.OtherName())
	}
	if r.RowsRead != r.RowsWritten+r.RowsDiverted {
		f.fault("the receipt has %d rows read, want the %d written and %d diverted", r.RowsRead, r.RowsWritten, r.RowsDiverted)
	}
	rejects := filepath.Base(path) + rejectsSuffix
	switch rows, err := countRejects(path + rejectsSuffix); {
	case errors.Is(err, fs.ErrNotExist) && r.RowsDiverted > 0:
		f.fault("the receipt has %d rows diverted, but %s is not there", r.RowsDiverted, rejects)
	case errors.Is(err, fs.ErrNotExist):
	case err != nil:
		f.fault("%s cannot be read: %v", rejects, err)
	case rows != r.RowsDiverted:
		f.fault("the receipt has %d rows diverted, %s has %d", r.RowsDiverted, rejects, rows)
	}
}

// countRejects counts the rows of a file of rejects.
func countRejects(path string) (rows int64, err error) {
	file, err := os.Open(path)
	if err != nil {
		return 0, err
	}
	defer file.Close()
	r := csv.NewReader(file)
	r.FieldsPerRecord, r.ReuseRecord = 3, true
	for {
		switch _, err := r.Read(); {
		case err == io.EOF:
			return max(rows-1, 0), nil // but for the header
		case err != nil:
			return 0, err
		}
		rows++
	}
}

// checkHash returns why an output is not that of its receipt.
func (f *FileAudit) checkHash(ctx context.Context, r *receipt.Receipt, path string) error {
	bytes, sum, err := receipt.Hash(ctx, path)
	switch {
	case err != nil:
		return err
	case bytes != r.Output.Bytes || sum != r.Output.SHA256:
		return fmt.Errorf("the receipt has %d bytes with sha256 %.12s, found %d bytes with %.12s", r.Output.Bytes, r.Output.SHA256, bytes, sum)
	}
	return nil
}

// recheck computes the points of an output again.
func (a *auditor) recheck(ctx context.Context, o auditOutput, s *survey) (*recheck, error) {
	c := &recheck{survey: s, path: o.path, isText: csvfile.IsName(o.path), tally: newTally()}
	var err error
	if c.file, err = s.openCloud(input{path: o.path}, ""); err != nil {
		return c, inFile(o.path, err)
	}
	defer c.file.Close()
	if err := c.begin(); err != nil {
		return c, inFile(o.path, err)
	}
	c.found = &deviations{counts: make([]int64, len(c.columns))}
	err = a.engine.flow(ctx, c.file, c.work, func(s *slot) error {
		a.watch.Read(s.chunk.Consumed)
		c.put(s)
		return nil
	})
	return c, inFile(o.path, err)
}

// work is what is done to chunks side by side.
func (c *recheck) work(s *slot) error {
	if err := c.file.Decode(&s.chunk); err != nil {
		return err
	}
	s.tally = newTally()
	if err := c.correctChunk(&s.chunk, c.read, c.layout, &s.work, s.tally); err != nil {
		return err
	}
	c.compare(s)
	return nil
}

// put is what is done to chunks in their order.
func (c *recheck) put(s *slot) {
	c.tally.join(s.tally)
	c.found.join(s.found, c.rows, func(row int) int64 {
		if text, ok := c.file.(*csvfile.File); ok {
			return text.Line(&s.chunk, row)
		}
		return 0
	})
	c.rows += int64(s.chunk.Rows)
}

// report says what of an output does not hold, once it was read or, with an error, as
// far as that went.
func (c *recheck) report(f *FileAudit, r *receipt.Receipt, err error) {
	if c.found != nil {
		c.reportDeviations(f)
	}
	if err != nil {
		f.fault("%v", err)
		return
	}
	c.checkCounts(f, r)
	if c.job.Output.Provenance == job.Lean {
		f.Notes = append(f.Notes, "lean: it has no other columns to prove than position, depth, outcome and run")
	}
	if n := c.found.near; n > 0 && c.found.total() == 0 {
		f.Notes = append(f.Notes, fmt.Sprintf("%d values are not equal to the last digit, but within %g of what is computed here, as on another processor", n, c.slack()))
	}
}

func (c *recheck) reportDeviations(f *FileAudit) {
	names := []string{}
	for _, i := range c.layout.XYZ {
		names = append(names, c.file.Columns()[i].Name)
	}
	names = append(names, c.layout.names()[len(c.xyz):]...)
	for _, d := range c.found.list {
		where := fmt.Sprintf("row %d", d.row)
		if d.line > 0 {
			where += fmt.Sprintf(" (line %d)", d.line)
		}
		f.fault("%s: %s is %s, want %s", where, names[d.column], d.got, d.want)
	}
	if c.found.total() <= mostDeviations {
		return
	}
	var counts []string
	for k, n := range c.found.counts {
		if n > 0 {
			counts = append(counts, fmt.Sprintf("%s %d", names[k], n))
		}
	}
	f.fault("%d values in all are not those computed: %s", c.found.total(), strings.Join(counts, ", "))
}

// checkCounts compares what the receipt counts with what the points come to.
func (c *recheck) checkCounts(f *FileAudit, r *receipt.Receipt) {
	if r.RowsWritten != c.rows {
		f.fault("the receipt has %d rows written, found %d", r.RowsWritten, c.rows)
	}
	checkCounts(f, r.Outcomes, c.tally.counts(), "the receipt has %d points %s, found %d")
	checkCounts(f, r.Sensors, c.tally.bySensor(c.survey), "the receipt has %d points of sensor %q, found %d")
	want := c.tally.ranges(c.survey)
	for _, name := range keysOf(r.Ranges, want) {
		got, inReceipt := r.Ranges[name]
		w, known := want[name]
		if inReceipt != known || !c.isNear(got[0], w[0]) || !c.isNear(got[1], w[1]) {
			f.fault("the receipt has %s from %s to %s, found %s to %s", name, showNumber(got[0]), showNumber(got[1]), showNumber(w[0]), showNumber(w[1]))
		}
	}
	c.checkCautions(f, r)
}

func (c *recheck) isNear(got, want float64) bool {
	return math.Abs(got-want) <= c.slack()*max(1, math.Abs(want))
}

func checkCounts(f *FileAudit, got, want map[string]int64, format string) {
	for _, name := range keysOf(got, want) {
		if got[name] != want[name] {
			f.fault(format, got[name], name, want[name])
		}
	}
}

// keysOf lists the keys of either map in order.
func keysOf[V any](a, b map[string]V) []string {
	both := map[string]V{}
	maps.Copy(both, a)
	maps.Copy(both, b)
	return slices.Sorted(maps.Keys(both))
}
