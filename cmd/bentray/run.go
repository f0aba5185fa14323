package main

import (
	"fmt"
	"strings"

	"bentray/pipeline"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

type runCommand struct {
	Job     string `arg:"" help:"The job file (TOML)."`
	Workers int    `help:"Files and chunks in work at once; 0 is one a processor." default:"0"`
	Shard   string `help:"Do only share I of N (I from 0), to spread a job over machines." placeholder:"I/N"`
	Redo    bool   `help:"Do files again that are done already."`
	Only    string `help:"Do only files that match, named as below the output folder." placeholder:"PATTERN"`
	Quiet   bool   `help:"No progress and no report; failures are still named."`
	Log     string `help:"Log each file to stderr in place of progress: text or json." placeholder:"text/json"`
}

func (runCommand) Help() string {
	return `Every cloud of the job is corrected and written to the job's output folder, with a receipt beside it. Files that are done and still right are not done again. Interrupted or killed, the same call goes on where it stopped.

Example:

    bentray demo demo-out && bentray run demo-out/survey.toml --redo

` + exitCodes
}

// Run does the job and reports.
func (c *runCommand) Run(s *streams) error {
	j, err := loadJob(c.Job)
	if err != nil {
		return err
	}
	if c.Workers < 0 {
		return &pipeline.CallError{Err: fmt.Errorf("--workers is %d, want 0 or more", c.Workers)}
	}
	if c.Log != "" && c.Log != "text" && c.Log != "json" {
		return &pipeline.CallError{Err: fmt.Errorf("--log is %q, want text or json", c.Log)}
	}
	o := pipeline.Options{Workers: c.Workers, Redo: c.Redo, Only: c.Only}
	if c.Shard != "" {
		if o.Shard, err = pipeline.ParseShard(c.Shard); err != nil {
			return err
		}
	}
	watch := newWatcher(s.errors, c.Quiet, c.Log)
	o.Watch = watch
	summary, err := pipeline.Run(s.ctx, j, o)
	watch.close()
	if summary == nil {
		return err
	}
	if !c.Quiet {
		printSummary(s, summary, j)
	}
	printFailures(s, summary)
	if err != nil {
		return err
	}
	return verdict(summary)
}

func loadJob(path string) (*job.Job, error) {
	if pipeline.IsCloud(path) {
		return nil, &pipeline.CallError{Err: fmt.Errorf("%s is a cloud, want a job file; bentray plan %s prints one to start from", path, path)}
	}
	j, err := job.Load(path)
	if err != nil {
		return nil, &pipeline.CallError{Err: err}
	}
	return j, nil
}

// verdict is nil where no file failed.
func verdict(s *receipt.Summary) error {
	switch {
	case s.Failed == 0:
		return nil
	case s.Done+s.Fresh == 0:
		return errNothing
	}
	return errPartly
}

func printSummary(s *streams, summary *receipt.Summary, j *job.Job) {
	fmt.Fprintf(s.out, "%s: %s\n", j.Path, countFiles(summary))
	for _, o := range outcomeRows(summary.Outcomes) {
		fmt.Fprintf(s.out, "  %-13s %12s  %5.1f %%\n", o.name, grouped(o.count), o.percent)
	}
	if summary.Rows.Diverted > 0 {
		fmt.Fprintf(s.out, "  %s of %s rows could not be read and were diverted\n", grouped(summary.Rows.Diverted), grouped(summary.Rows.Read))
	}
	if summary.LeftOut > 0 {
		fmt.Fprintf(s.out, "  %d matches of the patterns left out: outputs of earlier runs\n", summary.LeftOut)
	}
	printCautions(s, summary)
	fmt.Fprintf(s.out, "output: %s (%.1f s)\n", j.Resolve(j.Output.Folder), summary.Seconds)
}

func countFiles(s *receipt.Summary) string {
	parts := []string{plural(len(s.Files), "file") + ":"}
	for _, p := range []struct {
		n    int
		what string
	}{{s.Done, "done"}, {s.Fresh, "done before and unchanged"}, {s.Failed, "failed"}, {s.Dropped, "not done"}} {
		if p.n > 0 {
			parts = append(parts, fmt.Sprintf("%d %s,", p.n, p.what))
		}
	}
	if len(s.Files) == 0 {
		return "this share holds no file of the job"
	}
	return strings.TrimSuffix(strings.Join(parts, " "), ",")
}

// printCautions names each caution once, with the first file it holds for, and
// as many as a person reads.
func printCautions(s *streams, summary *receipt.Summary) {
	const most = 20
	files := map[string][]string{}
	var cautions []string
	for _, f := range summary.Files {
		for _, caution := range f.Cautions {
			if files[caution] == nil {
				cautions = append(cautions, caution)
			}
			files[caution] = append(files[caution], f.Output)
		}
	}
	for _, caution := range summary.Cautions {
		fmt.Fprintln(s.out, "caution:", caution)
	}
	for _, caution := range cautions[:min(len(cautions), most)] {
		where := files[caution][0]
		if more := len(files[caution]) - 1; more > 0 {
			where += fmt.Sprintf(" and %d more", more)
		}
		fmt.Fprintf(s.out, "caution: %s: %s\n", where, caution)
	}
	if more := len(cautions) - most; more > 0 {
		fmt.Fprintf(s.out, "caution: %d more in the receipts and in run-summary.json\n", more)
	}
}

func printFailures(s *streams, summary *receipt.Summary) {
	for _, f := range summary.Files {
		if f.Status == receipt.Failed {
			fmt.Fprintln(s.errors, "failed:", f.Error)
		}
	}
}
