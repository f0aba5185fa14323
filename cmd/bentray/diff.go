package main

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"bentray/pipeline"
	"bentray/pipeline/quality"
	"bentray/pipeline/quality/page"
	"bentray/pipeline/receipt"
)

type diffCommand struct {
	Raw       string  `arg:"" help:"The raw cloud, or a folder of them; or another corrected one of the same raw cloud."`
	Corrected string  `arg:"" help:"The corrected cloud, or their folder."`
	Check     string  `help:"Compare with surveyed points: a file with columns x, y, z." placeholder:"FILE"`
	Reach     float64 `help:"Match a check point within so much in plan, in the cloud's unit; 0 is 0.5 m." default:"0"`
	Match     string  `help:"By a local plane through at least 6 points, or the nearest one: plane or nearest." default:"plane"`
	Overlap   bool    `help:"Compare flight lines where they overlap, in cells of twice the reach, or wider where points are thin."`
	JSON      string  `name:"json" help:"Also write all figures into this file." placeholder:"FILE"`
	HTML      string  `name:"html" help:"Also write a page to read, print and sign: one file with all pictures, whose name ends in .html." placeholder:"FILE"`
	Workers   int     `help:"Files in work at once; 0 is one a processor." default:"0"`
	Quiet     bool    `help:"No progress."`
}

func (diffCommand) Help() string {
	return `Raw and corrected clouds are compared row by row: no row may be missing, doubled or out of order, and no column changed but x, y and z. Then the figures: outcomes, the shift by depth and incidence; with --check the error against surveyed points by depth, and the share within the limits of each IHO S-44 order; with --overlap the differences between flight lines. --html writes all that, with pictures, settings and cautions, as one page to print and sign. Folders are compared file by file, by relative name.

Example:

    bentray demo demo-out && bentray diff demo-out/raw demo-out/corrected --overlap

Exit codes: 0 all holds; 1 it does not, or nothing could be compared; 64 the call is wrong; 130 interrupted.`
}

// errNotHeld ends a comparison or an audit that does not hold, which is reported already.
var errNotHeld = errors.New("it does not hold")

// Run compares and reports.
func (c *diffCommand) Run(s *streams) error {
	if err := errors.Join(c.checkTarget("--json", c.JSON), c.checkTarget("--html", c.HTML), c.checkPage()); err != nil {
		return &pipeline.CallError{Err: err}
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
	if err := c.write(r, s); err != nil {
		return err
	}
	if !r.Holds {
		return errNotHeld
	}
	return nil
}

// write puts the report into the files that are asked for, and says where.
func (c *diffCommand) write(r *quality.Report, s *streams) error {
	if c.JSON != "" {
		if err := r.WriteJSON(c.JSON); err != nil {
			return err
		}
	}
	if c.HTML == "" {
		return nil
	}
	if err := page.Write(c.HTML, r); err != nil {
		return err
	}
	fmt.Fprintf(s.errors, "page written to %s\n", c.HTML)
	return nil
}

// checkTarget refuses to write over a cloud or another input.
func (c *diffCommand) checkTarget(option, path string) error {
	switch {
	case path == "":
		return nil
	case isSameFile(path, c.Raw) || isSameFile(path, c.Corrected) || c.Check != "" && isSameFile(path, c.Check):
		return fmt.Errorf("%s %s would overwrite an input; give another name", option, path)
	case pipeline.IsCloud(path):
		return fmt.Errorf("%s %s is a cloud, want another name", option, path)
	case strings.HasSuffix(path, receipt.Suffix):
		return fmt.Errorf("%s %s is a receipt, want another name", option, path)
	}
	return nil
}

// checkPage wants a name for the page that is no one else's.
func (c *diffCommand) checkPage() error {
	switch ext := strings.ToLower(filepath.Ext(c.HTML)); {
	case c.HTML == "":
		return nil
	case ext != ".html" && ext != ".htm":
		return fmt.Errorf("--html %s: the name ends in %q, want .html", c.HTML, ext)
	case c.JSON != "" && isSameFile(c.JSON, c.HTML):
		return fmt.Errorf("--json and --html are both %s, want two names", c.JSON)
	}
	return nil
}

// isSameFile tells whether two paths are one, also by other ways to it.
func isSameFile(a, b string) bool {
	infoA, errA := os.Stat(a)
	infoB, errB := os.Stat(b)
	return filepath.Clean(a) == filepath.Clean(b) || errA == nil && errB == nil && os.SameFile(infoA, infoB)
}
