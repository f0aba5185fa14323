package picture

import (
	"image"
	"image/color"
	"math"
	"slices"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"bentray/pipeline/quality"
)

const (
	mostClasses = 12   // of colours in a map of the shift
	outerShare  = 0.01 // of the cells at either end that the end classes may hold beyond their edges
)

// classes are colours for ranges of equal, round width: from low in steps.
type classes struct {
	low, step float64
	colours   []color.Color
}

// newClasses spans values, which are at least one; NaN are not counted.
func newClasses(values []float64) classes {
	known := slices.DeleteFunc(slices.Clone(values), math.IsNaN)
	slices.Sort(known)
	beyond := int(outerShare * float64(len(known)))
	low, high := known[beyond], known[len(known)-1-beyond]
	step := roundStep(max((high-low)/(mostClasses-1), 1e-4))
	c := classes{low: math.Floor(low/step) * step, step: step}
	n := max(1, int(math.Ceil((high-c.low)/step-1e-9)))
	scale := colours(0, max(1, float64(n-1)))
	for i := range n {
		colour, err := scale.At(float64(i))
		if err != nil {
			panic("picture: " + err.Error()) // i is within the scale
		}
		c.colours = append(c.colours, colour)
	}
	return c
}

// of is the class of a value.
func (c classes) of(v float64) int {
	return max(0, min(int(math.Floor((v-c.low)/c.step)), len(c.colours)-1))
}

// image is a map as one pixel a cell, clear where there is no point.
func (c classes) image(m *quality.Map) image.Image {
	picture := image.NewPaletted(image.Rect(0, 0, m.Cols, m.Rows), append(color.Palette{color.Transparent}, c.colours...))
	for row := range m.Rows {
		for col := range m.Cols {
			if v := m.MeanDZ[row*m.Cols+col]; !math.IsNaN(v) {
				picture.SetColorIndex(col, m.Rows-1-row, uint8(1+c.of(v)))
			}
		}
	}
	return picture
}

// Plot draws the classes one above the other.
func (c classes) Plot(canvas draw.Canvas, p *plot.Plot) {
	_, toY := p.Transforms(&canvas)
	for i, colour := range c.colours {
		low, high := toY(c.low+float64(i)*c.step), toY(c.low+float64(i+1)*c.step)
		canvas.FillPolygon(colour, []vg.Point{{X: canvas.Min.X, Y: low}, {X: canvas.Max.X, Y: low}, {X: canvas.Max.X, Y: high}, {X: canvas.Min.X, Y: high}})
	}
}

// ShiftMap draws the mean shift in height over the plan, with the sections and the
// check points. The report has a map.
func ShiftMap(r *quality.Report) SVG {
	m := r.Map
	p := newPlot("x (east), "+r.Unit, "y (north), "+r.Unit)
	p.X.Tick.Marker, p.Y.Tick.Marker = rounds(5), rounds(5)
	addGrid(p)
	scale := newClasses(m.MeanDZ)
	p.Add(plotter.NewImage(scale.image(m), m.X, m.Y, m.X+m.Cell*float64(m.Cols), m.Y+m.Cell*float64(m.Rows)))
	marks := addChecks(p, r.Check)
	for i := range r.Sections {
		addSection(p, &r.Sections[i], SectionLetter(i))
	}
	height := min(max(vg.Length(m.Rows)/vg.Length(m.Cols)*(figureWidth-barWidth-axisWidth), lowestMap), 11*vg.Centimeter) + keyHeight + axisWidth/2
	return figure("Map of the mean shift in height", panel{height, func(c draw.Canvas) {
		c = drawKey(c, "Mean shift in height, "+r.VerticalUnit, marks)
		plan := draw.Crop(c, 0, -barWidth, 0, 0)
		equalScale(p, plan)
		p.Draw(plan)
		data := p.DataCanvas(plan)
		drawScale(draw.Crop(c, c.Max.X-c.Min.X-barWidth+8*vg.Millimeter, -3*vg.Millimeter, data.Min.Y-c.Min.Y, data.Max.Y-c.Max.Y), scale)
	}})
}

// drawScale draws the classes with their edges.
func drawScale(c draw.Canvas, scale classes) {
	bar := newPlot("", "")
	bar.Add(scale)
	bar.HideX()
	bar.X.Padding = 0
	bar.X.Min, bar.X.Max = 0, 1
	bar.Y.Min, bar.Y.Max = scale.low, scale.low+scale.step*float64(len(scale.colours))
	bar.Y.Tick.Marker = rounds(len(scale.colours))
	bar.Draw(c)
}

var (
	checkGlyph     = draw.GlyphStyle{Color: black, Radius: 1.6, Shape: haloed{draw.RingGlyph{}}}
	unmatchedGlyph = draw.GlyphStyle{Color: aside, Radius: 2.2, Shape: haloed{thickCross{}}}
)

// addChecks adds check points, where there are any.
func addChecks(p *plot.Plot, check *quality.CheckReport) []mark {
	if check == nil {
		return nil
	}
	var matched, unmatched plotter.XYs
	for _, at := range check.Points {
		switch xy := (plotter.XY{X: at.X, Y: at.Y}); {
		case at.X < p.X.Min || at.X > p.X.Max || at.Y < p.Y.Min || at.Y > p.Y.Max:
		case math.IsNaN(at.Residual):
			unmatched = append(unmatched, xy)
		default:
			matched = append(matched, xy)
		}
	}
	var marks []mark
	if scatter(p, thinned(matched, mostPoints), checkGlyph); len(matched) > 0 {
		marks = append(marks, mark{checkGlyph, "check point"})
	}
	if scatter(p, thinned(unmatched, mostPoints), unmatchedGlyph); len(unmatched) > 0 {
		marks = append(marks, mark{unmatchedGlyph, "unmatched"})
	}
	return marks
}

// addSection adds the line of a section with its name at both ends.
func addSection(p *plot.Plot, s *quality.Section, name string) {
	ends := plotter.XYs{{X: s.X0, Y: s.Y0}, {X: s.X1, Y: s.Y1}}
	line(p, ends, draw.LineStyle{Color: white, Width: 2.4})
	line(p, ends, draw.LineStyle{Color: black, Width: 0.9, Dashes: []vg.Length{6, 2}})
	p.Add(tag{ends[0], name}, tag{ends[1], name + "'"})
}
