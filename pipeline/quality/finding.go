package quality

import (
	"fmt"
	"maps"
	"slices"
)

// Kinds of findings.
const (
	KindChanged  = "changed"  // a value that should be as it was
	KindDropped  = "dropped"  // a raw row that is not there any more
	KindDoubled  = "doubled"  // a row that is there once more
	KindInserted = "inserted" // a row that the raw cloud does not have
	KindSwapped  = "swapped"  // two rows in each other's place
	KindColumn   = "column"   // a column missing, added, renamed, moved or of another type
	KindMoved    = "moved"    // coordinates that do not agree with the point's own columns
	KindReceipt  = "receipt"  // the receipt counts otherwise
	KindRejects  = "rejects"  // rows diverted that are not as NAME.rejects.csv has them
	KindFile     = "file"     // a file without its partner, or one that cannot be compared
)

// Finding is one place where a comparison does not hold.
type Finding struct {
	File   string `json:"file"` // as below the folder
	Kind   string `json:"kind"`
	RawRow int64  `json:"raw_row,omitempty"` // from 1, header not counted; 0: none
	Row    int64  `json:"row,omitempty"`     // of the corrected file, likewise
	Column string `json:"column,omitempty"`
	Got    string `json:"got,omitempty"`
	Want   string `json:"want,omitempty"`
	Text   string `json:"text"` // what is wrong, without the file
}

func (f Finding) String() string { return f.File + ": " + f.Text }

// maxFindings is how many findings of a file, and of all, are kept; all are counted.
const maxFindings = 20

// findings gathers what is wrong with one file.
type findings struct {
	file    string
	list    []Finding
	counts  map[string]int64
	changed map[string]bool // columns
}

func newFindings(file string) *findings {
	return &findings{file: file, counts: map[string]int64{}, changed: map[string]bool{}}
}

// add counts a finding and keeps it if it is among the first.
func (f *findings) add(d Finding) {
	f.counts[d.Kind]++
	if len(f.list) < maxFindings {
		d.File = f.file
		f.list = append(f.list, d)
	}
}

func (f *findings) addf(kind, format string, args ...any) {
	f.add(Finding{Kind: kind, Text: fmt.Sprintf(format, args...)})
}

// isFull tells whether another finding would be counted only.
func (f *findings) isFull() bool { return len(f.list) >= maxFindings }

// join adds a file's findings to those of all.
func (r *Report) join(f *findings) {
	for kind, n := range f.counts {
		r.FindingCounts[kind] += n
	}
	r.Findings = append(r.Findings, f.list[:min(len(f.list), maxFindings-min(len(r.Findings), maxFindings))]...)
	for _, name := range slices.Sorted(maps.Keys(f.changed)) {
		if !slices.Contains(r.ColumnsChanged, name) {
			r.ColumnsChanged = append(r.ColumnsChanged, name)
		}
	}
}
