package main

import (
	"fmt"
	"math"
	"time"

	"bentray/pipeline"
	"bentray/pipeline/job"
)

type planCommand struct {
	Path string `arg:"" help:"A job file, or a cloud to start a job from."`
}

func (planCommand) Help() string {
	return `For a job: reads it and the head of every cloud, and shows what run would do: files, columns, index and surface, and what looks wrong. For a cloud: prints its columns and a job file to start from. Nothing is written.

Examples:

    bentray plan demo-out/survey.toml
    bentray plan demo-out/raw/tile_01.csv > new.toml

Exit codes: 0 all files can be read; 1 none can; 3 some cannot; 64 the call or the job is wrong.`
}

// Run shows the plan.
func (c *planCommand) Run(s *streams) error {
	if pipeline.IsCloud(c.Path) {
		return pipeline.StartJob(s.out, c.Path)
	}
	j, err := loadJob(c.Path)
	if err != nil {
		return err
	}
	watch := newWatcher(s.errors, false, "")
	p, err := pipeline.MakePlan(s.ctx, j, watch)
	watch.close()
	if err != nil {
		return err
	}
	printFiles(s, p, j)
	printRoles(s, p)
	printSensors(s, p, j)
	printHeads(s, p, j)
	for _, caution := range p.Cautions {
		fmt.Fprintln(s.out, "caution:", caution)
	}
	return planVerdict(s, p)
}

func printFiles(s *streams, p *pipeline.Plan, j *job.Job) {
	var points int64
	fresh, about := 0, ""
	for _, f := range p.Files {
		points += f.Points
		if f.Fresh {
			fresh++
		}
		if !f.Exact && f.Err == nil {
			about = "about "
		}
	}
	fmt.Fprintf(s.out, "job      %s%s\n", j.Path, quoted(j.Title))
	fmt.Fprintf(s.out, "files    %s, %s%s points; %d done and unchanged, %d to do\n", plural(len(p.Files), "file"), about, grouped(points), fresh, len(p.Files)-fresh)
	if p.LeftOut > 0 {
		fmt.Fprintf(s.out, "         %d matches left out: outputs of earlier runs\n", p.LeftOut)
	}
	const most = 10
	for i, f := range p.Files {
		if i == most {
			fmt.Fprintf(s.out, "         and %d more\n", len(p.Files)-most)
			break
		}
		fmt.Fprintf(s.out, "         %s -> %s\n", f.Input, f.Output)
	}
	fmt.Fprintf(s.out, "output   %s (%s provenance, %d decimals)\n", j.Resolve(j.Output.Folder), j.Output.Provenance, j.Output.Decimals)
	fmt.Fprintf(s.out, "run      %.12s\n", p.Run)
}

func quoted(title string) string {
	if title == "" {
		return ""
	}
	return fmt.Sprintf(" %q", title)
}

func printRoles(s *streams, p *pipeline.Plan) {
	for i, r := range p.Roles {
		head := ""
		if i == 0 {
			head = "columns"
		}
		fmt.Fprintf(s.out, "%-8s %-9s from %s\n", head, r.Role, r.Column)
	}
}

func printSensors(s *streams, p *pipeline.Plan, j *job.Job) {
	for _, sn := range p.Sensors {
		fmt.Fprintf(s.out, "model    %s%s, %g nm%s\n", sn.Model, quoted(sn.Name), sn.Wavelength, sampled(sn, p))
		if j.Water.Temperature != nil {
			fmt.Fprintf(s.out, "water    %g degrees C, salinity %g: phase %.6f, group %.6f (%s)\n", *j.Water.Temperature, *j.Water.Salinity, sn.Water[0], sn.Water[1], j.Water.Formula)
		}
		fmt.Fprintf(s.out, "air      %g degrees C, %g hPa, %g %%: phase %.6f, group %.6f\n", j.Air.Temperature, j.Air.Pressure, j.Air.Humidity, sn.Air[0], sn.Air[1])
		printTrajectory(s, sn.Trajectory, j)
		printCameras(s, sn.Cameras, j)
	}
	printLines(s, "zones", zonesLines(p.Zones, j))
	printLines(s, "stations", stationsLines(p.Stations, j))
	printLines(s, "gauge", gaugeLines(p.Gauge, j))
}

// printLines writes lines below one head.
func printLines(s *streams, head string, lines []string) {
	for _, line := range lines {
		fmt.Fprintf(s.out, "%-8s %s\n", head, line)
		head = ""
	}
}

// sampled says how many of the heads' points a sensor made, where it has a name.
func sampled(sn pipeline.PlannedSensor, p *pipeline.Plan) string {
	if sn.Name == "" || p.Heads.Points == 0 {
		return ""
	}
	return fmt.Sprintf("; made %s of the first %s points", grouped(sn.Points), grouped(p.Heads.Points))
}

func printTrajectory(s *streams, t *pipeline.TrajectoryInfo, j *job.Job) {
	if t == nil {
		return
	}
	fmt.Fprintf(s.out, "flight   %s, %s to %s, longest gap %.3g s\n", plural(t.Records, "record"), t.Times[0].Format(time.RFC3339), t.Times[1].Format(time.RFC3339), t.Gap)
	printBounds(s, t.Low, t.High, j)
}

func printCameras(s *streams, c *pipeline.CameraInfo, j *job.Job) {
	if c == nil {
		return
	}
	times := "without times"
	if !c.Times[0].IsZero() {
		times = fmt.Sprintf("from %s to %s", c.Times[0].Format(time.RFC3339), c.Times[1].Format(time.RFC3339))
	}
	fmt.Fprintf(s.out, "cameras  %s in %s, %s; solve %s, residual %s\n", plural(c.Count, "camera"), c.Medium, times, c.Solve, c.Residual)
	printBounds(s, c.Low, c.High, j)
}

// printImages shows what is expected of the points made from images.
func printImages(s *streams, h *pipeline.ImageHeads, j *job.Job) {
	if h == nil {
		return
	}
	views := fmt.Sprintf("%d to %d cameras a point, %.1f on average", h.Views[0], h.Views[1], h.MeanViews)
	if h.Views[0] == h.Views[1] {
		views = plural(h.Views[0], "camera") + " a point"
	}
	fmt.Fprintf(s.out, "views    by %s: %s, up to %.1f degrees off the vertical\n", h.Source, views, h.MaxOffVertical)
	if h.Lift[0] <= h.Lift[1] {
		fmt.Fprintf(s.out, "moves    z by %.3f to %.3f %s, plan by up to %.3f %s\n", h.Lift[0], h.Lift[1], j.Input.VerticalUnit, h.MaxDrift, j.Input.Unit)
	}
}

func printBounds(s *streams, low, high [3]float64, j *job.Job) {
	for k, axis := range []string{"x", "y", "z"} {
		fmt.Fprintf(s.out, "         %s %.3f to %.3f %s\n", axis, low[k], high[k], unitOf(j, k))
	}
}

func printHeads(s *streams, p *pipeline.Plan, j *job.Job) {
	h := p.Heads
	if h.Points == 0 {
		return
	}
	fmt.Fprintf(s.out, "heads    the first %s points of the files:\n", grouped(h.Points))
	printBounds(s, h.Low, h.High, j)
	if !h.Times[0].IsZero() {
		fmt.Fprintf(s.out, "         time %s to %s\n", h.Times[0].Format(time.RFC3339), h.Times[1].Format(time.RFC3339))
	}
	printCorners(s, p, j)
	printImages(s, h.Images, j)
	for _, o := range outcomeRows(h.Outcomes) {
		fmt.Fprintf(s.out, "         %-13s %12s  %5.1f %%\n", o.name, grouped(o.count), o.percent)
	}
}

func printCorners(s *streams, p *pipeline.Plan, j *job.Job) {
	if math.IsNaN(p.Corners[0].Level + p.Corners[1].Level + p.Corners[2].Level + p.Corners[3].Level) {
		fmt.Fprintln(s.out, "surface  does not reach all corners of these points; bentray surface describes it")
		return
	}
	for i, corner := range p.Corners {
		head := ""
		if i == 0 {
			head = "surface"
		}
		fmt.Fprintf(s.out, "%-8s %.3f at %.1f, %.1f\n", head, corner.Level, corner.X, corner.Y)
	}
	if p.At != nil {
		fmt.Fprintf(s.out, "         at %s, %s\n", p.At.Format(time.RFC3339), p.At.Why)
	}
}

func unitOf(j *job.Job, axis int) string {
	if axis == 2 {
		return j.Input.VerticalUnit
	}
	return j.Input.Unit
}

// planVerdict names the files that would fail.
func planVerdict(s *streams, p *pipeline.Plan) error {
	failed := 0
	for _, f := range p.Files {
		if f.Err != nil {
			failed++
			fmt.Fprintln(s.errors, "would fail:", f.Err)
		}
	}
	switch failed {
	case 0:
		return nil
	case len(p.Files):
		return errNothing
	}
	return errPartly
}
