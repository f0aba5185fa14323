package pipeline

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"sync"
	"time"

	"golang.org/x/sync/errgroup"

	"bentray/io/atomicfile"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// Options of a run. The zero value does all files that are missing or stale.
type Options struct {
	Workers int    // files and chunks in work at once; 0: one a processor
	Redo    bool   // do fresh files too
	Only    string // pattern of the files to do, as named below the output folder; empty: all
	Shard   Shard  // the share of the files to do
	Watch   Watcher
}

// Watcher is told how a run goes on. Its methods may be called at the same time.
type Watcher interface {
	Begin(stage string, files int, bytes int64) // a stage of the run begins: "surface points" of all clouds where they are the surface, then "" (the files to do)
	Read(bytes int64)                           // so many more bytes of the stage's input are done
	End(file receipt.FileSummary)               // one more file is done, fresh or failed
}

// runner does the files of one run.
type runner struct {
	*survey
	engine *engine
	redo   bool
	known  history

	mu      sync.Mutex
	summary *receipt.Summary
}

// Run does a job: every file that is missing or stale gets its output and its
// receipt; the summary, also written to the output folder, says what became of
// each. A file that fails does not stop the others, and is no error of Run.
//
// Errors: a *CallError where the call or the job is wrong and nothing was
// written; the context's error when it was cancelled, and that of a summary which
// could not be written (both with the summary); else what the file system says.
func Run(ctx context.Context, j *job.Job, o Options) (*receipt.Summary, error) {
	all, leftOut, err := findInputs(j)
	if err != nil {
		return nil, err
	}
	inputs, err := pick(all, o.Shard, o.Only)
	if err != nil {
		return nil, err
	}
	s, err := readSurvey(ctx, j, all, o)
	if err != nil {
		return nil, err
	}
	r := &runner{survey: s, engine: newEngine(s.workers), redo: o.Redo}
	return r.run(ctx, inputs, leftOut, o.Shard)
}

func (r *runner) run(ctx context.Context, inputs []input, leftOut int, shard Shard) (*receipt.Summary, error) {
	folder := r.job.Resolve(r.job.Output.Folder)
	if err := makeFolders(folder, inputs); err != nil {
		return nil, err
	}
	held, err := acquire(inputs)
	if err != nil {
		return nil, err
	}
	defer held.release()
	if _, err := atomicfile.NewSweeper(targets(inputs)).Sweep(); err != nil {
		return nil, err
	}
	host, err := os.Hostname()
	if err != nil {
		return nil, err
	}
	r.summary = &receipt.Summary{
		Run: r.survey.run, Program: Program, Title: r.job.Title, Job: filepath.ToSlash(relative(folder, r.job.Path)), Host: host, Shard: shard.String(), Workers: r.workers, LeftOut: leftOut,
		Started: time.Now().UTC().Truncate(time.Millisecond), Files: []receipt.FileSummary{}, Outcomes: map[string]int64{},
	}
	r.known = readHistory(folder)
	r.all(ctx, inputs)
	r.summary.Close()
	return r.summary, errors.Join(ctx.Err(), r.writeSummary(folder, summaryName(shard)))
}

// writeSummary also sweeps what killed runs left of the summary. Runs that share
// the folder share its name, so only the gate keeps a live run's out of the broom.
func (r *runner) writeSummary(folder, name string) error {
	path := filepath.Join(folder, name)
	return withGate(folder, func() error {
		if _, err := atomicfile.NewSweeper([]string{path}).Sweep(); err != nil {
			return err
		}
		return r.summary.Write(path)
	})
}

// all does the files, as many at once as there are workers.
func (r *runner) all(ctx context.Context, inputs []input) {
	var bytes int64
	for _, in := range inputs {
		bytes += in.bytes
	}
	r.watch.Begin("", len(inputs), bytes)
	var g errgroup.Group
	g.SetLimit(r.workers)
	for _, in := range inputs {
		g.Go(func() error {
			r.one(ctx, in)
			return nil
		})
	}
	_ = g.Wait() // files report to the summary
}

// one does a file, unless it is fresh, and reports.
func (r *runner) one(ctx context.Context, in input) {
	started := time.Now()
	f := receipt.FileSummary{Input: in.name, Output: in.target, Status: receipt.Dropped}
	var done *finished
	err := ctx.Err()
	if err == nil && !r.redo {
		if done, err = r.fresh(ctx, in, r.known); done != nil {
			f.Status = receipt.Fresh
			r.watch.Read(in.bytes)
		}
	}
	if err == nil && done == nil {
		if done, err = r.rewrite(ctx, in); done != nil {
			f.Status = receipt.Done
		}
	}
	var record *receipt.Receipt
	switch {
	case ctx.Err() != nil && err != nil: // interrupted
	case err != nil:
		f.Status, f.Error = receipt.Failed, err.Error()
	default:
		f.Rows = receipt.Rows{Read: done.RowsRead, Written: done.RowsWritten, Diverted: done.RowsDiverted}
		f.Cautions, record = done.Cautions, done.Receipt
		f.InputBytes, f.InputSHA256, f.InputModified = done.Inputs[0].Bytes, done.Inputs[0].SHA256, done.modified
	}
	f.Seconds = time.Since(started).Seconds()
	r.mu.Lock()
	r.summary.Add(f, record)
	r.mu.Unlock()
	r.watch.End(f)
}

// targets lists every file that this run alone may write.
func targets(inputs []input) []string {
	var paths []string
	for _, in := range inputs {
		paths = append(paths, in.writes()...)
	}
	return paths
}

// summaryPattern matches the names of summaryName.
const summaryPattern = "run-summary*.json"

func summaryName(s Shard) string {
	if s.Count == 0 {
		return "run-summary.json"
	}
	return "run-summary-" + s.fileName() + ".json"
}

type silent struct{}

func (silent) Begin(string, int, int64) {}
func (silent) Read(int64)               {}
func (silent) End(receipt.FileSummary)  {}
