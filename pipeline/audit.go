package pipeline

import (
	"context"
	"runtime"

	"golang.org/x/sync/errgroup"

	"bentray/pipeline/receipt"
)

// AuditOptions say how outputs are audited. The zero value is ready to use.
type AuditOptions struct {
	Base    string // the folder of the job file, from which receipts name auxiliary files; empty: as the run's summary has it, else the parent of the output folder
	Workers int    // files and chunks in work at once; 0: one a processor
	Watch   Watcher
}

// AuditReport is what an audit found.
type AuditReport struct {
	Files   []FileAudit // in the order of their names
	LeftOut int         // clouds that are no outputs
}

// Holds tells whether every output is proven.
func (r *AuditReport) Holds() bool {
	for i := range r.Files {
		if len(r.Files[i].Faults) > 0 {
			return false
		}
	}
	return true
}

// FileAudit is what an audit found of one output.
type FileAudit struct {
	Name   string   // as below the folder that is audited, with slashes
	Rows   int64    // whose points were recomputed
	Faults []string // what does not hold or could not be proven; none where it holds
	Notes  []string // how far the proof goes where it is not for all columns to the last digit
}

// auditor audits outputs, those of one run after those of another.
type auditor struct {
	base    string
	workers int
	watch   Watcher
	engine  *engine
}

// Audit proves an output, or all outputs in a folder and below: that each has its
// receipt, the bytes and the counts that the receipt tells, and that every point comes
// to the same when it is computed again from its raw copies and its other columns, with
// the settings of the receipt and the auxiliary files that it names. What does not hold
// is in the report, and no error.
//
// Lengths, angles and indices agree when they are within half a unit of the written
// decimals (CSV) or equal (Parquet), and 1e-9 beyond it (1e-6 where entries are found
// in steps, as under a curved surface) for what another processor may make of them, yet
// never more than one unit in CSV. Texts and counts are equal.
//
// It does not prove that the raw copies are those of the raw cloud, nor the columns
// that pass through: only the receipt's hash of the output and the raw cloud do.
//
// Errors: a *CallError where there is nothing to audit; the context's error; else what
// the file system says.
func Audit(ctx context.Context, path string, o AuditOptions) (*AuditReport, error) {
	found, err := findOutputs(path)
	if err != nil {
		return nil, err
	}
	a := &auditor{base: o.Base, workers: o.Workers, watch: o.Watch}
	if a.workers <= 0 {
		a.workers = runtime.GOMAXPROCS(0)
	}
	if a.watch == nil {
		a.watch = silent{}
	}
	a.engine = newEngine(a.workers)
	r := &AuditReport{Files: found.audits, LeftOut: found.leftOut}
	for _, group := range found.groups {
		if err := a.group(ctx, r.Files, group); err != nil {
			return nil, err
		}
	}
	return r, ctx.Err()
}

// group audits the outputs of one run, as many at once as there are workers.
func (a *auditor) group(ctx context.Context, files []FileAudit, outputs []auditOutput) error {
	p := a.prepare(ctx, outputs[0])
	if err := ctx.Err(); err != nil {
		return err
	}
	var bytes int64
	for _, o := range outputs {
		bytes += o.bytes
	}
	a.watch.Begin("", len(outputs), bytes)
	g, ctx := errgroup.WithContext(ctx)
	g.SetLimit(a.workers)
	for _, o := range outputs {
		g.Go(func() error {
			f := &files[o.index]
			err := a.file(ctx, f, o, p)
			a.watch.End(f.summary())
			return err
		})
	}
	return g.Wait()
}

// summary is what a Watcher is told.
func (f *FileAudit) summary() receipt.FileSummary {
	s := receipt.FileSummary{Output: f.Name, Status: receipt.Done, Rows: receipt.Rows{Read: f.Rows, Written: f.Rows}}
	if len(f.Faults) > 0 {
		s.Status, s.Error = receipt.Failed, f.Faults[0]
	}
	return s
}
