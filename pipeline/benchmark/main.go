package main

import (
	"errors"
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"syscall"
)

// options are the flags.
type options struct {
	dir     string
	rows    int64
	digits  int
	format  string
	runs    int
	workers int
	floors  bool
}

func parse(args []string) (options, error) {
	var o options
	f := flag.NewFlagSet("benchmark", flag.ContinueOnError)
	f.StringVar(&o.dir, "dir", "bench-out", "work `folder`; its survey and outputs are replaced")
	f.Int64Var(&o.rows, "rows", 5_000_000, "points in the survey")
	f.IntVar(&o.digits, "digits", 0, "significant digits of coordinates and times, up to 17; 0 writes millimetres and microseconds")
	f.StringVar(&o.format, "format", "csv", "csv, parquet or both")
	f.IntVar(&o.runs, "runs", 3, "runs of each program, taken in turn")
	f.IntVar(&o.workers, "workers", 2, "bentray's workers and the engine's threads")
	f.BoolVar(&o.floors, "floors", true, "fail where the speed ratio is below its floor")
	if err := f.Parse(args); err != nil {
		return o, err
	}
	return o, o.validate(f.NArg())
}

func (o options) validate(extra int) error {
	switch {
	case extra > 0:
		return errors.New("benchmark takes flags only")
	case o.rows < 1 || o.runs < 1 || o.workers < 1:
		return errors.New("-rows, -runs and -workers want at least 1")
	case o.digits < 0 || o.digits > 17:
		return fmt.Errorf("-digits is %d, want 0 to 17", o.digits)
	case o.format != "csv" && o.format != "parquet" && o.format != "both":
		return fmt.Errorf("-format is %q, want csv, parquet or both", o.format)
	}
	return nil
}

func (o options) formats() []string {
	if o.format == "both" {
		return []string{"csv", "parquet"}
	}
	return []string{o.format}
}

func main() {
	o, err := parse(os.Args[1:])
	if errors.Is(err, flag.ErrHelp) {
		return
	}
	if err == nil {
		err = o.bench()
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "benchmark:", err)
		os.Exit(1)
	}
}

// bench prepares programs and survey, then measures one format after the other.
func (o options) bench() error {
	program := filepath.Join(o.dir, "bentray")
	if err := os.MkdirAll(o.dir, 0o755); err != nil {
		return err
	}
	if out, err := exec.Command("go", "build", "-o", program, "bentray/cmd/bentray").CombinedOutput(); err != nil {
		return fmt.Errorf("go build bentray/cmd/bentray: %w\n%s", err, out)
	}
	sql, err := installEngine(filepath.Join(o.dir, "engine"), o.workers)
	if err != nil {
		sql = nil
		fmt.Fprintln(os.Stderr, "benchmark: engine skipped, no ratio:", err)
	}
	fmt.Fprintf(os.Stderr, "benchmark: writing %d points\n", o.rows)
	if err := writeSurvey(filepath.Join(o.dir, "survey.csv"), o.rows, o.digits); err != nil {
		return err
	}
	var broken []error
	for _, format := range o.formats() {
		if format == "parquet" && sql == nil {
			fmt.Fprintln(os.Stderr, "benchmark: parquet skipped: only the engine can make the survey's Parquet file")
			continue
		}
		r, err := o.measure(format, program, sql)
		if err != nil {
			return err
		}
		r.print(os.Stdout)
		broken = append(broken, r.check(o.floors))
	}
	return errors.Join(broken...)
}

// measure runs both programs in turn on one format and compares their outputs.
func (o options) measure(format, program string, sql *engine) (*result, error) {
	input := filepath.Join(o.dir, "survey."+format)
	if format == "parquet" {
		if _, err := sql.run(task{Do: "convert", Input: filepath.Join(o.dir, "survey.csv"), Output: input}); err != nil {
			return nil, err
		}
	}
	info, err := os.Stat(input)
	if err != nil {
		return nil, err
	}
	job, err := writeJob(o.dir, filepath.Base(input), format)
	if err != nil {
		return nil, err
	}
	outFolder := filepath.Join(o.dir, "bentray-"+format)
	outEngine := filepath.Join(o.dir, "engine."+format)
	var bentray, engine []usage
	for range o.runs {
		u, err := o.runBentray(program, job, outFolder)
		if err != nil {
			return nil, err
		}
		bentray = append(bentray, u)
		if sql == nil {
			continue
		}
		if u, err = runEngine(sql, format, input, outEngine); err != nil {
			return nil, err
		}
		engine = append(engine, u)
	}
	diff, err := o.measureDiff(program, input, filepath.Join(outFolder, filepath.Base(input)))
	if err != nil {
		return nil, err
	}
	r := &result{diff: diff, format: format, rows: o.rows, inputBytes: info.Size(), workers: o.workers, runs: o.runs, bentray: summary(bentray)}
	if sql == nil {
		return r, nil
	}
	sum := summary(engine)
	r.engine = &sum
	if r.checkedRows, err = compareOutputs(sql, format, filepath.Join(outFolder, "survey."+format), outEngine); err != nil {
		return nil, err
	}
	if format == "parquet" {
		r.giants, err = o.measureGiants(program, sql)
	}
	return r, err
}

// runBentray corrects the survey into an empty folder.
func (o options) runBentray(program, job, outFolder string) (usage, error) {
	if err := os.RemoveAll(outFolder); err != nil {
		return usage{}, err
	}
	syscall.Sync()
	u, _, err := measure(exec.Command(program, "run", job, "--quiet", "--workers", strconv.Itoa(o.workers)))
	return u, err
}

// measureDiff compares the survey with its corrected cloud.
func (o options) measureDiff(program, input, output string) (*total, error) {
	var runs []usage
	for range o.runs {
		u, _, err := measure(exec.Command(program, "diff", input, output, "--quiet", "--workers", strconv.Itoa(o.workers)))
		if err != nil {
			return nil, err
		}
		runs = append(runs, u)
	}
	sum := summary(runs)
	return &sum, nil
}

// runEngine corrects the survey into a file that is not there yet.
func runEngine(sql *engine, format, input, output string) (usage, error) {
	if err := os.Remove(output); err != nil && !errors.Is(err, os.ErrNotExist) {
		return usage{}, err
	}
	syscall.Sync()
	return sql.run(task{Do: "correct", Format: format, Input: input, Output: output})
}

// sampleEvery is a prime, so that a sample falls on no rhythm of the data.
const sampleEvery = 997

// compareOutputs compares a sample of two outputs' rows. Of Parquet files the
// engine writes it as CSV.
func compareOutputs(sql *engine, format, a, b string) (int64, error) {
	if format == "csv" {
		return compare(a, b, sampleEvery)
	}
	folder := filepath.Dir(b)
	samples := []string{filepath.Join(folder, "sample-a.csv"), filepath.Join(folder, "sample-b.csv")}
	for i, path := range []string{a, b} {
		if _, err := sql.run(task{Do: "sample", Input: path, Output: samples[i], Every: sampleEvery}); err != nil {
			return 0, err
		}
	}
	return compare(samples[0], samples[1], 1)
}
