package pipeline

import (
	"context"
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io/fs"
	"os"
	"strconv"

	"golang.org/x/sync/errgroup"

	"bentray/io/atomicfile"
	"bentray/io/cloud"
	"bentray/io/csvfile"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// openCloud opens a cloud in its format.
func (s *survey) openCloud(path string) (cloud.Rewriter, error) {
	if err := checkFormat(path); err != nil {
		return nil, err
	}
	return csvfile.Open(path, csvfile.Options{Names: s.job.Input.CSV.Names, Divert: s.job.Input.BadRows == job.Divert})
}

// rewriting is one file on its way to its output.
type rewriting struct {
	*survey
	in      input
	file    cloud.Rewriter
	read    *reading
	layout  *layout
	output  *output
	rejects *rejects
	tally   *tally
	rows    receipt.Rows
}

// rewrite corrects one file and leaves its output and receipt, or neither.
func (r *runner) rewrite(ctx context.Context, in input) (*receipt.Receipt, error) {
	before, err := os.Stat(in.path)
	if err != nil {
		return nil, inFile(in.path, err)
	}
	file, err := r.openCloud(in.path)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	w := &rewriting{survey: r.survey, in: in, file: file, tally: newTally()}
	if err := w.begin(); err != nil {
		return nil, inFile(in.path, err)
	}
	defer w.discard()

	whole := receipt.Input{Use: "cloud", File: receipt.File{Path: in.name}}
	g, ctx := errgroup.WithContext(ctx)
	g.Go(func() (err error) {
		whole.Bytes, whole.SHA256, err = receipt.Hash(ctx, in.path)
		return err
	})
	g.Go(func() error {
		return r.engine.flow(ctx, file, w.work, func(s *slot) error {
			r.watch.Read(s.chunk.Consumed)
			return w.put(s)
		})
	})
	if err := g.Wait(); err != nil {
		return nil, inFile(in.path, err)
	}
	if err := unchanged(in.path, before); err != nil {
		return nil, err
	}
	return w.commit(whole, before)
}

// begin finds the columns, lays out the output and opens it.
func (w *rewriting) begin() (err error) {
	columns := w.file.Columns()
	if w.read, err = newReading(w.survey, columns); err != nil {
		return err
	}
	if w.layout, err = newLayout(w.survey, columns, w.read); err != nil {
		return err
	}
	if w.output, err = createOutput(w.in.output); err != nil {
		return err
	}
	if err = w.file.Begin(w.read.request, w.layout.Layout, w.output); err != nil {
		w.discard()
	}
	return err
}

func (w *rewriting) discard() {
	w.output.Discard()
	if w.rejects != nil {
		w.rejects.file.Discard()
	}
}

// work is what is done to chunks side by side.
func (w *rewriting) work(s *slot) error {
	if err := w.file.Decode(&s.chunk); err != nil {
		return err
	}
	s.tally = newTally()
	w.correctChunk(&s.chunk, w.read, w.layout, &s.work, s.tally)
	return w.file.Encode(&s.chunk)
}

// put is what is done to chunks in their order.
func (w *rewriting) put(s *slot) error {
	w.tally.join(s.tally)
	w.rows.Written += int64(s.chunk.Rows)
	w.rows.Diverted += int64(len(s.chunk.Rejects))
	w.rows.Read += int64(s.chunk.Rows + len(s.chunk.Rejects))
	if len(s.chunk.Rejects) > 0 {
		if err := w.putRejects(s.chunk.Rejects); err != nil {
			return err
		}
	}
	return w.file.Put(&s.chunk)
}

// commit gives the output its name, and then its receipt. An older receipt goes
// first, so that there is never a receipt of another output.
func (w *rewriting) commit(whole receipt.Input, info fs.FileInfo) (*receipt.Receipt, error) {
	if err := w.file.Finish(); err != nil {
		return nil, inFile(w.in.path, err)
	}
	for _, old := range []string{w.in.output + receipt.Suffix, w.in.output + rejectsSuffix} {
		if err := os.Remove(old); err != nil && !errors.Is(err, fs.ErrNotExist) {
			return nil, err
		}
	}
	if w.rejects != nil {
		if err := w.rejects.commit(); err != nil {
			return nil, err
		}
	}
	if err := w.output.Commit(); err != nil {
		return nil, err
	}
	r := &receipt.Receipt{
		Run: w.run, Program: Program, Job: w.settings,
		Inputs:   append([]receipt.Input{whole}, w.auxiliary...),
		Output:   receipt.File{Path: w.in.target, Bytes: w.output.bytes, SHA256: hex.EncodeToString(w.output.hash.Sum(nil))},
		RowsRead: w.rows.Read, RowsWritten: w.rows.Written, RowsDiverted: w.rows.Diverted,
		Outcomes: w.tally.counts(), Ranges: w.tally.ranges(w.survey), Cautions: w.tally.cautions(w.survey),
	}
	if w.rows.Diverted > 0 {
		r.Cautions = append(r.Cautions, fmt.Sprintf("%d rows could not be read and were diverted to %s%s", w.rows.Diverted, w.in.target, rejectsSuffix))
	}
	if err := r.Write(w.in.output); err != nil {
		return nil, err
	}
	return r, stamp(w.in.output, info)
}

// unchanged refuses a file that was changed while it was read.
func unchanged(path string, before fs.FileInfo) error {
	after, err := os.Stat(path)
	if err != nil {
		return inFile(path, err)
	}
	if after.Size() != before.Size() || !after.ModTime().Equal(before.ModTime()) {
		return fmt.Errorf("%s: changed while it was read; run again when it is complete", path)
	}
	return nil
}

// A receipt's own file time is that of the input it speaks of. So a later run
// knows an unchanged input by size and time, and hashes it only where they differ.
func stamp(output string, input fs.FileInfo) error {
	return os.Chtimes(output+receipt.Suffix, input.ModTime(), input.ModTime())
}

// fresh returns the receipt of an output that needs no doing: it is there, made
// with the same settings from the same input. Otherwise nil.
func (s *survey) fresh(ctx context.Context, in input) (*receipt.Receipt, error) {
	r, err := receipt.Read(in.output)
	if err != nil || r.Run != s.run || r.Program != Program || len(r.Inputs) == 0 || r.Inputs[0].Path != in.name {
		return nil, nil // no receipt that helps: do the file
	}
	if !hasSize(in.output, r.Output.Bytes) || (r.RowsDiverted > 0) != exists(in.output+rejectsSuffix) {
		return nil, nil
	}
	info, err := os.Stat(in.path)
	if err != nil {
		return nil, inFile(in.path, err)
	}
	stamped, err := os.Stat(in.output + receipt.Suffix)
	if err != nil || r.Inputs[0].Bytes != info.Size() {
		return nil, nil
	}
	if stamped.ModTime().Equal(info.ModTime()) {
		return r, nil
	}
	_, sum, err := receipt.Hash(ctx, in.path)
	if err != nil || sum != r.Inputs[0].SHA256 {
		return nil, err
	}
	return r, stamp(in.output, info)
}

func exists(path string) bool {
	_, err := os.Stat(path)
	return err == nil
}

func hasSize(path string, bytes int64) bool {
	info, err := os.Stat(path)
	return err == nil && info.Size() == bytes
}

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

func (o *output) Write(p []byte) (int, error) {
	n, err := o.File.Write(p)
	o.hash.Write(p[:n])
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
