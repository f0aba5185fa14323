package quality

import (
	"cmp"
	"slices"
)

// OverlapReport compares flight lines where they overlap. A difference is the height
// of the one line minus that of the other, in the middle of a cell that both saw, with
// slopes that they share; the lines are in the order of their names.
type OverlapReport struct {
	Column      string        `json:"column"` // that tells lines apart
	Cell        Number        `json:"cell"`   // side, the smallest that gives differences enough
	Share       Number        `json:"share"`  // of the cells that were looked at; below 1 where they are many
	Lines       int           `json:"lines"`
	Count       int           `json:"count"` // of differences
	Difference  Residuals     `json:"difference"`
	ByDepth     []OverlapBand `json:"by_depth"`
	ByIncidence []OverlapBand `json:"by_incidence"` // by the mean of both, degrees
	Pairs       []LinePair    `json:"pairs"`        // the most frequent
	Warnings    []string      `json:"warnings"`
}

// OverlapBand is the differences in [From, To).
type OverlapBand struct {
	From  Number `json:"from"`
	To    Number `json:"to"`
	Count int    `json:"count"`
	Residuals
}

// LinePair is two lines; the difference is A minus B.
type LinePair struct {
	A     string `json:"a"`
	B     string `json:"b"`
	Count int    `json:"count"`
	Residuals
}

// difference of two lines in a cell.
type difference struct {
	a, b                     int32
	height, depth, incidence float64
}

// maxPairs is how many pairs of lines are listed.
const maxPairs = 20

// differences compares each two lines of each cell.
func (o *overlap) differences() []difference {
	var list []difference
	cells := o.sorted()
	for from := 0; from < len(cells); {
		to := from + 1
		for to < len(cells) && cells[to].col == cells[from].col && cells[to].row == cells[from].row {
			to++
		}
		list = o.inCell(list, cells[from:to])
		from = to
	}
	return list
}

func (o *overlap) inCell(list []difference, cells []lineCell) []difference {
	cells = slices.DeleteFunc(slices.Clone(cells), func(at lineCell) bool { return o.cells[at].n < leastPoints })
	slices.SortFunc(cells, func(a, b lineCell) int { return cmp.Compare(o.lines.list[a.line], o.lines.list[b.line]) })
	var lines []*moments
	for _, at := range cells {
		lines = append(lines, o.cells[at])
	}
	if len(lines) < 2 {
		return list
	}
	sx, sy, ok := slopes(lines)
	if !ok {
		return list
	}
	for i, a := range lines {
		for k, b := range lines[i+1:] {
			list = append(list, difference{
				cells[i].line, cells[i+1+k].line, a.height(sx, sy) - b.height(sx, sy),
				(a.depth + b.depth) / (a.n + b.n), (a.incidence/a.n + b.incidence/b.n) / 2,
			})
		}
	}
	return list
}

// report sums the differences up.
func (o *overlap) report(r *OverlapReport) {
	o, list := o.widened()
	r.Column, r.Cell, r.Share = o.column, Number(o.side), Number(1/(float64(o.mask)+1))
	r.Lines, r.Count, r.Difference = len(o.lines.list), len(list), sumUp(list)
	r.ByDepth = overlapBands(list, func(d difference) float64 { return d.depth })
	r.ByIncidence = overlapBands(list, func(d difference) float64 { return d.incidence })
	r.Pairs, r.Warnings = o.pairs(list), []string{}
	switch {
	case r.Lines < 2:
		r.Warnings = append(r.Warnings, "there is one flight line alone, want two or more")
	case r.Count == 0:
		r.Warnings = append(r.Warnings, "no cell has points enough of two flight lines: they do not overlap, or are thin; a larger --reach makes larger cells")
	}
	if o.skipped > 0 {
		r.Warnings = append(r.Warnings, "there are too many flight lines; the points of the last ones are left out")
	}
}

func sumUp(list []difference) Residuals {
	points := make([]CheckPoint, len(list))
	for i, d := range list {
		points[i].Residual = d.height
	}
	return residualsOf(points)
}

func overlapBands(list []difference, value func(difference) float64) []OverlapBand {
	known := slices.DeleteFunc(slices.Clone(list), func(d difference) bool { return !isBinned(value(d)) })
	bands := []OverlapBand{}
	if len(known) == 0 {
		return bands
	}
	slices.SortStableFunc(known, func(a, b difference) int { return cmp.Compare(value(a), value(b)) })
	w := chooseWidth(value(known[0]), value(known[len(known)-1]), maxBands, step{-2})
	for len(known) > 0 {
		band := w.band(value(known[0]))
		n := 1
		for n < len(known) && w.band(value(known[n])) == band {
			n++
		}
		bands = append(bands, OverlapBand{Number(w.from(band)), Number(w.to(band)), n, sumUp(known[:n])})
		known = known[n:]
	}
	return bands
}

func (o *overlap) pairs(list []difference) []LinePair {
	byPair := map[[2]int32][]difference{}
	for _, d := range list {
		byPair[[2]int32{d.a, d.b}] = append(byPair[[2]int32{d.a, d.b}], d)
	}
	pairs := []LinePair{}
	for p, l := range byPair {
		pairs = append(pairs, LinePair{o.lines.list[p[0]], o.lines.list[p[1]], len(l), sumUp(l)})
	}
	slices.SortFunc(pairs, func(a, b LinePair) int {
		return cmp.Or(cmp.Compare(b.Count, a.Count), cmp.Compare(a.A, b.A), cmp.Compare(a.B, b.B))
	})
	return pairs[:min(len(pairs), maxPairs)]
}
