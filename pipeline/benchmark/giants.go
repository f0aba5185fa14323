package main

import (
	"fmt"
	"os"
	"path/filepath"
)

// giant is a Parquet survey of the same points, made for its memory: only
// bentray reads it.
type giant struct {
	name      string
	groupRows int64 // what the engine is asked for
}

// The engine stores a column of a row group as one page (up to 100 MB), so the
// size of the groups sets that of the pages too.
var giants = []giant{
	{"group", 5_000_000},
	{"pages", 1_000_000},
}

// leastPageValues is what makes pages giant.
const leastPageValues = 1_000_000

// giantResult is what bentray's runs on a giant came to.
type giantResult struct {
	shape      shape
	inputBytes int64
	total
}

func (o options) measureGiants(program string, sql *engine) ([]giantResult, error) {
	var results []giantResult
	for _, g := range giants {
		r, err := o.measureGiant(g, program, sql)
		if err != nil {
			return nil, err
		}
		results = append(results, r)
	}
	return results, nil
}

// measureGiant makes a giant, runs bentray on it and compares the output with
// that of the ordinary file.
func (o options) measureGiant(g giant, program string, sql *engine) (giantResult, error) {
	r, err := o.makeGiant(g, sql)
	if err != nil {
		return r, err
	}
	job, err := writeJob(o.dir, g.file(), g.name)
	if err != nil {
		return r, err
	}
	outFolder := filepath.Join(o.dir, "bentray-"+g.name)
	var runs []usage
	for range o.runs {
		u, err := o.runBentray(program, job, outFolder)
		if err != nil {
			return r, err
		}
		runs = append(runs, u)
	}
	r.total = summary(runs)
	ordinary := filepath.Join(o.dir, "bentray-parquet", "survey.parquet")
	_, err = compareOutputs(sql, "parquet", ordinary, filepath.Join(outFolder, g.file()))
	return r, err
}

func (g giant) file() string { return "survey-" + g.name + ".parquet" }

// makeGiant has the engine write the file and proves that it is a giant.
func (o options) makeGiant(g giant, sql *engine) (r giantResult, err error) {
	path := filepath.Join(o.dir, g.file())
	convert := task{Do: "convert", Input: filepath.Join(o.dir, "survey.csv"), Output: path, GroupRows: g.groupRows}
	if _, err := sql.run(convert); err != nil {
		return r, err
	}
	info, err := os.Stat(path)
	if err != nil {
		return r, err
	}
	r.inputBytes = info.Size()
	if r.shape, err = readShape(path); err != nil {
		return r, err
	}
	return r, g.check(path, r.shape, o.rows)
}

// check says where the engine made something smaller than the giant that is to
// be measured. A survey of fewer rows is as large as it can be.
func (g giant) check(path string, s shape, rows int64) error {
	if want := min(g.groupRows, rows); s.groupRows < want {
		return fmt.Errorf("%s: the largest row group has %d rows, want %d", path, s.groupRows, want)
	}
	if want := min(leastPageValues, rows); s.pageValues < want {
		return fmt.Errorf("%s: a column has no page beyond %d values, want %d", path, s.pageValues, want)
	}
	return nil
}
