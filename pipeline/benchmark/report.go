package main

import (
	"fmt"
	"io"
	"text/tabwriter"
)

// peakLimitMiB bounds bentray's memory at two workers, whatever the file's size.
const peakLimitMiB = 512

// floors are the least ratios of the engine's seconds to bentray's.
var floors = map[string]float64{"csv": 3, "parquet": 2}

// result is what one format's runs came to. Without an engine its total is nil.
type result struct {
	format      string
	rows        int64
	inputBytes  int64
	workers     int
	runs        int
	bentray     total
	diff        *total // of the input against bentray's output; nil where it was not measured
	engine      *total
	giants      []giantResult
	checkedRows int64
}

// ratio is how many times faster than the engine bentray is, by the medians.
func (r *result) ratio() float64 { return r.engine.seconds / r.bentray.seconds }

// bestRatio is the same of the fastest runs.
func (r *result) bestRatio() float64 { return r.engine.best / r.bentray.best }

func (r *result) print(w io.Writer) {
	fmt.Fprintf(w, "\npulse, %s, %d points, %.0f MB in, %d workers, median and best of %d\n",
		r.format, r.rows, float64(r.inputBytes)/1e6, r.workers, r.runs)
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', tabwriter.AlignRight)
	fmt.Fprintln(t, "\tseconds\tbest\tpoints/s\tMB/s\tCPU s\tpeak MiB\t")
	r.line(t, "bentray", r.inputBytes, r.bentray)
	if r.engine != nil {
		r.line(t, "engine", r.inputBytes, *r.engine)
	}
	if r.diff != nil {
		r.line(t, "bentray diff", r.inputBytes, *r.diff)
	}
	for _, g := range r.giants {
		r.line(t, "bentray, "+g.shape.String(), g.inputBytes, g.total)
	}
	t.Flush()
	if r.engine != nil {
		fmt.Fprintf(w, "ratio engine/bentray %.2f by median (floor %g), %.2f by best; outputs agree on %d rows\n",
			r.ratio(), floors[r.format], r.bestRatio(), r.checkedRows)
	}
}

func (r *result) line(w io.Writer, name string, inputBytes int64, t total) {
	fmt.Fprintf(w, "%s\t%.2f\t%.2f\t%.0f\t%.1f\t%.2f\t%.0f\t\n", name, t.seconds, t.best,
		float64(r.rows)/t.seconds, float64(inputBytes)/1e6/t.seconds, t.cpuSeconds, t.peakMiB)
}

// check says which promise is broken. The ratio counts only with holdFloor.
func (r *result) check(holdFloor bool) error {
	if r.bentray.peakMiB > peakLimitMiB {
		return fmt.Errorf("%s: peak memory is %.0f MiB, want at most %d", r.format, r.bentray.peakMiB, peakLimitMiB)
	}
	if r.diff != nil && r.diff.peakMiB > peakLimitMiB {
		return fmt.Errorf("%s: peak memory of diff is %.0f MiB, want at most %d", r.format, r.diff.peakMiB, peakLimitMiB)
	}
	for _, g := range r.giants {
		if g.peakMiB > peakLimitMiB {
			return fmt.Errorf("%s, %v: peak memory is %.0f MiB, want at most %d", r.format, g.shape, g.peakMiB, peakLimitMiB)
		}
	}
	if holdFloor && r.engine != nil && r.ratio() < floors[r.format] {
		return fmt.Errorf("%s: %.2f times the engine's speed, want at least %g", r.format, r.ratio(), floors[r.format])
	}
	return nil
}
