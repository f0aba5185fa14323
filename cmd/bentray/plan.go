package main

import (
	"fmt"
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
	p, err := pipeline.MakePlan(s.ctx, j)
	if err != nil {
		return err
	}
	printFiles(s, p, j)
	printRoles(s, p)
	printMedia(s, p, j)
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
	fmt.Fprintf(s.out, "job      %s %s\n", j.Path, quoted(j.Title))
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
	return fmt.Sprintf("%q", title)
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

func printMedia(s *streams, p *pipeline.Plan, j *job.Job) {
	fmt.Fprintf(s.out, "model    %s\n", j.Rays.Model)
	fmt.Fprintf(s.out, "water    %g degrees C, salinity %g: phase %.6f, group %.6f at %g nm (%s)\n", j.Water.Temperature, j.Water.Salinity, p.Water[0], p.Water[1], j.Light.Wavelength, j.Water.Formula)
	fmt.Fprintf(s.out, "air      %g degrees C, %g hPa, %g %%: phase %.6f, group %.6f\n", j.Air.Temperature, j.Air.Pressure, j.Air.Humidity, p.Air[0], p.Air[1])
}

func printHeads(s *streams, p *pipeline.Plan, j *job.Job) {
	h := p.Heads
	if h.Points == 0 {
		return
	}
	fmt.Fprintf(s.out, "heads    the first %s points of the files:\n", grouped(h.Points))
	for k, axis := range []string{"x", "y", "z"} {
		fmt.Fprintf(s.out, "         %s %.3f to %.3f %s\n", axis, h.Low[k], h.High[k], unitOf(j, k))
	}
	if !h.Times[0].IsZero() {
		fmt.Fprintf(s.out, "         time %s to %s\n", h.Times[0].Format(time.RFC3339), h.Times[1].Format(time.RFC3339))
	}
	if j.Surface.Column != "" {
		fmt.Fprintf(s.out, "surface  from column %s\n", j.Surface.Column)
	} else {
		for i, corner := range p.Corners {
			head := ""
			if i == 0 {
				head = "surface"
			}
			fmt.Fprintf(s.out, "%-8s %.3f at %.1f, %.1f\n", head, corner.Level, corner.X, corner.Y)
		}
	}
	for _, o := range outcomeRows(h.Outcomes) {
		fmt.Fprintf(s.out, "         %-13s %12s  %5.1f %%\n", o.name, grouped(o.count), o.percent)
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
