package main

import (
	"errors"
	"fmt"
	"math"
	"time"

	"bentray/pipeline"
	"bentray/pipeline/job"
	"bentray/pipeline/picture"
)

type surfaceCommand struct {
	Job string `arg:"" help:"The job file (TOML)."`
	PNG string `name:"png" help:"Also draw the surface into this file." placeholder:"FILE"`
}

func (surfaceCommand) Help() string {
	return `The water surface of a job is read or fitted as a run does, and described: its level and slopes, how well the points agree with it and how many are set aside, what zones, gauge and separation add. Errors behind ± are 1-sigma. With --png also a picture: a map of the level, and what there is to see of its fit and its course over time.

Example:

    bentray demo demo-out && bentray surface demo-out/river/river.toml --png surface.png

Exit codes: 0 done; 1 the picture cannot be written; 64 the call or the job is wrong, nothing was written; 130 interrupted.`
}

// Run describes the surface.
func (c *surfaceCommand) Run(s *streams) error {
	j, err := loadJob(c.Job)
	if err != nil {
		return err
	}
	if c.PNG != "" {
		if err := pipeline.CheckPicture(j, c.PNG); err != nil {
			return err
		}
	}
	watch := newWatcher(s.errors, false, "")
	r, err := pipeline.DescribeSurface(s.ctx, j, watch)
	watch.close()
	if err != nil {
		return err
	}
	p := surfacePrinter{s, r, j}
	p.print()
	if c.PNG == "" {
		return nil
	}
	if err := picture.WriteSurface(c.PNG, r); err != nil {
		if errors.Is(err, picture.ErrNothing) {
			err = &pipeline.CallError{Err: fmt.Errorf("--png: %w", err)}
		}
		return err
	}
	p.row("picture", "%s", c.PNG)
	return nil
}

// surfacePrinter writes a report as aligned text.
type surfacePrinter struct {
	*streams
	r *pipeline.SurfaceReport
	j *job.Job
}

// row writes one line.
func (p *surfacePrinter) row(head, format string, args ...any) {
	fmt.Fprintf(p.out, "%-10s %s\n", head, fmt.Sprintf(format, args...))
}

// rows writes lines below one head.
func (p *surfacePrinter) rows(head string, lines []string) {
	for _, line := range lines {
		p.row(head, "%s", line)
		head = ""
	}
}

func (p *surfacePrinter) print() {
	p.row("job", "%s%s", p.j.Path, quoted(p.j.Title))
	p.base()
	p.rows("zones", zonesLines(p.r.Zones, p.j))
	p.rows("gauge", gaugeLines(p.r.Gauge, p.j))
	if sep := p.r.Separation; sep != nil {
		p.row("separation", "%s, added, from %s", p.heights(sep.Range), p.j.Surface.Separation.File)
		p.extent(sep.Extent)
	}
	p.overview()
	for _, caution := range p.r.Cautions {
		p.row("caution:", "%s", caution)
	}
}

func (p *surfacePrinter) base() {
	switch r := p.r; {
	case r.Level != nil:
		p.row("surface", "one level, %g %s", *r.Level, r.VerticalUnit)
	case r.Column != "":
		p.row("surface", "levels from the clouds' column %q", r.Column)
	case r.Plane != nil:
		p.plane(r.Plane)
	case r.Profile != nil:
		p.profile(r.Profile)
	case r.Grid != nil:
		p.grid(r.Grid)
	case r.Gauge != nil:
		p.row("surface", "level, as the gauge has it")
	default:
		p.row("surface", "in zones alone")
	}
}

func (p *surfacePrinter) plane(r *pipeline.PlaneReport) {
	if r.Fit == nil {
		p.row("surface", "plane as given")
	} else {
		p.row("surface", "plane fitted to %s", p.j.Surface.Plane.Waterline)
		p.fit(r.Fit)
	}
	p.row("level", "%.4f%s %s at x %.1f, y %.1f", r.Level, sigma(r.LevelSigma, 4), p.r.VerticalUnit, r.AtX, r.AtY)
	p.row("slopes", "x %s%s, y %s%s", fixed(r.SlopeX, 7), sigma(r.SlopeXSigma, 7), fixed(r.SlopeY, 7), sigma(r.SlopeYSigma, 7))
	if slope, bearing := r.Fall(); slope > 0 {
		p.row("", "falls %.4f in 1000 towards %.1f degrees, clockwise from +y", 1000*slope, bearing)
	}
}

// sigma writes a standard error, or nothing where it is not known.
func sigma(v float64, decimals int) string {
	if v != v {
		return ""
	}
	return " ± " + fixed(v, decimals)
}

func (p *surfacePrinter) fit(f *pipeline.FitReport) {
	p.row("points", "%s: %s used, %s set aside", grouped(int64(len(f.Points))), grouped(int64(f.Used)), grouped(int64(f.SetAside)))
	unit := p.r.VerticalUnit
	spread := fmt.Sprintf("rms %.4f %s, largest %.4f %s", f.RMS, unit, f.Largest, unit)
	if math.IsNaN(f.Sigma) {
		p.row("residuals", "%s; 1-sigma unknown: no point is more than the fit needs", spread)
	} else {
		p.row("residuals", "%s; 1-sigma of a point %.4f %s", spread, f.Sigma, unit)
	}
	if f.SetAside > 0 {
		p.row("", "up to %.3f %s of those set aside", f.Farthest, unit)
	}
}

func (p *surfacePrinter) profile(r *pipeline.ProfileReport) {
	course := "rising"
	if r.Falling {
		course = "falling"
	}
	p.row("surface", "profile along %s, levels from %s", p.j.Surface.Profile.Centreline, p.j.Surface.Profile.Levels)
	p.fit(&r.Fit)
	if r.Beyond > 0 {
		p.row("", "%s beyond the reach of %g %s, not used", grouped(int64(r.Beyond)), r.Reach, p.r.Unit)
	}
	p.row("line", "%.1f %s long, as drawn the level is %s; %s", r.Length, p.r.Unit, course, plural(r.Knots, "knot"))
	for i, end := range []pipeline.CurvePoint{r.First, r.Last} {
		p.row([]string{"level", ""}[i], "%.4f%s %s at %.1f %s along the line", end.Level, sigma(end.Sigma, 4), p.r.VerticalUnit, end.Chainage, p.r.Unit)
	}
	p.row("gap", "at most %.1f %s without a level point, %s", r.Gap.To-r.Gap.From, p.r.Unit, p.drop(r.Gap, course))
	steps := make([]string, len(r.Steps))
	for i, d := range r.Steps {
		steps[i] = p.drop(d, course)
	}
	p.rows("steps", steps)
}

// drop says where the level differs and by how much.
func (p *surfacePrinter) drop(d pipeline.Drop, course string) string {
	return fmt.Sprintf("from %.1f to %.1f %s along the line, %s by %.4f %s", d.From, d.To, p.r.Unit, course, d.Fall, p.r.VerticalUnit)
}

func (p *surfacePrinter) grid(r *pipeline.GridReport) {
	j := p.j.Surface.Grid
	from := j.Points
	if from == "" {
		from = fmt.Sprintf("the clouds' points of classes %v", j.Classes)
	}
	p.row("surface", "grid through %s", from)
	ignored := ""
	if r.Ignored > 0 {
		ignored = fmt.Sprintf("; %s without finite coordinates ignored", grouped(int64(r.Ignored)))
	}
	p.row("points", "%s used%s", grouped(int64(r.Points)), ignored)
	p.extent(r.Extent)
	p.row("cells", "%.3g %s wide; %s with a surface of their own, %s local fits", r.Cell, p.r.Unit, grouped(int64(r.Cells)), grouped(int64(r.Patches)))
	p.row("", "gaps filled within %g cells, points within %g s", r.Reach, r.Window)
	p.row("level", "%s, offset of %g %s included", p.heights(r.Level), r.Offset, p.r.VerticalUnit)
	p.row("", "1-sigma of a cell %.4f %s (median)", r.Sigma, p.r.VerticalUnit)
	p.misfit(r)
}

// misfit says how surface points agree with their grid.
func (p *surfacePrinter) misfit(r *pipeline.GridReport) {
	m, unit := &r.Misfit, p.r.VerticalUnit
	p.row("misfit", "rms %.4f %s, largest %.4f %s, of %s; 1-sigma of a point %.4f %s", m.RMS, unit, m.Largest, unit, plural(m.Used, "point"), m.Sigma, unit)
	if m.FarOff > 0 {
		p.row("", "%s more far off, with next to no weight: up to %.3f %s", grouped(int64(m.FarOff)), m.Farthest, unit)
	}
}

// overview says what the map shows, whether it is drawn or not.
func (p *surfacePrinter) overview() {
	m := p.r.Map
	if m == nil {
		return
	}
	at := ""
	if m.At != nil {
		at = " at " + m.At.Format(time.RFC3339)
	}
	p.row("altogether", "%s%s, over %d by %d places", p.heights(m.Level), at, len(m.X), len(m.Y))
	if m.At != nil {
		p.row("", "that time is %s", m.At.Why)
	}
	p.extent(pipeline.Extent{X: pipeline.Range{Low: m.X[0], High: m.X[len(m.X)-1]}, Y: pipeline.Range{Low: m.Y[0], High: m.Y[len(m.Y)-1]}})
}

func (p *surfacePrinter) extent(e pipeline.Extent) {
	p.row("", "x %.1f to %.1f, y %.1f to %.1f %s", e.X.Low, e.X.High, e.Y.Low, e.Y.High, p.r.Unit)
}

func (p *surfacePrinter) heights(r pipeline.Range) string { return rangeText(r, 4, p.r.VerticalUnit) }
