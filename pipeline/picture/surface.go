package picture

import (
	"bytes"
	"errors"
	"io"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"

	"bentray/io/atomicfile"
	"bentray/pipeline"
)

// ErrNothing is the error of Surface where the level differs neither from place to
// place nor over time, or no place is known where it holds.
var ErrNothing = errors.New("there is nothing to draw: the surface is one level everywhere, or the job does not say where it lies")

const (
	pageWidth  = 24 * vg.Centimeter
	pageDPI    = 110
	pageMargin = 4 * vg.Millimeter
	panelGap   = 5 * vg.Millimeter
)

// panel is one of the pictures of a page.
type panel struct {
	height vg.Length
	draw   func(draw.Canvas)
}

// Surface draws a job's water surface.
func Surface(w io.Writer, r *pipeline.SurfaceReport) error {
	var panels []panel
	if r.Map != nil {
		panels = append(panels, mapPanel(r))
	}
	if r.Profile != nil {
		panels = append(panels, profilePanel(r))
	}
	if r.Plane != nil && r.Plane.Fit != nil {
		panels = append(panels, residualPanel(r))
	}
	if r.Gauge != nil {
		panels = append(panels, gaugePanel(r))
	}
	if panels == nil {
		return ErrNothing
	}
	_, err := vgimg.PngCanvas{Canvas: page(panels)}.WriteTo(w)
	return err
}

// page draws panels from top to bottom.
func page(panels []panel) *vgimg.Canvas {
	height := 2*pageMargin - panelGap
	for _, p := range panels {
		height += p.height + panelGap
	}
	canvas := vgimg.NewWith(vgimg.UseWH(pageWidth, height), vgimg.UseDPI(pageDPI))
	whole := draw.New(canvas)
	top := height - pageMargin
	for _, p := range panels {
		p.draw(draw.Crop(whole, pageMargin, -pageMargin, top-p.height, top-height))
		top -= p.height + panelGap
	}
	return canvas
}

// WriteSurface draws a job's water surface into a file, which appears whole or not
// at all. Errors: ErrNothing, and those of the file system.
func WriteSurface(path string, r *pipeline.SurfaceReport) error {
	var data bytes.Buffer
	if err := Surface(&data, r); err != nil {
		return err
	}
	return atomicfile.Write(path, data.Bytes())
}
