package picture

import (
	"time"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"bentray/pipeline"
)

// gaugeMarks tell gauges apart, the first ones at least.
var gaugeMarks = []draw.GlyphStyle{
	{Color: used, Radius: 2, Shape: draw.CircleGlyph{}},
	{Color: aside, Radius: 2.5, Shape: draw.PyramidGlyph{}},
	{Color: black, Radius: 2, Shape: draw.BoxGlyph{}},
	{Color: used, Radius: 2.5, Shape: draw.RingGlyph{}},
}

// mostRecords is how many records of a gauge have a mark each.
const mostRecords = 300

// gaugePanel draws levels over time, with gaps where there is no level.
func gaugePanel(r *pipeline.SurfaceReport) panel {
	g := r.Gauge
	what := "level, "
	if hasBase(r) {
		what = "added to the surface, "
	}
	p := newPlot("UTC on "+days(g.From, g.To), what+r.VerticalUnit)
	p.X.Tick.Marker = clock(9)
	addGrid(p)
	var marks []mark
	for k, series := range g.Series {
		glyph := gaugeMarks[k%len(gaugeMarks)]
		addSeries(p, &series, g.MaxGap, glyph)
		if series.Name != "" {
			marks = append(marks, mark{glyph, series.Name})
		}
	}
	f := frame{g.Level.Low, g.Level.High}.padded(0.1, 0.005)
	p.Y.Min, p.Y.Max = f.low, f.high
	return panel{curveHeight * 3 / 4, func(c draw.Canvas) {
		p.Draw(drawKey(c, gaugeHeadline(g), marks))
	}}
}

func gaugeHeadline(g *pipeline.GaugeReport) string {
	headline := count(len(g.Series), "gauge") + ", " + count(g.Records, "record")
	if g.Gaps > 0 {
		headline += ", " + count(g.Gaps, "gap") + " without a level"
	}
	return headline
}

// hasBase tells whether the gauge lies over a surface of its own height.
func hasBase(r *pipeline.SurfaceReport) bool {
	return r.Level != nil || r.Column != "" || r.Plane != nil || r.Profile != nil || r.Grid != nil
}

// addSeries adds a gauge's records, joined but over gaps.
func addSeries(p *plot.Plot, g *pipeline.GaugeSeries, maxGap float64, glyph draw.GlyphStyle) {
	var all, run plotter.XYs
	for i, utc := range g.UTC {
		if i > 0 && utc-g.UTC[i-1] > maxGap {
			line(p, run, draw.LineStyle{Color: glyph.Color, Width: vg.Points(1.2)})
			run = nil
		}
		at := plotter.XY{X: utc, Y: g.Level[i]}
		run, all = append(run, at), append(all, at)
	}
	line(p, run, draw.LineStyle{Color: glyph.Color, Width: vg.Points(1.2)})
	if len(all) <= mostRecords {
		scatter(p, all, glyph)
	}
}

// days names the days from one time to another.
func days(from, to time.Time) string {
	first, last := from.Format(time.DateOnly), to.Format(time.DateOnly)
	if first == last {
		return first
	}
	return first + " to " + last
}
