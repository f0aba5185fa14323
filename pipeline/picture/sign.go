package picture

import (
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// sign is a mark for many points: all of them are one path, which keeps SVG small.
type sign struct {
	color color.Color
	width vg.Length // of its lines; 0: it is filled
	trace func(*vg.Path, vg.Point)
}

var (
	dot   = sign{used, 0, traceDot}
	cross = sign{aside, 0.7, traceCross}
)

func traceDot(p *vg.Path, at vg.Point) {
	const r = 1.4
	p.Move(vg.Point{X: at.X - r, Y: at.Y})
	p.Line(vg.Point{X: at.X, Y: at.Y - r})
	p.Line(vg.Point{X: at.X + r, Y: at.Y})
	p.Line(vg.Point{X: at.X, Y: at.Y + r})
	p.Close()
}

func traceCross(p *vg.Path, at vg.Point) {
	const r = 1.5
	p.Move(vg.Point{X: at.X - r, Y: at.Y - r})
	p.Line(vg.Point{X: at.X + r, Y: at.Y + r})
	p.Move(vg.Point{X: at.X - r, Y: at.Y + r})
	p.Line(vg.Point{X: at.X + r, Y: at.Y - r})
}

func (s sign) draw(c *draw.Canvas, p vg.Path) {
	if s.width == 0 {
		c.SetColor(s.color)
		c.Fill(p)
		return
	}
	c.SetLineStyle(draw.LineStyle{Color: s.color, Width: s.width})
	c.Stroke(p)
}

// DrawGlyph draws one of them, for a key.
func (s sign) DrawGlyph(c *draw.Canvas, _ draw.GlyphStyle, at vg.Point) {
	var p vg.Path
	s.trace(&p, at)
	s.draw(c, p)
}

// mark is the sign in a key.
func (s sign) mark(say string) mark {
	return mark{draw.GlyphStyle{Color: s.color, Radius: 2, Shape: s}, say}
}

// signs are points with one sign.
type signs struct {
	sign
	xy plotter.XYs
}

// Plot draws those within the frame.
func (s signs) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	var path vg.Path
	for _, at := range s.xy {
		if on := (vg.Point{X: toX(at.X), Y: toY(at.Y)}); c.Contains(on) {
			s.trace(&path, on)
		}
	}
	if len(path) > 0 {
		s.draw(&c, path)
	}
}

// stroke is a line's sign in a key.
type stroke struct{ draw.LineStyle }

// DrawGlyph draws a short piece of the line.
func (s stroke) DrawGlyph(c *draw.Canvas, _ draw.GlyphStyle, at vg.Point) {
	c.StrokeLine2(s.LineStyle, at.X-4*vg.Millimeter, at.Y, at.X+1.5*vg.Millimeter, at.Y)
}

// mark is the line in a key.
func (s stroke) mark(say string) mark {
	return mark{draw.GlyphStyle{Color: s.Color, Radius: 2, Shape: s}, say}
}

// bars are rectangles on the axis, edge to edge.
type bars struct {
	from, width float64
	heights     []float64
}

var barColour = color.RGBA{R: 150, G: 184, B: 214, A: 255}

// Plot draws the bars that are not empty.
func (b bars) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	var path vg.Path
	for i, height := range b.heights {
		if height == 0 {
			continue
		}
		left, right := toX(b.from+float64(i)*b.width), toX(b.from+float64(i+1)*b.width)
		path.Move(vg.Point{X: left, Y: toY(0)})
		path.Line(vg.Point{X: left, Y: toY(height)})
		path.Line(vg.Point{X: right, Y: toY(height)})
		path.Line(vg.Point{X: right, Y: toY(0)})
		path.Close()
	}
	c.SetColor(barColour)
	c.Fill(path)
	c.SetLineStyle(draw.LineStyle{Color: used, Width: 0.5})
	c.Stroke(path)
}
