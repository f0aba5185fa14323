package main

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"bentray/pipeline/quality"
)

// diffPrinter writes a comparison as text, what matters most first.
type diffPrinter struct {
	*streams
	r *quality.Report
}

func (p *diffPrinter) line(format string, args ...any) { fmt.Fprintf(p.out, format+"\n", args...) }

func (p *diffPrinter) print() {
	p.verdict()
	p.findings()
	p.outcomes()
	p.shift()
	p.byIncidence()
	if c := p.r.Check; c != nil {
		p.check(c)
	}
	if o := p.r.Overlap; o != nil {
		p.overlap(o)
	}
	for _, note := range p.r.Notes {
		p.line("note: %s", note)
	}
	for _, caution := range p.r.Cautions {
		p.line("caution: %s", caution)
	}
}

// verdict says what holds.
func (p *diffPrinter) verdict() {
	r := p.r
	what := "corrected clouds against raw ones"
	if r.TwoCorrected {
		what = "two corrected clouds of one raw cloud: the shift is the second minus the first"
	}
	p.line("%s -> %s: %s, %s", r.Raw, r.Corrected, plural(len(r.Files), "file"), what)
	if r.Holds {
		p.line("  holds: %s rows, each in its place; no untouched column changed; raw coordinates as they were", grouped(r.Rows))
	} else {
		p.line("  DOES NOT HOLD: %s rows, %s in the raw cloud", grouped(r.Rows), grouped(r.RowsRaw))
	}
	if r.RowsDiverted > 0 {
		p.line("  %s raw rows could not be read and stand in the rejects", grouped(r.RowsDiverted))
	}
	if len(r.OneSided) > 0 {
		p.line("  columns of one of the two alone, not compared: %s", strings.Join(r.OneSided, ", "))
	}
}

// findings names the first places, and counts all.
func (p *diffPrinter) findings() {
	r := p.r
	if len(r.FindingCounts) == 0 {
		return
	}
	var total int64
	for _, kind := range slices.Sorted(maps.Keys(r.FindingCounts)) {
		p.line("  %-10s %12s", kind, grouped(r.FindingCounts[kind]))
		total += r.FindingCounts[kind]
	}
	if len(r.ColumnsChanged) > 0 {
		p.line("  columns changed: %s", strings.Join(r.ColumnsChanged, ", "))
	}
	for _, f := range r.Findings {
		p.line("  %s", f)
	}
	if more := total - int64(len(r.Findings)); more > 0 {
		p.line("  and %s more", grouped(more))
	}
}

func (p *diffPrinter) outcomes() {
	p.line("")
	for _, o := range outcomeRows(p.r.Outcomes) {
		before := ""
		if p.r.TwoCorrected {
			before = "  (first: " + grouped(p.r.OutcomesRaw[o.name]) + ")"
		}
		p.line("  %-13s %12s  %5.1f %%%s", o.name, grouped(o.count), o.percent, before)
	}
}

// shift tables how far points moved.
func (p *diffPrinter) shift() {
	r := p.r
	if r.Shift.Count == 0 {
		return
	}
	p.line("")
	p.line("Shift of %s points: height dz in %s (positive: up), plan dh in %s", grouped(r.Shift.Count), r.VerticalUnit, r.Unit)
	p.line("  %19s %12s | %9s %9s %9s | %9s %9s %9s", "depth, "+r.VerticalUnit, "points", "mean dz", "rms", "largest", "mean dh", "rms", "largest")
	for _, b := range r.ByDepth {
		p.shiftRow(span(b.From, b.To), b.Shift)
	}
	p.shiftRow("all", r.Shift)
}

func (p *diffPrinter) shiftRow(head string, s quality.Shift) {
	p.line("  %19s %12s | %s %s %s | %s %s %s", head, grouped(s.Count), metric(s.MeanDZ), metric(s.RMSDZ), metric(s.MaxDZ), metric(s.MeanDH), metric(s.RMSDH), metric(s.MaxDH))
}

func (p *diffPrinter) byIncidence() {
	if len(p.r.ByIncidence) == 0 {
		return
	}
	p.line("")
	p.line("  %19s %12s | %9s %9s %9s | %9s %9s %9s", "incidence, degrees", "points", "mean dz", "rms", "largest", "mean dh", "rms", "largest")
	for _, b := range p.r.ByIncidence {
		p.shiftRow(span(b.From, b.To), b.Shift)
	}
}

func (p *diffPrinter) check(c *quality.CheckReport) {
	by := "a local plane"
	if c.Match == quality.MatchNearest {
		by = "the nearest point"
	}
	p.line("")
	p.line("Check points: %s, %d of %d matched by %s within %g %s; corrected minus check, in %s", c.File, c.Count, c.Given, by, float64(c.Reach), p.r.Unit, p.r.VerticalUnit)
	p.residualHead("depth, " + p.r.VerticalUnit)
	for _, b := range c.ByDepth {
		p.residualRow(span(b.From, b.To), b.Count, b.Residuals)
	}
	p.residualRow("all", c.Count, c.Residuals)
	if !math.IsNaN(float64(c.Slope)) {
		p.line("  slope of the error against depth %.5f ± %.5f (1-sigma)", float64(c.Slope), float64(c.SlopeSigma))
	}
	p.line("  %s", c.Meaning)
	var shares []string
	for _, name := range []string{"exclusive", "special", "1", "2"} {
		shares = append(shares, fmt.Sprintf("%s %s", name, percent(c.S44[name])))
	}
	p.line("  within the TVU of IHO S-44 order %s (an order of survey needs more than this)", strings.Join(shares, ", "))
	for _, w := range c.Warnings {
		p.line("  warning: %s", w)
	}
}

func (p *diffPrinter) overlap(o *quality.OverlapReport) {
	p.line("")
	p.line("Flight lines by %s: %s, %s differences in cells of %g %s, in %s", o.Column, plural(o.Lines, "line"), grouped(int64(o.Count)), float64(o.Cell), p.r.Unit, p.r.VerticalUnit)
	if o.Share < 1 {
		p.line("  in %.3g %% of the cells, chosen by chance", 100*float64(o.Share))
	}
	if o.Count > 0 {
		p.residualHead("depth, " + p.r.VerticalUnit)
		for _, b := range o.ByDepth {
			p.residualRow(span(b.From, b.To), b.Count, b.Residuals)
		}
		p.residualRow("all", o.Count, o.Difference)
	}
	if len(o.ByIncidence) > 0 {
		p.residualHead("incidence, degrees")
		for _, b := range o.ByIncidence {
			p.residualRow(span(b.From, b.To), b.Count, b.Residuals)
		}
	}
	if len(o.Pairs) > 0 {
		p.residualHead("lines")
		for _, l := range o.Pairs {
			p.residualRow(l.A+" - "+l.B, l.Count, l.Residuals)
		}
	}
	for _, w := range o.Warnings {
		p.line("  warning: %s", w)
	}
}

func (p *diffPrinter) residualHead(head string) {
	p.line("  %19s %12s | %9s %9s %9s %9s", head, "count", "bias", "rmse", "std", "p95")
}

func (p *diffPrinter) residualRow(head string, count int, r quality.Residuals) {
	p.line("  %19s %12s | %s %s %s %s", head, grouped(int64(count)), metric(r.Bias), metric(r.RMSE), metric(r.Std), metric(r.P95))
}

// span writes a band.
func span(from, to quality.Number) string {
	return fmt.Sprintf("%6g to %6g", float64(from), float64(to))
}

// metric writes a length to four decimals, or a dash where it is not known.
func metric(n quality.Number) string {
	if v := float64(n); !math.IsNaN(v) {
		return fmt.Sprintf("%9s", fixed(v, 4))
	}
	return fmt.Sprintf("%9s", "-")
}

func percent(n quality.Number) string {
	if v := float64(n); !math.IsNaN(v) {
		return fmt.Sprintf("%.1f %%", 100*v)
	}
	return "-"
}
