package quality

import (
	"cmp"
	"context"
	"math"
	"runtime"

	"golang.org/x/sync/errgroup"

	"bentray/pipeline"
	"bentray/pipeline/receipt"
)

// Options of a comparison. The zero value compares two clouds without check points.
type Options struct {
	Check   string  // file of check points, with columns x, y, z; empty: none
	Reach   float64 // within which a check point is matched, in the clouds' unit; 0: 0.5 m
	Match   string  // MatchPlane or MatchNearest; empty: MatchPlane
	Overlap bool    // compare flight lines, in cells twice as wide as the reach, or wider where points are thin
	Workers int     // files in work at once; 0: one a processor
	Watch   pipeline.Watcher
}

// defaultReach is that of check points, m.
const defaultReach = 0.5

// Validate says what is wrong with the options, as a *pipeline.CallError.
func (o *Options) Validate() error {
	switch {
	case !(o.Reach >= 0) || math.IsInf(o.Reach, 0):
		return callErrorf("--reach is %g, want a length above 0", o.Reach)
	case o.Match != "" && o.Match != MatchPlane && o.Match != MatchNearest:
		return callErrorf("--match is %q, want plane or nearest", o.Match)
	case o.Workers < 0:
		return callErrorf("--workers is %d, want 0 or more", o.Workers)
	}
	return nil
}

// shared is what the comparisons of all files share.
type shared struct {
	units
	check *matcher // nil without check points
	lines bool     // flight lines are compared
	side  float64  // of their cells
	watch pipeline.Watcher
}

// Diff compares a raw cloud with its corrected one, or two corrected clouds of one raw
// cloud, or folders of them. Whatever is wrong with the clouds is in the report, which
// then does not hold; in folders, so is a file that cannot be compared.
//
// Errors: a *pipeline.CallError where the call makes no sense (no such file, no output
// of bentray, no flight lines, check points in degrees), the context's, and, where no
// file could be compared, why.
func Diff(ctx context.Context, raw, corrected string, o Options) (*Report, error) {
	if err := o.Validate(); err != nil {
		return nil, err
	}
	pairs, without, err := findPairs(raw, corrected)
	if err != nil {
		return nil, err
	}
	u, err := readUnits(pairs)
	if err != nil {
		return nil, err
	}
	r := newReport(raw, corrected, u)
	s := &shared{units: u, lines: o.Overlap, watch: o.Watch}
	if s.watch == nil {
		s.watch = silent{}
	}
	reach := cmp.Or(o.Reach, defaultReach/u.metres)
	s.side = 2 * reach
	if o.Check != "" {
		if err := s.readCheck(r, o, reach); err != nil {
			return nil, err
		}
	}
	return r, r.run(ctx, s, pairs, without, cmp.Or(o.Workers, runtime.GOMAXPROCS(0)))
}

// readCheck reads the check points and begins their report.
func (s *shared) readCheck(r *Report, o Options, reach float64) error {
	x, y, z, ignored, err := readCheck(o.Check)
	if err != nil {
		return &pipeline.CallError{Err: err}
	}
	match := cmp.Or(o.Match, MatchPlane)
	s.check = newMatcher(newCheckIndex(x, y, z, reach), match)
	r.Check = &CheckReport{File: o.Check, Match: match, Reach: Number(reach), Ignored: ignored}
	return nil
}

// newFigures makes empty ones.
func (s *shared) newFigures() *figures {
	f := newFigures(s.check, nil)
	if s.lines {
		f.overlap = newOverlap(s.side)
	}
	return f
}

// run compares all pairs, as many at once as there are workers, and joins the results
// in the order of the files, so that the figures do not depend on the workers.
func (r *Report) run(ctx context.Context, s *shared, pairs []filePair, without []Finding, workers int) error {
	for _, f := range without {
		r.FindingCounts[f.Kind]++
		if len(r.Findings) < maxFindings {
			r.Findings = append(r.Findings, f)
		}
	}
	s.watch.Begin("", len(pairs), totalBytes(pairs))
	all := s.newFigures()
	turns := make([]chan struct{}, len(pairs)+1) // turn i ends with the file before i
	for i := range turns {
		turns[i] = make(chan struct{})
	}
	close(turns[0])
	var first error
	compared := 0
	var g errgroup.Group
	g.SetLimit(workers)
	for i, pair := range pairs {
		g.Go(func() error {
			d := &fileDiff{
				pair: pair, number: uint64(i), o: s, report: FileReport{Name: pair.name}, findings: newFindings(pair.name), figures: s.newFigures(),
			}
			err := d.diff(ctx)
			<-turns[i]
			defer close(turns[i+1])
			if err == nil {
				compared++
			} else if first == nil {
				first = err
			}
			r.take(d, all, err)
			return nil
		})
	}
	_ = g.Wait() // files report to r
	if err := ctx.Err(); err != nil {
		return err
	}
	if compared == 0 && first != nil {
		return first
	}
	r.finish(s, all)
	return nil
}

func totalBytes(pairs []filePair) (bytes int64) {
	for _, p := range pairs {
		bytes += p.bytes
	}
	return bytes
}

type silent struct{}

func (silent) Begin(string, int, int64) {}
func (silent) Read(int64)               {}
func (silent) End(receipt.FileSummary)  {}
