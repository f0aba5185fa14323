package picture

import (
	"math"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"bentray/pipeline/quality"
)

const figureHeight = 5.3 * vg.Centimeter

// curve is a figure by band, with a sign and a line of its own.
type curve struct {
	mark
	line draw.LineStyle
	xy   plotter.XYs
}

// solid and dashed are the two curves of a panel.
func solid(say string) *curve {
	return &curve{
		mark{draw.GlyphStyle{Color: used, Radius: 2.6, Shape: draw.CircleGlyph{}}, say}, draw.LineStyle{Color: used, Width: 1.1}, nil,
	}
}

func dashed(say string) *curve {
	return &curve{
		mark{draw.GlyphStyle{Color: aside, Radius: 3.2, Shape: draw.PyramidGlyph{}}, say},
		draw.LineStyle{Color: aside, Width: 1.1, Dashes: []vg.Length{4, 2.5}},
		nil,
	}
}

// add takes the figure of a band in its middle; one that is not known is left out.
func (c *curve) add(from, to, value quality.Number) {
	if v := float64(value); !math.IsNaN(v) {
		c.xy = append(c.xy, plotter.XY{X: float64(from+to) / 2, Y: v})
	}
}

// bandPanel draws curves by band, with the zero line; bands reach from low to high.
func bandPanel(x, y string, low, high quality.Number, curves ...*curve) panel {
	p := newPlot(x, y)
	p.Y.Tick.Marker = rounds(6)
	addGrid(p)
	line(p, plotter.XYs{{X: float64(low)}, {X: float64(high)}}, zeroLine)
	f := frame{}
	var marks []mark
	for _, c := range curves {
		line(p, c.xy, c.line)
		scatter(p, c.xy, c.glyph)
		marks = append(marks, c.mark)
		for _, at := range c.xy {
			f.hold(at.Y)
		}
	}
	p.X.Min, p.X.Max = float64(low), float64(high)
	if f = f.padded(0.08, 0); f.high == f.low {
		f = f.padded(0, 0.001)
	}
	p.Y.Min, p.Y.Max = f.low, f.high
	return panel{figureHeight, func(c draw.Canvas) { p.Draw(draw.Crop(drawKey(c, "", marks), 0, -rightRoom, 0, 0)) }}
}

var zeroLine = draw.LineStyle{Color: black, Width: 0.8}

// ShiftByDepth draws the mean shift by depth, and how many points there are at each.
// There is at least one band.
func ShiftByDepth(r *quality.Report) SVG {
	dz, dh := solid("height (positive: up)"), dashed("in plan")
	for _, b := range r.ByDepth {
		dz.add(b.From, b.To, b.MeanDZ)
		dh.add(b.From, b.To, b.MeanDH)
	}
	depth := "depth, " + r.VerticalUnit
	panels := []panel{bandPanel(depth, "mean shift, "+shiftUnit(r), r.ByDepth[0].From, r.ByDepth[len(r.ByDepth)-1].To, dz, dh)}
	if h := r.Histograms.Depth; h != nil {
		panels = append(panels, histogramPanel(depth, h))
	}
	return figure("Mean shift by depth, and number of points by depth", panels...)
}

// ShiftByIncidence draws the mean shift by incidence, as it is and in percent of the
// mean depth where that is known. There is at least one band.
func ShiftByIncidence(r *quality.Report) SVG {
	dz, dh := solid("height (positive: up)"), dashed("in plan")
	dzShare, dhShare := solid("height"), dashed("in plan")
	for _, b := range r.ByIncidence {
		dz.add(b.From, b.To, b.MeanDZ)
		dh.add(b.From, b.To, b.MeanDH)
		dzShare.add(b.From, b.To, 100*b.MeanDZ/b.MeanDepth)
		dhShare.add(b.From, b.To, 100*b.MeanDH/b.MeanDepth)
	}
	low, high := r.ByIncidence[0].From, r.ByIncidence[len(r.ByIncidence)-1].To
	panels := []panel{bandPanel("incidence, degrees", "mean shift, "+shiftUnit(r), low, high, dz, dh)}
	if len(dzShare.xy) > 0 && r.Unit == r.VerticalUnit {
		panels = append(panels, bandPanel("incidence, degrees", "mean shift, % of depth", low, high, dzShare, dhShare))
	}
	return figure("Mean shift by incidence", panels...)
}

// shiftUnit is that of shifts in height and in plan.
func shiftUnit(r *quality.Report) string {
	if r.Unit == r.VerticalUnit {
		return r.Unit
	}
	return r.VerticalUnit + " (height), " + r.Unit + " (plan)"
}

// Overlap draws the differences of flight lines by depth and by incidence. There is
// at least one band of depth or of incidence.
func Overlap(r *quality.Report) SVG {
	var panels []panel
	for _, by := range []struct {
		name  string
		bands []quality.OverlapBand
	}{{"depth, " + r.VerticalUnit, r.Overlap.ByDepth}, {"incidence, degrees", r.Overlap.ByIncidence}} {
		if len(by.bands) == 0 {
			continue
		}
		bias, p95 := solid("mean"), dashed("95 % of magnitudes")
		for _, b := range by.bands {
			bias.add(b.From, b.To, b.Bias)
			p95.add(b.From, b.To, b.P95)
		}
		panels = append(panels, bandPanel(by.name, "difference, "+r.VerticalUnit, by.bands[0].From, by.bands[len(by.bands)-1].To, bias, p95))
	}
	return figure("Differences of flight lines by depth and by incidence", panels...)
}
