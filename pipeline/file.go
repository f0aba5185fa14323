package pipeline

import (
	"context"
	"encoding/hex"
	"errors"
	"fmt"
	"io/fs"
	"os"

	"golang.org/x/sync/errgroup"

	"bentray/io/cloud"
	"bentray/pipeline/receipt"
)

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
func (r *runner) rewrite(ctx context.Context, in input) (*finished, error) {
	before, err := os.Stat(in.path)
	if err != nil {
		return nil, inFile(in.path, err)
	}
	file, err := r.openCloud(in, in.output)
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
	done, err := w.commit(whole)
	if err != nil {
		return nil, err
	}
	return &finished{done, before.ModTime()}, nil
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
	if err := w.correctChunk(&s.chunk, w.read, w.layout, &s.work, s.tally); err != nil {
		return err
	}
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
func (w *rewriting) commit(whole receipt.Input) (*receipt.Receipt, error) {
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
		Outcomes: w.tally.counts(), Sensors: w.tally.bySensor(w.survey), Ranges: w.tally.ranges(w.survey), Cautions: append(w.tally.cautions(w.survey), w.cautionsOf(w.file, w.read)...),
	}
	r.Cautions = append(r.Cautions, rowCautions(r)...)
	return r, r.Write(w.in.output)
}

// rowCautions are those that a receipt's own counts give.
func rowCautions(r *receipt.Receipt) (cautions []string) {
	if r.RowsWritten == 0 {
		cautions = append(cautions, "the file holds no points")
	}
	if r.RowsDiverted > 0 {
		cautions = append(cautions, fmt.Sprintf("%d of %d rows could not be read and were diverted to %s%s", r.RowsDiverted, r.RowsRead, r.Output.Path, rejectsSuffix))
	}
	return cautions
}
