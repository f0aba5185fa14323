package picture

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var (
	usedGlyph  = draw.GlyphStyle{Color: used, Radius: 2, Shape: haloed{draw.CircleGlyph{}}}
	asideGlyph = draw.GlyphStyle{Color: aside, Radius: 2.4, Shape: haloed{thickCross{}}}
	aboveGlyph = draw.GlyphStyle{Color: aside, Radius: 3, Shape: wedge(1)}
	belowGlyph = draw.GlyphStyle{Color: aside, Radius: 3, Shape: wedge(-1)}
)

// haloed draws a glyph on a white one somewhat larger, so that it stands out from
// any colour.
type haloed struct{ draw.GlyphDrawer }

func (h haloed) DrawGlyph(c *draw.Canvas, style draw.GlyphStyle, at vg.Point) {
	c.DrawGlyph(draw.GlyphStyle{Color: white, Radius: style.Radius + 0.8, Shape: h.GlyphDrawer}, at)
	c.DrawGlyph(draw.GlyphStyle{Color: style.Color, Radius: style.Radius, Shape: h.GlyphDrawer}, at)
}

// thickCross is an x whose strokes are as thick as half its radius.
type thickCross struct{}

func (thickCross) DrawGlyph(c *draw.Canvas, style draw.GlyphStyle, at vg.Point) {
	r := style.Radius * math.Sqrt2 / 2
	c.SetLineStyle(draw.LineStyle{Color: style.Color, Width: style.Radius / 2})
	for _, side := range []vg.Length{1, -1} {
		var p vg.Path
		p.Move(vg.Point{X: at.X - r, Y: at.Y - side*r})
		p.Line(vg.Point{X: at.X + r, Y: at.Y + side*r})
		c.Stroke(p)
	}
}

// wedge is a triangle that points up (1) or down (-1), to what lies beyond the frame.
type wedge vg.Length

func (w wedge) DrawGlyph(c *draw.Canvas, style draw.GlyphStyle, at vg.Point) {
	r := style.Radius
	c.FillPolygon(style.Color, []vg.Point{{X: at.X - r, Y: at.Y - vg.Length(w)*r}, {X: at.X + r, Y: at.Y - vg.Length(w)*r}, {X: at.X, Y: at.Y + vg.Length(w)*r}})
}

// scatter adds marks at places, if there are any.
func scatter(p *plot.Plot, xy plotter.XYs, glyph draw.GlyphStyle) {
	if len(xy) == 0 {
		return
	}
	p.Add(&plotter.Scatter{XYs: xy, GlyphStyle: glyph})
}

// line adds a line, if it has two points.
func line(p *plot.Plot, xy plotter.XYs, style draw.LineStyle) {
	if len(xy) < 2 {
		return
	}
	p.Add(&plotter.Line{XYs: xy, LineStyle: style})
}

// scatterWithin adds the points of a fit with heights between the frame's edges, and
// wedges at the edge for those beyond. It returns the marks that it made.
func scatterWithin(p *plot.Plot, low, high float64, points []point) []mark {
	var in, out, above, below plotter.XYs
	for _, at := range points {
		switch {
		case at.Y > high:
			above = append(above, plotter.XY{X: at.X, Y: high})
		case at.Y < low:
			below = append(below, plotter.XY{X: at.X, Y: low})
		case at.aside:
			out = append(out, at.XY)
		default:
			in = append(in, at.XY)
		}
	}
	scatter(p, in, usedGlyph)
	scatter(p, out, asideGlyph)
	scatter(p, above, aboveGlyph)
	scatter(p, below, belowGlyph)
	marks := []mark{{usedGlyph, count(len(in), "point") + " used"}}
	if n := len(out) + len(above) + len(below); n > 0 {
		marks = append(marks, mark{asideGlyph, count(n, "point") + " set aside"})
	}
	if n := len(above) + len(below); n > 0 {
		marks = append(marks, mark{aboveGlyph, count(n, "of them") + " beyond the frame"})
	}
	return marks
}

// point is a point of a fit on paper.
type point struct {
	plotter.XY
	aside bool
}
