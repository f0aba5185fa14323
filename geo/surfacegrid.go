package geo

import (
	"errors"
	"fmt"
	"math"
)

const (
	defaultReach  = 5.0 // cells
	defaultWindow = 2.0 // s

	// maxReach (cells) bounds the search for a fill.
	maxReach = 50

	// pointsPerCell is what the default cell aims at: 200 points within the radius
	// of a patch.
	pointsPerCell = 16
)

// GridOptions says how a Grid is made from surface points. Zeros stand for the
// defaults.
type GridOptions struct {
	// Cell (m) is the side of a cell. Smaller cells follow shorter waves, larger ones
	// average more noise: a patch uses the points up to two cells from its centre, and
	// with cells of a 15th of a wavelength it keeps that wave within 0.2 % of its
	// height and 2 % of its slope (TestGridWavelength). 0 takes the cell that on average
	// holds 16 points, empty cells left out; of passes at different times, all together.
	Cell float64

	// Reach (cells, at most 50) is how far gaps are filled from cells with a surface
	// of their own. 0 stands for 5; a value below 1 fills none.
	Reach float64

	// Window (s) is how far in time surface points may lie from the asked time,
	// where both have times. 0 stands for 2; +Inf uses them all.
	Window float64

	// Offset (m) is added to every level. Green laser returns lie below the surface:
	// a positive offset lifts them to it.
	Offset float64
}

// withDefaults returns the options with the defaults put in, but for Cell.
func (o GridOptions) withDefaults() GridOptions {
	if o.Reach == 0 {
		o.Reach = defaultReach
	}
	if o.Window == 0 {
		o.Window = defaultWindow
	}
	return o
}

// Validate returns what is wrong with the options, all faults at once.
func (o GridOptions) Validate() error {
	var faults []error
	if !(o.Cell >= 0) || math.IsInf(o.Cell, 0) {
		faults = append(faults, fmt.Errorf("cell is %v m, want a length above 0", o.Cell))
	}
	if !(o.Reach >= 0 && o.Reach <= maxReach) {
		faults = append(faults, fmt.Errorf("reach is %v cells, want 0 to %d", o.Reach, maxReach))
	}
	if !(o.Window >= 0) {
		faults = append(faults, fmt.Errorf("window is %v s, want a time above 0", o.Window))
	}
	if !isFinite(o.Offset) {
		faults = append(faults, fmt.Errorf("offset is %v m, want a finite length", o.Offset))
	}
	return errors.Join(faults...)
}

// Grid is a water surface from surface points. Every cell of a raster has a patch,
// a robust local fit to the points within two cells of its centre; between the four
// centres around a position their levels and slopes are blended bilinearly, so both
// are continuous in the plan. It does not change once made, so goroutines may share it.
type Grid struct {
	options  GridOptions
	perMetre float64    // cells
	table    *cellTable // number of a cell's node plus 1; unfilled, or gap
	nodes    []node
	patches  []patch
	fills    []fill
	stats    GridStats
}

// gap in the table marks a cell without a patch that lies within reach of one.
const gap = -1

// node is a cell with at least one patch. It says where in the patches its own are:
// -1 where there is none.
type node struct {
	all        int32 // of all points, for positions without a time
	loose      int32 // of the points without a time
	first, end int32 // at times, in their order; they use the points without a time too
}

// fill is a cell within reach of a gap: its offset in cells and metres, and its
// weight, the inverse fourth power of the distance.
type fill struct {
	col, row     int
	u, v, weight float64
}

// GridStats describes a Grid.
type GridStats struct {
	Cell    float64 // m
	Used    int     // surface points
	Ignored int     // surface points with a coordinate that is not finite
	Cells   int     // cells with a patch of their own
	Patches int     // more than cells where passes at other times overlap
	Sigma   float64 // median 1-sigma of the patches' levels, m
}

// Stats returns the numbers that describe the grid.
func (g *Grid) Stats() GridStats { return g.stats }

// NewGrid returns the surface through surface points. All points of a survey belong
// into one grid; their order does not matter, not even for the last bit. The points
// are not kept.
//
// The patch of a cell is a quadratic z(x, y), weighted with (1 - d^2/r^2)^2 for a
// distance d below r, two cells, and reweighted with Tukey's biweight about the
// median absolute error, from a start at the median height; so single blunders, on
// one side too, have no weight. A quadratic, since a plane over that radius would
// cut the crests of swell. Where points lie on one side only, or are fewer than 12,
// it is a plane; a cell beyond the points, or with fewer than 6, has no patch of its
// own.
//
// Points with times: within a cell they are parted at pauses longer than the window,
// and a part longer than half a window into patches a half window apart, each from
// the points within a half window of its time. Points without a time count for all
// times.
//
// One pass does not tell a wave's slope from its motion: a sensor that crosses it at
// the speed v sees slopes wrong by the level's rate of change over v, for swell of
// 0.25 m and 6 s at 60 m/s by 0.004.
//
// It takes some 2 to 4 microseconds a surface point, much the same for any cell;
// meanwhile some 8 bytes a point beside the points themselves, afterwards 90 bytes a
// patch, 1 KiB for each tile of 16 by 16 cells in use and 4 bytes, 16 MiB at most, for
// each tile of the rectangle around the points.
//
// Errors: options as of Validate; no cell with enough points; points too far apart.
func NewGrid(points *SurfacePoints, options GridOptions) (*Grid, error) {
	if err := options.Validate(); err != nil {
		return nil, err
	}
	if err := points.check(); err != nil {
		return nil, err
	}
	b := gridBuilder{options: options.withDefaults(), points: points}
	if options.Cell == 0 {
		b.options.Cell = defaultCell(points)
	}
	return b.build()
}

// Fill fills a chunk with the surface: its level (m), offset included, and slopes at
// each plan position x, y (m) and time t (s, on the scale of the surface points). The
// slices have one length, otherwise it panics; t may be nil. A destination may be x,
// y or t itself. Where t is nil or NaN, the surface is that of all points; else each
// cell takes the patch whose points lie nearest in time, all of them within the
// window.
//
// Slopes are the blended slopes of the patches, not the derivative of the blended
// level: over swell with noise their error is smaller (TestGridSlopeChoice).
//
// A cell without a patch within the window takes the mean plane of the cells within
// reach that have one, weighted with the inverse fourth power of the distance. Level
// and slopes are NaN where the cell of the position has neither, or x or y is NaN.
// A position among patches takes some 100 ns, one at a gap some microseconds.
func (g *Grid) Fill(level, slopeX, slopeY, x, y, t []float64) {
	n := len(level)
	if len(slopeX) != n || len(slopeY) != n || len(x) != n || len(y) != n || t != nil && len(t) != n {
		panic(errLengths)
	}
	at := math.NaN()
	for i := range level {
		if t != nil {
			at = t[i]
		}
		s := g.at(x[i], y[i], at, false)
		level[i], slopeX[i], slopeY[i] = s.level, s.sx, s.sy
	}
}

// FillSigma fills a chunk with the 1-sigma (m) of the level that Fill gives: from the
// scatter of the points about each patch, taken as independent; in a gap, from what
// the cells within reach say too. What the shape of a wave does to a patch or in a gap
// is not in it. Lengths, aliasing and NaN are those of Fill.
func (g *Grid) FillSigma(sigma, x, y, t []float64) {
	if len(x) != len(sigma) || len(y) != len(sigma) || t != nil && len(t) != len(sigma) {
		panic(errLengths)
	}
	at := math.NaN()
	for i := range sigma {
		if t != nil {
			at = t[i]
		}
		sigma[i] = g.at(x[i], y[i], at, true).sigma
	}
}
