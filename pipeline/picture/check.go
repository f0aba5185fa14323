package picture

import (
	"fmt"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"bentray/pipeline/quality"
)

// limitDashes tell the orders of S-44 apart, the strictest first.
var limitDashes = [][]vg.Length{nil, {7, 3}, {7, 2, 1.5, 2}, {1.5, 2.5}}

// checkFigure is the residuals of check points against depth, and the ranges of both.
type checkFigure struct {
	*quality.Report
	xy        plotter.XYs
	depth     frame
	magnitude float64 // that the pictures hold; what is beyond is drawn at the edge
}

// CheckErrors draws the errors at the check points against depth: with the limits of
// the S-44 orders, and again magnified with bias and slope. At least one point is
// matched and has a depth.
func CheckErrors(r *quality.Report) SVG {
	f := checkFigure{Report: r, depth: frame{0, 0}}
	largest := 0.0
	for _, at := range r.Check.Points {
		if !math.IsNaN(at.Residual) && !math.IsNaN(at.Depth) {
			f.xy = append(f.xy, plotter.XY{X: at.Depth, Y: at.Residual})
			f.depth.hold(at.Depth)
			largest = max(largest, math.Abs(at.Residual))
		}
	}
	f.xy = thinned(f.xy, 3*mostPoints)
	f.depth.high += 0.04 * (f.depth.high - f.depth.low)
	f.magnitude = max(1.15*min(largest, 3*float64(r.Check.P95)), 0.001)
	return figure("Error at check points against depth", f.limits(), f.magnified())
}

// plot begins one of them.
func (f *checkFigure) plot() *plot.Plot {
	p := newPlot("depth, "+f.VerticalUnit, "error, "+f.VerticalUnit+" (plus: too shallow)")
	p.X.Tick.Marker = rounds(6)
	addGrid(p)
	line(p, plotter.XYs{{X: f.depth.low}, {X: f.depth.high}}, zeroLine)
	return p
}

// finish sets the frame, whatever was added, and draws.
func (f *checkFigure) finish(p *plot.Plot, magnitude float64, headline string, marks []mark) panel {
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = f.depth.low, f.depth.high, -magnitude, magnitude
	return panel{figureHeight + vg.Centimeter, func(c draw.Canvas) {
		p.Draw(draw.Crop(drawKey(c, headline, marks), 0, -rightRoom, 0, 0))
	}}
}

// limits draws the errors with the limits of the orders that fit in.
func (f *checkFigure) limits() panel {
	magnitude := max(f.magnitude, 1.15*f.Limit(quality.Orders()[1], f.depth.high))
	p := f.plot()
	for i, order := range quality.Orders() {
		above, below := f.limitLines(order)
		style := draw.LineStyle{Color: black, Width: 0.9, Dashes: limitDashes[i]}
		line(p, above, style)
		line(p, below, style)
		if at := above[len(above)*(len(limitDashes)-i)/len(limitDashes)-1]; at.Y < 0.9*magnitude {
			p.Add(caption{at, fmt.Sprintf("%s: %s", order, share(f.Check.S44[order]))})
		}
	}
	return f.finish(p, magnitude, "", f.addPoints(p, magnitude))
}

// limitLines is the limit of an order over depth, above and below zero.
func (f *checkFigure) limitLines(order string) (above, below plotter.XYs) {
	const steps = 40
	for i := range steps + 1 {
		depth := f.depth.low + (f.depth.high-f.depth.low)*float64(i)/steps
		limit := f.Limit(order, depth)
		above = append(above, plotter.XY{X: depth, Y: limit})
		below = append(below, plotter.XY{X: depth, Y: -limit})
	}
	return above, below
}

// magnified draws the errors as large as they are, with bias and slope.
func (f *checkFigure) magnified() panel {
	p := f.plot()
	marks := f.addPoints(p, f.magnitude)[1:]
	bias := stroke{draw.LineStyle{Color: aside, Width: 1.2, Dashes: []vg.Length{4, 2.5}}}
	line(p, plotter.XYs{{X: f.depth.low, Y: float64(f.Check.Bias)}, {X: f.depth.high, Y: float64(f.Check.Bias)}}, bias.LineStyle)
	marks = append(marks, bias.mark("mean"))
	if slope := float64(f.Check.Slope); !math.IsNaN(slope) {
		fit := stroke{draw.LineStyle{Color: aside, Width: 1.2}}
		line(p, f.slopeLine(slope), fit.LineStyle)
		marks = append(marks, fit.mark("slope"))
	}
	return f.finish(p, f.magnitude, "magnified", marks)
}

// slopeLine goes through the middle of the points, as least squares does.
func (f *checkFigure) slopeLine(slope float64) plotter.XYs {
	var depth, residual float64
	n := 0.0
	for _, at := range f.Check.Points {
		if !math.IsNaN(at.Residual) && !math.IsNaN(at.Depth) {
			depth, residual, n = depth+at.Depth, residual+at.Residual, n+1
		}
	}
	at := func(x float64) plotter.XY { return plotter.XY{X: x, Y: residual/n + slope*(x-depth/n)} }
	return plotter.XYs{at(f.depth.low), at(f.depth.high)}
}

// addPoints adds the errors, and wedges at the edge for those beyond.
func (f *checkFigure) addPoints(p *plot.Plot, magnitude float64) []mark {
	var in, above, below plotter.XYs
	for _, at := range f.xy {
		switch {
		case at.Y > magnitude:
			above = append(above, plotter.XY{X: at.X, Y: magnitude})
		case at.Y < -magnitude:
			below = append(below, plotter.XY{X: at.X, Y: -magnitude})
		default:
			in = append(in, at)
		}
	}
	p.Add(signs{dot, in})
	scatter(p, above, aboveGlyph)
	scatter(p, below, belowGlyph)
	marks := []mark{dot.mark("check point")}
	if len(above)+len(below) > 0 {
		marks = append(marks, mark{aboveGlyph, "beyond the frame"})
	}
	return marks
}

// share writes a share in percent.
func share(n quality.Number) string {
	if math.IsNaN(float64(n)) {
		return "-"
	}
	return fmt.Sprintf("%.1f %%", 100*float64(n))
}

// caption is a word right above a line, which ends there.
type caption struct {
	at   plotter.XY
	word string
}

// Plot writes the word on white.
func (t caption) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	style := textStyle()
	style.XAlign, style.YAlign = text.XRight, text.YBottom
	style.Font.Size = 8.5
	at := vg.Point{X: toX(t.at.X) - 2, Y: toY(t.at.Y) + 1.5}
	width, height := style.Width(t.word), style.Height(t.word)
	c.FillPolygon(white, []vg.Point{at, {X: at.X - width, Y: at.Y}, {X: at.X - width, Y: at.Y + height}, {X: at.X, Y: at.Y + height}})
	c.FillText(style, at, t.word)
}
