package picture

import (
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg/draw"

	"bentray/pipeline/quality"
)

// histogramPanel draws how many points there are by a value.
func histogramPanel(x string, h *quality.Histogram) panel {
	p := newPlot(x, "points")
	p.X.Tick.Marker, p.Y.Tick.Marker = rounds(6), whole(6)
	addGrid(p)
	b := bars{from: float64(h.From), width: float64(h.Width)}
	for _, n := range h.Counts {
		b.heights = append(b.heights, float64(n))
		p.Y.Max = max(p.Y.Max, float64(n)*1.06)
	}
	p.Add(b)
	p.X.Min, p.X.Max = b.from, b.from+b.width*float64(len(b.heights))
	p.Y.Min = 0
	return panel{figureHeight, func(c draw.Canvas) { p.Draw(draw.Crop(c, 0, -rightRoom, 0, -rightRoom)) }}
}

// ShiftHistograms draws how many points moved how far, in height and in plan; a
// histogram that there is not is left out, and one there is.
func ShiftHistograms(r *quality.Report) SVG {
	var panels []panel
	if h := r.Histograms.DZ; h != nil {
		panels = append(panels, histogramPanel("shift in height, "+r.VerticalUnit+" (positive: up)", h))
	}
	if h := r.Histograms.DH; h != nil {
		panels = append(panels, histogramPanel("shift in plan, "+r.Unit, h))
	}
	return figure("Number of points by shift", panels...)
}

// whole marks round whole numbers, at most so many.
type whole int

// Ticks returns the marks from low to high.
func (w whole) Ticks(low, high float64) []plot.Tick {
	return rounds(min(int(w), max(1, int(high-low)))).Ticks(low, high)
}
