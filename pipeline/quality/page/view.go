package page

import (
	"cmp"
	"fmt"
	"html/template"
	"maps"
	"math"
	"slices"

	"bentray/pipeline/picture"
	"bentray/pipeline/quality"
)

// What lists hold at most; of what is more the page tells the number.
const (
	mostFiles    = 100
	mostSettings = 5
)

// view is what the template takes: the report, and what is made of it.
type view struct {
	*quality.Report
	Style    template.CSS
	Outcomes []outcomeRow
	Made     []made // how the clouds were corrected, the first settings
	Listed   []quality.FileReport
	Orders   []orderRow
	Kinds    []kindRow
}

func newView(r *quality.Report) *view {
	v := &view{Report: r, Style: template.CSS(style), Outcomes: outcomeRows(r), Listed: r.Files[:min(len(r.Files), mostFiles)], Kinds: kindRows(r)}
	for _, s := range r.Settings[:min(len(r.Settings), mostSettings)] {
		v.Made = append(v.Made, newMade(s))
	}
	if r.Check != nil && r.Check.Count > 0 {
		v.Orders = orderRows(r)
	}
	return v
}

// MoreFiles and MoreSettings are how many are not listed.
func (v *view) MoreFiles() int    { return len(v.Files) - len(v.Listed) }
func (v *view) MoreSettings() int { return len(v.Settings) - len(v.Made) }

// Sampled says whether not all cells were looked at for differences of flight lines.
func (v *view) Sampled() bool { return v.Overlap.Share < 1 }

// figure is a picture with what it shows.
type figure struct {
	SVG     template.HTML
	Caption string
}

func newFigure(svg picture.SVG, caption string) *figure {
	return &figure{template.HTML(svg), caption} // of numbers and words of the program alone
}

// Corrected is how many points were corrected.
func (v *view) Corrected() int64 { return v.Report.Outcomes["corrected"] }

// MapFigure is the map of the shift, nil where there is none.
func (v *view) MapFigure() *figure {
	if v.Map == nil {
		return nil
	}
	return newFigure(picture.ShiftMap(v.Report), mapCaption(v.Report))
}

// SectionFigures are the sections.
func (v *view) SectionFigures() (list []*figure) {
	for i := range v.Sections {
		list = append(list, newFigure(picture.Section(v.Report, i), sectionCaption(v.Report, i)))
	}
	return list
}

// DepthFigure, IncidenceFigure and ShiftFigure are nil where nothing is known.
func (v *view) DepthFigure() *figure {
	if len(v.ByDepth) == 0 {
		return nil
	}
	return newFigure(picture.ShiftByDepth(v.Report), "Mean shift of the points in each band of depth (left); how many points lie at which depth (right).")
}

// IncidenceFigure is the shift by incidence.
func (v *view) IncidenceFigure() *figure {
	if len(v.ByIncidence) == 0 {
		return nil
	}
	return newFigure(picture.ShiftByIncidence(v.Report), "Mean shift by the angle between ray and surface normal: as it is, and relative to the mean depth of each band, which takes out that some angles see deeper water.")
}

// ShiftFigure is the histograms of the shift.
func (v *view) ShiftFigure() *figure {
	if v.Histograms.DZ == nil && v.Histograms.DH == nil {
		return nil
	}
	return newFigure(picture.ShiftHistograms(v.Report), "How many points moved how far, in height (left) and in plan (right).")
}

// CheckFigure is the errors at check points, nil where none has a depth.
func (v *view) CheckFigure() *figure {
	if v.Check == nil || !slices.ContainsFunc(v.Check.Points, func(p quality.CheckPoint) bool { return !math.IsNaN(p.Residual + p.Depth) }) {
		return nil
	}
	return newFigure(picture.CheckErrors(v.Report), "Error of the corrected cloud at each check point. Left: with the limits of the S-44 orders, and the share of check points within each. Right: the same points magnified, with their mean and the slope against depth.")
}

// OverlapFigure is the differences of flight lines, nil where there are none.
func (v *view) OverlapFigure() *figure {
	if v.Overlap == nil || len(v.Overlap.ByDepth)+len(v.Overlap.ByIncidence) == 0 {
		return nil
	}
	return newFigure(picture.Overlap(v.Report), "Differences of two flight lines in the same cell: their mean, and what 95 % of their magnitudes do not exceed.")
}

// outcomeRow is one outcome with its meaning.
type outcomeRow struct {
	Name, Meaning string
	Count, First  int64 // First: of the first of two corrected clouds
	Share         quality.Number
}

// Width is that of the bar, in percent.
func (o outcomeRow) Width() string { return fmt.Sprintf("%.1f", 100*float64(o.Share)) }

// outcomeRows orders outcomes by count, the greatest first.
func outcomeRows(r *quality.Report) []outcomeRow {
	var total int64
	names := map[string]bool{}
	for name, n := range r.Outcomes {
		names[name] = true
		total += n
	}
	for name := range r.OutcomesRaw {
		names[name] = true
	}
	var rows []outcomeRow
	for name := range names {
		n := r.Outcomes[name]
		rows = append(rows, outcomeRow{name, outcomeMeanings[name], n, r.OutcomesRaw[name], quality.Number(float64(n) / float64(total))})
	}
	slices.SortFunc(rows, func(a, b outcomeRow) int { return cmp.Or(cmp.Compare(b.Count, a.Count), cmp.Compare(a.Name, b.Name)) })
	return rows
}

// orderRow is one S-44 order with its limits over the depths of the check points.
type orderRow struct {
	Name          string
	Shallow, Deep quality.Number
	Share         quality.Number
}

// Holds tells whether the share is that of a 95 % limit.
func (o orderRow) Holds() bool { return o.Share >= 0.95 }

func orderRows(r *quality.Report) (rows []orderRow) {
	if len(r.Check.ByDepth) == 0 {
		return nil
	}
	shallow, deep := float64(r.Check.ByDepth[0].From), float64(r.Check.ByDepth[len(r.Check.ByDepth)-1].To)
	for _, name := range quality.Orders() {
		rows = append(rows, orderRow{orderNames[name], quality.Number(r.Limit(name, shallow)), quality.Number(r.Limit(name, deep)), r.Check.S44[name]})
	}
	return rows
}

// kindRow counts findings of a kind.
type kindRow struct {
	Kind  string
	Count int64
}

func kindRows(r *quality.Report) (rows []kindRow) {
	for _, kind := range slices.Sorted(maps.Keys(r.FindingCounts)) {
		rows = append(rows, kindRow{kind, r.FindingCounts[kind]})
	}
	return rows
}
