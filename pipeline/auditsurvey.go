package pipeline

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"bentray/correct"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// proof is what the outputs of one run are proven by.
type proof struct {
	survey *survey  // nil: their points cannot be recomputed
	faults []string // what does not hold for all of them
}

func (p *proof) fault(format string, args ...any) {
	p.faults = append(p.faults, fmt.Sprintf(format, args...))
}

// prepare makes what an output was made with again, from its receipt.
func (a *auditor) prepare(ctx context.Context, o auditOutput) *proof {
	p := &proof{}
	r, err := receipt.Read(o.path)
	if err != nil {
		p.fault("the receipt cannot be read: %v", err)
		return p
	}
	if !p.knows(r) {
		return p
	}
	folder, tried := a.jobFolder(o.root, r)
	j, err := job.FromSettings("receipt", folder, r.Job)
	if err != nil {
		p.unproven(err, "the settings are not those of a job")
		return p
	}
	var clouds []input
	if g := j.Surface.Grid; g != nil && g.Classes != nil {
		clouds = outputsOf(o.root, r.Run)
	}
	s := newSurvey(j, Options{Workers: a.workers, Watch: a.watch})
	s.proves = r
	if err := s.read(ctx, clouds); err != nil {
		p.unproven(err, adviceOn(r, o.root, len(clouds), tried))
		return p
	}
	if named := r.Auxiliary(); len(named) != len(s.auxiliary) {
		p.fault("the receipt names %d auxiliary files, want %d for its settings", len(named), len(s.auxiliary))
	}
	p.survey = s
	return p
}

// knows checks by what program and calculation a receipt's outputs were made, and tells
// whether it is this one.
func (p *proof) knows(r *receipt.Receipt) bool {
	if len(r.Inputs) == 0 || r.Inputs[0].Use != "cloud" {
		p.fault("the receipt does not name the raw cloud as its first input")
		return false
	}
	if name, _, _ := strings.Cut(Program, " "); !strings.HasPrefix(r.Program, name+" ") {
		p.fault("the receipt's program is %q, want %s and its version", r.Program, name)
	}
	made, run := calculationOf(r)
	switch {
	case made == correct.Version:
		return true
	case made > 0:
		p.fault("%s calculated by version %d, and %s calculates by version %d: its points are not recomputed; audit it by a program of its version, or run the job again", r.Program, made, Program, correct.Version)
		return false
	}
	p.fault("the receipt's run is %.12s, want %.12s for its settings and auxiliary files: one of them was changed", r.Run, run)
	return true
}

// calculationOf finds the version of the calculation that gives a receipt its run, 0 for
// none; run is that of this version.
func calculationOf(r *receipt.Receipt) (version int, run string) {
	const ahead = 100
	for v := correct.Version + ahead; v > 0; v-- {
		got, err := receipt.Fingerprint(r.Job, r.Auxiliary(), v)
		if err != nil {
			return 0, ""
		}
		if v == correct.Version {
			run = got
		}
		if got == r.Run {
			return v, run
		}
	}
	return 0, run
}

// unproven notes why points cannot be recomputed, and what to do.
func (p *proof) unproven(err error, advice string) {
	p.faults = append(p.faults, strings.Split(err.Error(), "\n")...)
	p.fault("so its points are not recomputed: %s", advice)
}

func adviceOn(r *receipt.Receipt, root string, clouds int, tried []string) string {
	advice := "put the auxiliary files of that run back"
	if len(tried) > 0 {
		advice += fmt.Sprintf(" (receipts name them from the job file's folder, taken to be %s; --base names another)", strings.Join(tried, " or "))
	}
	if slices.ContainsFunc(r.Auxiliary(), func(in receipt.Input) bool { return in.Use == surfacePoints }) {
		advice += fmt.Sprintf("; surface points come from all outputs of the run, of which %d are below %s", clouds, root)
	}
	return advice
}

// jobFolder is where the job file was: as told, else as the run's summary has it, else
// above the output folder; the first that has the auxiliary files. They are tried.
func (a *auditor) jobFolder(root string, r *receipt.Receipt) (folder string, tried []string) {
	if tried = []string{a.base}; a.base == "" {
		tried = summaryFolders(root, r.Run)
		if above := filepath.Join(root, ".."); !slices.Contains(tried, above) {
			tried = append(tried, above)
		}
	}
	for _, folder := range tried {
		if hasAuxiliary(folder, r) {
			return folder, tried
		}
	}
	return tried[0], tried
}

// summaryFolders lists the job file's folders that a run's summaries tell.
func summaryFolders(root, run string) (folders []string) {
	paths, err := filepath.Glob(filepath.Join(escapeGlob(root), summaryPattern))
	if err != nil {
		return nil
	}
	for _, path := range paths {
		s, err := receipt.ReadSummary(path)
		if err != nil || s.Run != run || s.Job == "" {
			continue
		}
		folder := filepath.Dir(filepath.FromSlash(s.Job))
		if !filepath.IsAbs(folder) {
			folder = filepath.Join(root, folder)
		}
		if !slices.Contains(folders, folder) {
			folders = append(folders, folder)
		}
	}
	return folders
}

// hasAuxiliary tells whether all auxiliary files that a receipt names are there.
func hasAuxiliary(folder string, r *receipt.Receipt) bool {
	j := job.Job{Dir: folder}
	for _, in := range r.Auxiliary() {
		if _, err := os.Stat(j.Resolve(filepath.FromSlash(in.Path))); err != nil && in.Use != surfacePoints {
			return false
		}
	}
	return true
}

// matchInput refuses an auxiliary file that is not the one which a receipt names.
func matchInput(r *receipt.Receipt, use string, f receipt.File) error {
	for _, in := range r.Auxiliary() {
		switch {
		case in.Use != use || in.Path != f.Path:
		case in.SHA256 != f.SHA256 || in.Bytes != f.Bytes:
			return fmt.Errorf("is %d bytes with sha256 %.12s, want %d bytes with %.12s as in the receipt: it was changed", f.Bytes, f.SHA256, in.Bytes, in.SHA256)
		default:
			return nil
		}
	}
	return fmt.Errorf("is not among the auxiliary files of the receipt (%s)", use)
}
