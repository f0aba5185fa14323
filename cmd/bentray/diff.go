package main

import (
	"errors"
	"fmt"

	"bentray/pipeline"
	"bentray/pipeline/quality"
)

type diffCommand struct {
	Raw       string  `arg:"" help:"The raw cloud, or a folder of them; or another corrected one of the same raw cloud."`
	Corrected string  `arg:"" help:"The corrected cloud, or their folder."`
	Check     string  `help:"Compare with surveyed points: a file with columns x, y, z." placeholder:"FILE"`
	Reach     float64 `help:"Match a check point within so much in plan, in the cloud's unit; 0 is 0.5 m." default:"0"`
	Match     string  `help:"By a local plane through at least 6 points, or the nearest one: plane or nearest." default:"plane"`
	Overlap   bool    `help:"Compare flight lines where they overlap, in cells of twice the reach, or wider where points are thin."`
	JSON      string  `name:"json" help:"Also write all figures into this file." placeholder:"FILE"`
	Workers   int     `help:"Files in work at once; 0 is one a processor." default:"0"`
	Quiet     bool    `help:"No progress."`
}

func (diffCommand) Help() string {
	return `Raw and corrected clouds are compared row by row: no row may be missing, doubled or out of order, and no column changed but x, y and z. Then the figures: outcomes, the shift by depth and incidence; with --check the error against surveyed points by depth, and the share within the limits of each IHO S-44 order; with --overlap the differences between flight lines. Folders are compared file by file, by relative name.

Example:

    bentray demo demo-out && bentray diff demo-out/raw demo-out/corrected --overlap

Exit codes: 0 all holds; 1 it does not, or nothing could be compared; 64 the call is wrong; 130 interrupted.`
}

// errNotHeld ends a comparison or an audit that does not hold, which is reported already.
var errNotHeld = errors.New("it does not hold")

// Run compares and reports.
func (c *diffCommand) Run(s *streams) error {
	if err := c.checkJSON(); err != nil {
		return err
	}
	watch := newWatcher(s.errors, c.Quiet, "")
	r, err := quality.Diff(s.ctx, c.Raw, c.Corrected, quality.Options{
		Check: c.Check, Reach: c.Reach, Match: c.Match, Overlap: c.Overlap, Workers: c.Workers, Watch: watch,
	})
	watch.close()
	if err != nil {
		return err
	}
	p := diffPrinter{s, r}
	p.print()
	if c.JSON != "" {
		if err := r.WriteJSON(c.JSON); err != nil {
			return err
		}
	}
	if !r.Holds {
		return errNotHeld
	}
	return nil
}

// checkJSON refuses to write figures over a cloud or another input.
func (c *diffCommand) checkJSON() error {
	switch {
	case c.JSON == "":
		return nil
	case c.JSON == c.Raw || c.JSON == c.Corrected || c.JSON == c.Check:
		return &pipeline.CallError{Err: fmt.Errorf("--json %s would overwrite an input; give another name", c.JSON)}
	case pipeline.IsCloud(c.JSON):
		return &pipeline.CallError{Err: fmt.Errorf("--json %s is a cloud, want another name", c.JSON)}
	}
	return nil
}
