package picture

import (
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/palette"
	"gonum.org/v1/plot/palette/moreland"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var (
	black = color.Gray{}
	white = color.Gray{Y: 255}
	grey  = color.Gray{Y: 200}
	used  = color.RGBA{R: 0, G: 75, B: 130, A: 255} // dark blue
	aside = color.RGBA{R: 213, G: 94, B: 0, A: 255} // vermilion, told from blue by the colour-blind
)

// levelColours runs from dark blue by grey to light yellow.
var levelColours = []color.Color{
	color.RGBA{R: 0, G: 32, B: 88, A: 255}, color.RGBA{R: 120, G: 122, B: 124, A: 255}, color.RGBA{R: 255, G: 240, B: 130, A: 255},
}

// colours returns the map from levels to colours. A range without a length is
// widened, so that it has one.
func colours(low, high float64) palette.ColorMap {
	m, err := moreland.NewLuminance(levelColours)
	if err != nil {
		panic("picture: " + err.Error()) // the lightness of levelColours rises
	}
	if !(high > low) {
		low, high = low-0.001, high+0.001
	}
	m.SetMin(low)
	m.SetMax(high)
	return m
}

// newPlot returns an empty plot with the titles of its axes.
func newPlot(x, y string) *plot.Plot {
	p := plot.New()
	sans := font.Font{Typeface: "Liberation", Variant: "Sans"}
	for _, style := range []*text.Style{&p.X.Label.TextStyle, &p.Y.Label.TextStyle, &p.X.Tick.Label, &p.Y.Tick.Label} {
		style.Font = font.From(sans, 10)
	}
	p.X.Label.Text, p.Y.Label.Text = x, y
	p.X.Padding, p.Y.Padding = 0, 0
	p.X.Tick.Marker, p.Y.Tick.Marker = rounds(7), rounds(7)
	return p
}

// addGrid adds light lines at the ticks.
func addGrid(p *plot.Plot) {
	g := plotter.NewGrid()
	g.Horizontal.Color, g.Vertical.Color = grey, grey
	p.Add(g)
}

// textStyle is that of keys and tags.
func textStyle() text.Style {
	return text.Style{
		Color: black, Font: font.From(font.Font{Typeface: "Liberation", Variant: "Sans"}, 10), Handler: plot.DefaultTextHandler, YAlign: text.YCenter,
	}
}

// mark is the sign of a kind of points, and what the key says of it.
type mark struct {
	glyph draw.GlyphStyle
	say   string
}

const (
	keyHeight = 8 * vg.Millimeter // of the line of marks above a panel
	keyRoom   = 1.12              // of a word in it, for readers whose font is wider
)

// drawKey writes a headline and the marks in one line at the top of a canvas, and
// returns what is left of it.
func drawKey(c draw.Canvas, headline string, marks []mark) draw.Canvas {
	y, x := c.Max.Y-keyHeight/2, c.Min.X
	style := textStyle()
	c.FillText(style, vg.Point{X: x, Y: y}, headline)
	x += keyRoom*style.Width(headline) + 7*vg.Millimeter
	for _, m := range marks {
		c.DrawGlyph(m.glyph, vg.Point{X: x, Y: y})
		x += 3 * vg.Millimeter
		c.FillText(style, vg.Point{X: x, Y: y}, m.say)
		x += keyRoom*style.Width(m.say) + 6*vg.Millimeter
	}
	return draw.Crop(c, 0, 0, 0, -keyHeight)
}
