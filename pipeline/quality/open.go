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

// openTable opens a file that is only read; names are its columns where it may have
// no header, passed the lines of CSV rows that were diverted.
func openTable(path string, names []string, passed []int64) (table, error) {
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
	f, err := csvfile.Open(path, csvfile.Options{Divert: names != nil, Passed: passed})
	if errors.Is(err, csvfile.ErrNoHeader) && names != nil {
		f, err = csvfile.Open(path, csvfile.Options{Names: names, Divert: true, Passed: passed})
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
