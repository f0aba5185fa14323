package main

import (
	"fmt"

	"bentray/pipeline"
)

type auditCommand struct {
	Path    string `arg:"" help:"An output, or a folder with outputs in it and below."`
	Base    string `help:"The job file's folder, from which receipts name auxiliary files; found where it is not given." placeholder:"FOLDER"`
	Workers int    `help:"Files and chunks in work at once; 0 is one a processor." default:"0"`
	Quiet   bool   `help:"No progress."`
}

func (auditCommand) Help() string {
	return `Every output must have its receipt, with the bytes, the SHA-256 and the counts that the receipt tells. Every point is computed again from its raw copies and the other columns, with the settings of the receipt and the auxiliary files that it names, and every column that run adds must agree: to half a unit of the written decimals in CSV, to the last digit in Parquet, and 1e-9 for what another processor makes of it (1e-6 under curved surfaces). So a point that was moved is found where the receipt was made to fit, too. What does not hold is named by file, row and column.

Auxiliary files are looked for from the job file's folder: as --base names it, else as run-summary.json tells, else above the output folder. That an output has the points of its raw cloud is for bentray diff to show.

Example:

    bentray demo demo-out && bentray audit demo-out/corrected

Exit codes: 0 all holds; 1 it does not; 64 the call is wrong; 130 interrupted.`
}

// Run audits and reports.
func (c *auditCommand) Run(s *streams) error {
	if c.Workers < 0 {
		return &pipeline.CallError{Err: fmt.Errorf("--workers is %d, want 0 or more", c.Workers)}
	}
	watch := newWatcher(s.errors, c.Quiet, "")
	r, err := pipeline.Audit(s.ctx, c.Path, pipeline.AuditOptions{Base: c.Base, Workers: c.Workers, Watch: watch})
	watch.close()
	if err != nil {
		return err
	}
	printAudit(s, r)
	if !r.Holds() {
		return errNotHeld
	}
	return nil
}

func printAudit(s *streams, r *pipeline.AuditReport) {
	failed, rows := 0, int64(0)
	for _, f := range r.Files {
		verdict := "holds"
		if len(f.Faults) > 0 {
			verdict = "fails"
			failed++
		}
		rows += f.Rows
		fmt.Fprintf(s.out, "%s  %s: %s computed again\n", verdict, f.Name, points(f.Rows))
		for _, fault := range f.Faults {
			fmt.Fprintf(s.out, "       %s\n", fault)
		}
		for _, note := range f.Notes {
			fmt.Fprintf(s.out, "       %s\n", note)
		}
	}
	fmt.Fprintf(s.out, "%s: %d hold, %d fail; %s computed again\n", plural(len(r.Files), "output"), len(r.Files)-failed, failed, points(rows))
	if r.LeftOut > 0 {
		fmt.Fprintf(s.out, "left out: %s without outcome and receipt\n", plural(r.LeftOut, "cloud"))
	}
}

func points(n int64) string {
	if n == 1 {
		return "1 point"
	}
	return grouped(n) + " points"
}
