package pipeline

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"bentray/io/cloud"
	"bentray/io/csvfile"
	"bentray/io/parquetfile"
	"bentray/pipeline/job"
)

// IsCloud tells whether a name is that of a cloud, not of a job.
func IsCloud(path string) bool { return csvfile.IsName(path) || parquetfile.IsName(path) }

// open opens a table in the format that its name tells.
func open(path string, csv csvfile.Options, parquet parquetfile.Options) (cloud.Rewriter, error) {
	if info, err := os.Stat(path); err == nil && !info.Mode().IsRegular() {
		return nil, fmt.Errorf("%s: is not a regular file", path)
	}
	switch {
	case csvfile.IsName(path):
		return csvfile.Open(path, csv)
	case parquetfile.IsName(path):
		return parquetfile.Open(path, parquet)
	}
	return nil, fmt.Errorf("%s: unknown kind of file %q, want .parquet, or .csv .tsv .txt .xyz or .asc (these also with .gz or .zst)", path, filepath.Ext(path))
}

// openTable opens a cloud of which nothing is known.
func openTable(path string) (cloud.Rewriter, error) {
	return open(path, csvfile.Options{}, parquetfile.Options{})
}

// openBeside opens a file that goes with the clouds of the job.
func (s *survey) openBeside(path string) (cloud.Rewriter, error) {
	return open(path, csvfile.Options{}, parquetfile.Options{Coarse: s.job.Input.Coarse})
}

// openCloud opens a cloud of the job. A Parquet output carries the settings that
// made it in its key-value metadata. The output is empty where nothing is written,
// for then its folder need not be there.
func (s *survey) openCloud(in input, output string) (cloud.Rewriter, error) {
	i := &s.job.Input
	text := csvfile.Options{Names: i.CSV.Names, Divert: i.BadRows == job.Divert}
	if s.proves != nil { // an output has a header and no bad rows
		text = csvfile.Options{}
	}
	file, err := open(in.path, text,
		parquetfile.Options{
			Coarse: i.Coarse, Unit: s.plan, Output: output, Version: Version,
			Metadata: map[string]string{"bentray.program": Program, "bentray.run": s.run, "bentray.job": string(s.settings)},
		})
	if errors.Is(err, csvfile.ErrNoHeader) {
		err = fmt.Errorf("%w; name the columns in [input.csv] names", err)
	}
	return file, err
}

// The coarsest steps of stored numbers that go into a correction, unless the job
// takes them: a FLOAT has 24 bits.
const (
	finestLength = 0.001 // m
	finestTime   = 0.001 // s; a sensor moves some centimetres in it
)

// checkLength refuses columns that hold no lengths by their type.
func checkLength(c cloud.Column) error {
	if isTimestamp(c) || c.Type == "BOOLEAN" {
		return fmt.Errorf("column %q is %s, want a length (DOUBLE, FLOAT, INT32 or INT64)", c.Name, c.Type)
	}
	return nil
}

// isTimestamp tells a column of dates and times, which are read as UTC seconds
// since 1970 whatever the scale of the job's numbers.
func isTimestamp(c cloud.Column) bool { return strings.Contains(c.Type, "TIMESTAMP") }

// isLocalTime tells a column of dates and times of which the file does not say that
// they are UTC.
func isLocalTime(c cloud.Column) bool { return isTimestamp(c) && strings.HasSuffix(c.Type, " local") }

// localTimeCaution says what is made of local times where they are read at all.
func localTimeCaution(c cloud.Column) string {
	return fmt.Sprintf("times in column %q are stored without a time zone (%s) and taken for UTC; store them as adjusted to UTC", c.Name, c.Type)
}

// cautionsOf returns what the file itself and its columns give cause to say, once it
// has begun.
func (s *survey) cautionsOf(file cloud.Rewriter, r *reading) []string {
	var cautions []string
	if f, ok := file.(*parquetfile.File); ok {
		cautions = append(cautions, f.Cautions()...)
	}
	if r.time >= 0 {
		if c := file.Columns()[r.request.Numbers[r.time]]; isLocalTime(c) {
			cautions = append(cautions, localTimeCaution(c))
		}
	}
	if g := s.surface.grid; r.time < 0 && g != nil && g.Stats().Patches > g.Stats().Cells {
		cautions = append(cautions, "the cloud has no times, so that surface points of all times, which show other waves in each pass, count together")
	}
	return cautions
}

// rowsOf returns how many rows a file says it has, where its format says so.
func rowsOf(file cloud.Rewriter) (rows int64, known bool) {
	if f, ok := file.(*parquetfile.File); ok {
		return f.Rows(), true
	}
	return 0, false
}
