package quality

import (
	"errors"
	"fmt"
	"os"

	"bentray/io/cloud"
	"bentray/io/csvfile"
	"bentray/io/parquetfile"
	"bentray/pipeline"
)

// table is a file that is compared: it can show stored values.
type table interface {
	cloud.Rewriter
	Show(column int, stored []byte) string
}

// textOptions say what a file of text does not say itself.
type textOptions struct {
	names    []string // of the columns, where the first row may be none
	headless bool     // it is none
	passed   []int64  // lines of rows that were diverted
	divert   bool     // rows that cannot be read are no error
}

// openTable opens a file that is only read.
func openTable(path string, o textOptions) (table, error) {
	info, err := os.Stat(path)
	switch {
	case err != nil:
		return nil, callErrorf("%s: %w", path, plain(err))
	case !info.Mode().IsRegular():
		return nil, callErrorf("%s: is not a regular file", path)
	case parquetfile.IsName(path):
		return parquetfile.Open(path, parquetfile.Options{Coarse: true})
	case !csvfile.IsName(path):
		return nil, callErrorf("%s: unknown kind of file, want .parquet, or .csv .tsv .txt .xyz or .asc (these also with .gz or .zst)", path)
	}
	text := csvfile.Options{Divert: o.divert, Passed: o.passed}
	if o.headless {
		text.Names = o.names
	}
	f, err := csvfile.Open(path, text)
	if errors.Is(err, csvfile.ErrNoHeader) && o.names != nil {
		text.Names = o.names
		f, err = csvfile.Open(path, text)
	}
	if err != nil {
		return nil, err
	}
	return f, nil
}

// plain is a system's error without the path, which is named already.
func plain(err error) error {
	var system *os.PathError
	if errors.As(err, &system) {
		return system.Err
	}
	return err
}

func callErrorf(format string, args ...any) error {
	return &pipeline.CallError{Err: fmt.Errorf(format, args...)}
}
