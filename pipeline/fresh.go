package pipeline

import (
	"context"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"bentray/io/cloud"
	"bentray/pipeline/receipt"
)

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

// finished is an output that stands, and when its input was last changed.
type finished struct {
	*receipt.Receipt
	modified time.Time
}

// history is what the summaries in the output folder know of inputs, by output.
// An input of known size and time of change has the contents of then: it need
// not be hashed again.
type history map[string][]receipt.FileSummary

// readHistory reads the summaries that stand in the output folder. One that
// cannot be read only costs hashing.
func readHistory(folder string) history {
	known := history{}
	paths, err := filepath.Glob(filepath.Join(escapeGlob(folder), summaryPattern))
	if err != nil {
		return known
	}
	for _, path := range paths {
		if s, err := receipt.ReadSummary(path); err == nil {
			for _, f := range s.Files {
				known[f.Output] = append(known[f.Output], f)
			}
		}
	}
	return known
}

// has tells whether an input of this size and time had these contents.
func (h history) has(target string, info fs.FileInfo, sum string) bool {
	return slices.ContainsFunc(h[target], func(f receipt.FileSummary) bool {
		return f.InputSHA256 == sum && f.InputBytes == info.Size() && f.InputModified.Equal(info.ModTime())
	})
}

// fresh returns the output of an input if it needs no doing: it is there, made
// with the same settings from the same contents. Otherwise nil.
func (s *survey) fresh(ctx context.Context, in input, known history) (*finished, error) {
	r, err := receipt.Read(in.output)
	if err != nil || r.Run != s.run || len(r.Inputs) == 0 || r.Inputs[0].Path != in.name {
		return nil, nil // no receipt that helps: do the file
	}
	if !hasSize(in.output, r.Output.Bytes) || (r.RowsDiverted > 0) != exists(in.output+rejectsSuffix) {
		return nil, nil
	}
	info, err := os.Stat(in.path)
	if err != nil {
		return nil, inFile(in.path, err)
	}
	raw := r.Inputs[0]
	if raw.Bytes != info.Size() {
		return nil, nil
	}
	if !known.has(in.target, info, raw.SHA256) {
		_, sum, err := receipt.Hash(ctx, in.path)
		if err != nil || sum != raw.SHA256 {
			return nil, err
		}
	}
	return &finished{r, info.ModTime()}, nil
}

func exists(path string) bool {
	_, err := os.Stat(path)
	return err == nil
}

func hasSize(path string, bytes int64) bool {
	info, err := os.Stat(path)
	return err == nil && info.Size() == bytes
}

// hasReceipt tells an output, or the rejects of one, by the receipt beside it.
func hasReceipt(path string) bool {
	return exists(strings.TrimSuffix(path, rejectsSuffix) + receipt.Suffix)
}

// isOwn tells a file that bentray wrote: by its receipt or, where a run was
// killed between the two, by its columns.
func isOwn(path string) bool {
	if hasReceipt(path) {
		return true
	}
	f, err := openTable(path)
	if err != nil {
		return false
	}
	defer f.Close()
	columns := f.Columns()
	n := len(columns)
	return n > 1 && columns[n-1].Name == "run" && slices.ContainsFunc(columns, func(c cloud.Column) bool { return c.Name == "outcome" })
}
