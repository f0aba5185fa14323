package picture

import (
	"math"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"bentray/pipeline"
)

const curveHeight = 9 * vg.Centimeter

// frame is a range of heights with room above and below.
type frame struct{ low, high float64 }

func (f *frame) hold(values ...float64) {
	for _, v := range values {
		f.low, f.high = min(f.low, v), max(f.high, v)
	}
}

// padded returns the frame with a share of its height, at least least, on either side.
func (f frame) padded(share, least float64) frame {
	pad := max(share*(f.high-f.low), least)
	return frame{f.low - pad, f.high + pad}
}

// profilePanel draws a profile along its centreline with its points.
func profilePanel(r *pipeline.SurfaceReport) panel {
	p := newPlot("along the centreline, "+r.Unit, "level, "+r.VerticalUnit)
	addGrid(p)
	var curve, band, back plotter.XYs
	f := frame{math.Inf(1), math.Inf(-1)}
	for _, at := range r.Profile.Curve {
		curve = append(curve, plotter.XY{X: at.Chainage, Y: at.Level})
		band = append(band, plotter.XY{X: at.Chainage, Y: at.Level + 1.96*at.Sigma})
		back = append(plotter.XYs{{X: at.Chainage, Y: at.Level - 1.96*at.Sigma}}, back...)
		f.hold(at.Level)
	}
	var points []point
	for _, at := range r.Profile.Fit.Points {
		if math.IsNaN(at.Chainage) {
			continue
		}
		points = append(points, point{plotter.XY{X: at.Chainage, Y: at.Z}, at.Aside})
		if !at.Aside {
			f.hold(at.Z)
		}
	}
	f = f.padded(0.15, 0.01)
	headline := "Profile (line); its error is not known"
	if !math.IsNaN(r.Profile.Fit.Sigma) {
		p.Add(&plotter.Polygon{XYs: []plotter.XYs{append(band, back...)}, Color: grey})
		headline = "Profile (line) with its 95 % band near points"
	}
	marks := scatterWithin(p, f.low, f.high, points)
	line(p, curve, draw.LineStyle{Color: black, Width: 1.5})
	p.Y.Min, p.Y.Max = f.low, f.high
	return panel{curveHeight, func(c draw.Canvas) {
		p.Draw(drawKey(c, headline, marks))
	}}
}

// residualPanel draws the residuals of a fitted plane in the order of the file.
func residualPanel(r *pipeline.SurfaceReport) panel {
	fit := r.Plane.Fit
	p := newPlot("number of the point in the file", "residual, "+r.VerticalUnit)
	addGrid(p)
	var points []point
	f := frame{}
	for i, at := range fit.Points {
		points = append(points, point{plotter.XY{X: float64(i + 1), Y: at.Residual}, at.Aside})
		if !at.Aside {
			f.hold(at.Residual)
		}
	}
	f = f.padded(0.15, 0.001)
	line(p, plotter.XYs{{X: 0}, {X: float64(len(fit.Points) + 1)}}, draw.LineStyle{Color: black, Width: 1})
	marks := scatterWithin(p, f.low, f.high, points)
	p.X.Min, p.X.Max = 0, float64(len(fit.Points)+1)
	p.Y.Min, p.Y.Max = f.low, f.high
	return panel{curveHeight * 3 / 4, func(c draw.Canvas) {
		p.Draw(drawKey(c, "Point minus plane", marks))
	}}
}
