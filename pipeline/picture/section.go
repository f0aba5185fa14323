package picture

import (
	"math"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"bentray/pipeline/quality"
)

const (
	levelSteps = 60 // means of the level that a section's water line has
	levelGap   = 4  // steps without water that it bridges, less one
)

var waterLine = stroke{draw.LineStyle{Color: black, Width: 1.2, Dashes: []vg.Length{6, 2}}}

// Section draws section i of a report: heights along it, before and after, and the
// water line. Heights are exaggerated.
func Section(r *quality.Report, i int) SVG {
	s := &r.Sections[i]
	before, after := "raw", "corrected"
	if r.TwoCorrected {
		before, after = "first", "second"
	}
	p := newPlot("along the section, "+r.Unit, "height, "+r.VerticalUnit)
	p.X.Tick.Marker = rounds(9)
	addGrid(p)
	length := max(math.Hypot(s.X1-s.X0, s.Y1-s.Y0), 0.001)
	f := frame{math.Inf(1), math.Inf(-1)}
	old, moved := signs{sign: cross}, signs{sign: dot}
	for _, at := range thinned(s.Points, mostPoints) {
		old.xy = append(old.xy, plotter.XY{X: at.RawAt, Y: at.Raw})
		moved.xy = append(moved.xy, plotter.XY{X: at.At, Y: at.Corrected})
		f.hold(at.Raw, at.Corrected)
	}
	marks := []mark{cross.mark(before), dot.mark(after)}
	runs := levels(s, length)
	for _, run := range runs {
		line(p, run, waterLine.LineStyle)
		for _, at := range run {
			f.hold(at.Y)
		}
	}
	if len(runs) > 0 {
		marks = append(marks, waterLine.mark("water"))
	}
	p.Add(old, moved)
	f = f.padded(0.06, 0.01)
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = 0, length, f.low, f.high
	name := SectionLetter(i)
	return figure("Section "+name+", heights "+before+" and "+after, panel{figureHeight + vg.Centimeter, func(c draw.Canvas) {
		p.Draw(draw.Crop(drawKey(c, name+" to "+name+"'", marks), 0, -rightRoom, 0, 0))
	}})
}

// SectionLetter names section i, on the map too.
func SectionLetter(i int) string { return string(rune('A' + i)) }

// levels is the mean level of the water in even steps along a section, in runs that
// end where some steps have no water.
func levels(s *quality.Section, length float64) (runs []plotter.XYs) {
	var sum, n [levelSteps]float64
	for _, at := range s.Points {
		if !math.IsNaN(at.Level) {
			k := max(0, min(int(at.At/length*levelSteps), levelSteps-1))
			sum[k] += at.Level
			n[k]++
		}
	}
	last := -levelSteps
	for k := range sum {
		if n[k] == 0 {
			continue
		}
		if k-last > levelGap {
			runs = append(runs, nil)
		}
		last = k
		run := &runs[len(runs)-1]
		for _, edge := range []float64{0.1, 0.9} {
			*run = append(*run, plotter.XY{X: (float64(k) + edge) / levelSteps * length, Y: sum[k] / n[k]})
		}
	}
	return runs
}
