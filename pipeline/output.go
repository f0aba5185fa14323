package pipeline

import (
	"crypto/sha256"
	"encoding/csv"
	"hash"
	"strconv"

	"bentray/io/atomicfile"
	"bentray/io/cloud"
)

// output is an output file that hashes what is written to it.
type output struct {
	*atomicfile.File
	hash  hash.Hash
	bytes int64
}

func createOutput(path string) (*output, error) {
	f, err := atomicfile.Create(path)
	if err != nil {
		return nil, err
	}
	return &output{File: f, hash: sha256.New()}, nil
}

// Write hashes and writes side by side: both are in the order of the file, and
// one after the other they would take longer than all the rest.
func (o *output) Write(p []byte) (int, error) {
	hashed := make(chan struct{})
	go func() {
		o.hash.Write(p)
		close(hashed)
	}()
	n, err := o.File.Write(p)
	<-hashed
	o.bytes += int64(n)
	return n, err
}

// rejects is the file of rows that could not be read.
type rejects struct {
	file *atomicfile.File
	csv  *csv.Writer
}

func (w *rewriting) putRejects(rows []cloud.Reject) error {
	if w.rejects == nil {
		f, err := atomicfile.Create(w.in.output + rejectsSuffix)
		if err != nil {
			return err
		}
		w.rejects = &rejects{f, csv.NewWriter(f)}
		if err := w.rejects.csv.Write([]string{"line", "reason", "text"}); err != nil {
			return err
		}
	}
	for _, row := range rows {
		if err := w.rejects.csv.Write([]string{strconv.FormatInt(row.Line, 10), row.Reason, string(row.Text)}); err != nil {
			return err
		}
	}
	return nil
}

func (r *rejects) commit() error {
	r.csv.Flush()
	if err := r.csv.Error(); err != nil {
		return err
	}
	return r.file.Commit()
}
