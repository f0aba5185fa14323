package quality

import (
	"fmt"
	"slices"

	"bentray/pipeline/receipt"
)

// newReport is empty; its lists are there, so that JSON has no null for them.
func newReport(raw, corrected string, u units) *Report {
	return &Report{
		Raw: raw, Corrected: corrected, Unit: u.plan, VerticalUnit: u.height, UnitKnown: u.known,
		ColumnsChanged: []string{}, NotCompared: []string{}, OneSided: []string{}, Findings: []Finding{}, FindingCounts: map[string]int64{},
		Files: []FileReport{}, Settings: []Setting{}, ByDepth: []DepthBand{}, ByIncidence: []IncidenceBand{}, Notes: []string{}, Cautions: []string{},
	}
}

// take adds what a file's comparison found; err is why it ended early.
func (r *Report) take(d *fileDiff, all *figures, err error) {
	f := receipt.FileSummary{Input: d.pair.raw, Output: d.pair.name, Status: receipt.Done, Rows: receipt.Rows{Read: d.report.RowsRaw, Written: d.report.Rows, Diverted: d.report.RowsDiverted}}
	if err != nil {
		d.report.Error = err.Error()
		f.Status, f.Error = receipt.Failed, err.Error()
		d.findings.addf(KindFile, "cannot be compared: %s", err)
	}
	r.join(d.findings)
	d.report.Holds = len(d.findings.counts) == 0
	r.provenance(d)
	r.Files = append(r.Files, d.report)
	r.Rows += d.report.Rows
	r.RowsRaw += d.report.RowsRaw
	r.RowsDiverted += d.report.RowsDiverted
	if n := d.unproven(); n > 0 {
		r.Notes = append(r.Notes, fmt.Sprintf("%s: %d rows were diverted for the cameras that they name, which are not looked at here", d.report.Name, n))
	}
	r.TwoCorrected = r.TwoCorrected || d.from != nil
	for _, name := range d.oneSided {
		if !slices.Contains(r.OneSided, name) {
			r.OneSided = append(r.OneSided, name)
		}
	}
	for _, name := range d.opaque {
		if !slices.Contains(r.NotCompared, name) {
			r.NotCompared = append(r.NotCompared, name)
		}
	}
	if err == nil {
		all.join(d.figures)
	}
	d.o.watch.Read(d.pair.bytes - d.read)
	d.o.watch.End(f)
}

// provenance takes what a file's receipt says.
func (r *Report) provenance(d *fileDiff) {
	if d.made == nil {
		return
	}
	d.report.Run, d.report.OutputSHA256 = d.made.Run, d.made.Output.SHA256
	auxiliary := []receipt.Input{}
	if inputs := d.made.Inputs; len(inputs) > 0 {
		d.report.InputSHA256 = inputs[0].SHA256
		auxiliary = inputs[1:]
	}
	i := slices.IndexFunc(r.Settings, func(s Setting) bool { return s.Run == d.made.Run })
	if i < 0 {
		i = len(r.Settings)
		r.Settings = append(r.Settings, Setting{Run: d.made.Run, Program: d.made.Program, Job: d.made.Job, Auxiliary: auxiliary, Ranges: map[string][2]float64{}})
	}
	r.Settings[i].take(d.made.Ranges)
	for _, caution := range d.made.Cautions {
		r.caution(caution)
	}
}

// take adds a file's ranges.
func (s *Setting) take(ranges map[string][2]float64) {
	s.Files++
	for name, r := range ranges {
		if all, found := s.Ranges[name]; found {
			r = [2]float64{min(all[0], r[0]), max(all[1], r[1])}
		}
		s.Ranges[name] = r
	}
}

// maxCautions bounds what a report repeats of receipts.
const maxCautions = 50

func (r *Report) caution(text string) {
	if len(r.Cautions) < maxCautions && !slices.Contains(r.Cautions, text) {
		r.Cautions = append(r.Cautions, text)
	}
}

// cautionOnUse ends every report.
const cautionOnUse = "for mapping work, not for navigation, diving or construction; charting and safety of life need licensed hydrographic practice and the local authority's rules"

// finish makes the figures of all files.
func (r *Report) finish(s *shared, all *figures) {
	r.Holds = len(r.FindingCounts) == 0
	all.report(r)
	if r.Check != nil {
		reportCheck(r.Check, all.check, all.depth, s.metres, s.metreZ)
	}
	if s.lines {
		r.Overlap = &OverlapReport{}
		all.overlap.report(r.Overlap)
	}
	r.note(all)
	r.caution(cautionOnUse)
}

// note says what is missing, and why.
func (r *Report) note(all *figures) {
	say := func(format string, args ...any) { r.Notes = append(r.Notes, fmt.Sprintf(format, args...)) }
	if !r.UnitKnown {
		say("there is no receipt beside the corrected cloud: its lengths are taken for metres")
	}
	if all.all.count == 0 {
		say("no point was corrected, or none has coordinates: there are no figures of a shift")
		return
	}
	if all.noLevel {
		say("there is no column water_level, the output is lean: the level is taken for depth plus height, and depths are not checked by it")
	}
	if all.noDepth > 0 {
		say("%d corrected points have no depth: they are in no band of depth", all.noDepth)
	}
	if len(r.ByIncidence) == 0 {
		say("no incidence is known: the output is lean, or its model has none")
	}
	if all.unpaired > 0 {
		say("%d rows are corrected in one of the two clouds alone: they are in no figure of the shift", all.unpaired)
	}
}
