package picture

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"bentray/pipeline"
)

const (
	barWidth      = 27 * vg.Millimeter // of the scale of colours, with its numbers
	axisWidth     = 22 * vg.Millimeter // of the numbers beside and below a map
	lowestMap     = 4 * vg.Centimeter
	highestMap    = 22 * vg.Centimeter
	numberColours = 256
	mostTags      = 12 // names of zones
)

// raster is a map's levels as a heat map wants them.
type raster struct{ *pipeline.LevelMap }

func (r raster) Dims() (columns, rows int) { return len(r.LevelMap.X), len(r.LevelMap.Y) }
func (r raster) X(column int) float64      { return r.LevelMap.X[column] }
func (r raster) Y(row int) float64         { return r.LevelMap.Y[row] }
func (r raster) Z(column, row int) float64 { return r.Levels[row*len(r.LevelMap.X)+column] }

// mapPanel draws the level over the plan.
func mapPanel(r *pipeline.SurfaceReport) panel {
	p := newPlot("x (east), "+r.Unit, "y (north), "+r.Unit)
	scale := colours(r.Map.Level.Low, r.Map.Level.High)
	heat := plotter.NewHeatMap(raster{r.Map}, scale.Palette(numberColours))
	heat.Min, heat.Max, heat.Rasterized = scale.Min(), scale.Max(), true
	p.Add(heat)
	p.Add(outlines(r.Map.Outlines))
	marks := addFitted(p, r)
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = heat.DataRange()

	bar := newPlot("", "")
	bar.Add(&plotter.ColorBar{ColorMap: scale, Vertical: true})
	bar.HideX()
	bar.X.Padding = 0
	headline := "Water level, " + r.VerticalUnit
	if r.Map.At != nil {
		headline += r.Map.At.Format(", at 2006-01-02 15:04:05 UTC")
	}
	aspect := (p.Y.Max - p.Y.Min) / (p.X.Max - p.X.Min)
	height := min(max(vg.Length(aspect)*(pageWidth-2*pageMargin-barWidth-axisWidth), lowestMap), highestMap) + keyHeight + axisWidth/2
	return panel{height, func(c draw.Canvas) {
		c = drawKey(c, headline, marks)
		plan := draw.Crop(c, 0, -barWidth, 0, 0)
		equalScale(p, plan)
		p.Draw(plan)
		data := p.DataCanvas(plan)
		bar.Draw(draw.Crop(c, c.Max.X-c.Min.X-barWidth+8*vg.Millimeter, -3*vg.Millimeter, data.Min.Y-c.Min.Y, data.Max.Y-c.Max.Y))
	}}
}

// equalScale widens one of the axes so that a length is the same on both.
func equalScale(p *plot.Plot, c draw.Canvas) {
	for range 3 { // numbers that get longer take room from the map
		data := p.DataCanvas(c)
		perX := (p.X.Max - p.X.Min) / float64(data.Max.X-data.Min.X)
		perY := (p.Y.Max - p.Y.Min) / float64(data.Max.Y-data.Min.Y)
		if perX < perY {
			widen(&p.X, perY/perX)
		} else {
			widen(&p.Y, perX/perY)
		}
	}
}

// widen stretches an axis about its middle.
func widen(a *plot.Axis, factor float64) {
	middle, half := (a.Min+a.Max)/2, (a.Max-a.Min)/2*factor
	a.Min, a.Max = middle-half, middle+half
}

// outlines are the zones' rings, with their names where there are few in the frame.
type outlines []pipeline.Outline

// Plot draws the rings, and above each zone that reaches into the frame its name.
func (o outlines) Plot(c draw.Canvas, p *plot.Plot) {
	var tags []tag
	named := map[string]bool{}
	for i := range o {
		ring := ringOf(&o[i])
		for _, style := range []draw.LineStyle{{Color: white, Width: 2.4}, {Color: black, Width: 1}} {
			(&plotter.Line{XYs: ring, LineStyle: style}).Plot(c, p)
		}
		if name := o[i].Name; !named[name] && len(named) < mostTags && isInFrame(p, ring) {
			named[name] = true
			tags = append(tags, tag{topOf(ring), name})
		}
	}
	for _, t := range tags {
		t.Plot(c, p)
	}
}

func ringOf(o *pipeline.Outline) (ring plotter.XYs) {
	for _, at := range o.XY {
		ring = append(ring, plotter.XY{X: at[0], Y: at[1]})
	}
	return ring
}

// topOf returns the northernmost vertex of a ring.
func topOf(ring plotter.XYs) plotter.XY {
	return slices.MaxFunc(ring, func(a, b plotter.XY) int { return cmp.Compare(a.Y, b.Y) })
}

// isInFrame tells whether the rectangle around a ring meets the frame.
func isInFrame(p *plot.Plot, ring plotter.XYs) bool {
	lowX, highX, lowY, highY := plotter.XYRange(ring)
	return lowX < p.X.Max && highX > p.X.Min && lowY < p.Y.Max && highY > p.Y.Min
}

// addFitted adds the points that the surface was fitted to, and returns their marks.
func addFitted(p *plot.Plot, r *pipeline.SurfaceReport) []mark {
	fit := fitOf(r)
	if fit == nil {
		return nil
	}
	var points []point
	for _, at := range fit.Points {
		if !math.IsNaN(at.Residual) {
			points = append(points, point{plotter.XY{X: at.X, Y: at.Y}, at.Aside})
		}
	}
	return scatterWithin(p, math.Inf(-1), math.Inf(1), points)
}

func fitOf(r *pipeline.SurfaceReport) *pipeline.FitReport {
	switch {
	case r.Plane != nil:
		return r.Plane.Fit
	case r.Profile != nil:
		return &r.Profile.Fit
	}
	return nil
}

// tag is a name on white at a place of a map.
type tag struct {
	at   plotter.XY
	name string
}

// Plot draws the tag above its place, within the frame.
func (t tag) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	style := textStyle()
	style.XAlign = text.XCenter
	half, high := style.Width(t.name)/2+2, style.Height(t.name)/2+2
	at := vg.Point{
		X: min(max(toX(t.at.X), c.Min.X+half), c.Max.X-half),
		Y: min(max(toY(t.at.Y)+high+2, c.Min.Y+high), c.Max.Y-high),
	}
	c.FillPolygon(white, []vg.Point{{X: at.X - half, Y: at.Y - high}, {X: at.X + half, Y: at.Y - high}, {X: at.X + half, Y: at.Y + high}, {X: at.X - half, Y: at.Y + high}})
	c.FillText(style, at, t.name)
}
