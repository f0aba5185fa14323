package geo

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

const (
	// sameLine (m) is the distance below which two nodes are in one column or row.
	sameLine = 1e-3
	// offPlace is how far off its place in the grid a node may be, in steps: what the
	// decimals of a file leave.
	offPlace = 1e-3
	// maxPlaces is how many places a grid may have for each of its nodes; scattered
	// points would need far more.
	maxPlaces = 100
)

// Separation is the height of one vertical reference over another on a regular
// grid, such as a geoid or a chart datum over the ellipsoid. It takes water levels to
// the cloud's heights. It does not change once made, so goroutines may share it.
type Separation struct {
	cols, rows ticks
	z          []float64 // row by row; NaN where there is no node
}

// ticks are n equally spaced coordinates from first to last.
type ticks struct {
	first, last, step float64
	n                 int
}

// NewSeparation returns the separation with the value z (m) at the nodes x, y (m),
// three slices of one length (otherwise it panics), in any order. The nodes form a
// grid along the axes with one step in x and one in y; nodes may be missing, up to
// 99 of 100. A node may lie a thousandth of a step off its place. The columns are
// copied.
//
// Errors: nodes that form no such grid, or one without 2 columns and 2 rows, or
// without one cell that has its four nodes; and, as *RecordError, a value that is not
// finite or a second node in one place with another z.
func NewSeparation(x, y, z []float64) (*Separation, error) {
	if len(y) != len(x) || len(z) != len(x) {
		panic(errLengths)
	}
	for i := range x {
		if !isFinite(x[i]) || !isFinite(y[i]) || !isFinite(z[i]) {
			return nil, &RecordError{Index: i, Err: errors.New("a value is not finite, want x, y and z")}
		}
	}
	s := &Separation{}
	if err := s.lay(x, y); err != nil {
		return nil, err
	}
	if err := s.place(x, y, z); err != nil {
		return nil, err
	}
	if !s.hasCell() {
		return nil, errors.New("separation has no cell with four nodes, want a regular grid")
	}
	return s, nil
}

// lay finds the grid's columns and rows.
func (s *Separation) lay(x, y []float64) error {
	xs, ys := lines(x), lines(y)
	if len(xs) < 2 || len(ys) < 2 {
		return fmt.Errorf("separation has %d columns and %d rows, want at least 2 of each", len(xs), len(ys))
	}
	stepsX, stepsY := countSteps(xs), countSteps(ys)
	if (stepsX+1)*(stepsY+1) > maxPlaces*float64(len(x)) {
		return fmt.Errorf("separation has %d nodes for %.0f columns and %.0f rows, want a regular grid along the axes",
			len(x), stepsX+1, stepsY+1)
	}
	s.cols, s.rows = newTicks(xs, stepsX), newTicks(ys, stepsY)
	return nil
}

// lines returns the coordinates that occur, rising, those within sameLine of the one
// before left out.
func lines(v []float64) []float64 {
	sorted := slices.Sorted(slices.Values(v))
	return slices.CompactFunc(sorted, func(a, b float64) bool { return math.Abs(b-a) <= sameLine })
}

// countSteps returns how many steps lead from the first to the last of at least two
// lines, given that the smallest gap is one. Gap by gap, so that the roundings of the
// coordinates do not add up.
func countSteps(lines []float64) float64 {
	smallest, steps := math.Inf(1), 0.0
	for k := 1; k < len(lines); k++ {
		smallest = min(smallest, lines[k]-lines[k-1])
	}
	for k := 1; k < len(lines); k++ {
		steps += math.Round((lines[k] - lines[k-1]) / smallest)
	}
	return steps
}

// newTicks returns the ticks that lead in equal steps from the first to the last line.
func newTicks(lines []float64, steps float64) ticks {
	first, last := lines[0], lines[len(lines)-1]
	return ticks{first: first, last: last, step: (last - first) / steps, n: int(steps) + 1}
}

// place puts the nodes into the grid.
func (s *Separation) place(x, y, z []float64) error {
	s.z = make([]float64, s.cols.n*s.rows.n)
	for k := range s.z {
		s.z[k] = math.NaN()
	}
	for i := range z {
		col, okX := s.cols.index(x[i])
		row, okY := s.rows.index(y[i])
		if !okX || !okY {
			return &RecordError{Index: i, Err: fmt.Errorf("node %s %s is off a grid of %.6g by %.6g m, want a regular grid along the axes",
				decimal(x[i]), decimal(y[i]), s.cols.step, s.rows.step)}
		}
		node := &s.z[row*s.cols.n+col]
		if !math.IsNaN(*node) && *node != z[i] {
			return &RecordError{Index: i, Err: fmt.Errorf("z at node %s %s is %v, before %v, want each node once",
				decimal(x[i]), decimal(y[i]), z[i], *node)}
		}
		*node = z[i]
	}
	return nil
}

// index returns the tick at a coordinate and whether there is one.
func (t *ticks) index(v float64) (int, bool) {
	at := (v - t.first) / t.step
	k := math.Round(at)
	return int(k), math.Abs(at-k) <= offPlace && k >= 0 && k < float64(t.n)
}

// cell returns the cell that holds a coordinate between the ticks, ends included, how
// far it is into it (0 to 1), and whether there is one.
func (t *ticks) cell(v float64) (k int, into float64, ok bool) {
	if !(v >= t.first && v <= t.last) {
		return 0, 0, false
	}
	at := (v - t.first) / t.step
	k = min(int(at), t.n-2)
	return k, at - float64(k), true
}

// hasCell tells whether a cell has its four nodes.
func (s *Separation) hasCell() bool {
	for row := range s.rows.n - 1 {
		for col := range s.cols.n - 1 {
			z00, z10, z01, z11 := s.corners(col, row)
			if !math.IsNaN(z00 + z10 + z01 + z11) {
				return true
			}
		}
	}
	return false
}

// corners returns the nodes of a cell.
func (s *Separation) corners(col, row int) (z00, z10, z01, z11 float64) {
	k := row*s.cols.n + col
	return s.z[k], s.z[k+1], s.z[k+s.cols.n], s.z[k+s.cols.n+1]
}

// Add adds the separation at each plan position x, y (m) to level (m), and its slopes
// to slopeX and slopeY (dz/dx, dz/dy): a surface level in its own reference is not
// level in the cloud's. The five slices have one length; otherwise it panics. Where
// there is no separation the three become NaN: outside the grid, in a cell with a
// missing node, and where x or y is NaN.
//
// Bilinear in each cell, exact at nodes; level is continuous, the slopes step between
// cells. A point on the line between two cells is in the one of greater x or y.
func (s *Separation) Add(level, slopeX, slopeY, x, y []float64) {
	n := len(level)
	if len(slopeX) != n || len(slopeY) != n || len(x) != n || len(y) != n {
		panic(errLengths)
	}
	for i := range level {
		z, dx, dy := s.at(x[i], y[i])
		level[i] += z
		slopeX[i] += dx
		slopeY[i] += dy
	}
}

// at returns the separation and its slopes at one position.
func (s *Separation) at(x, y float64) (z, slopeX, slopeY float64) {
	col, u, okX := s.cols.cell(x)
	row, v, okY := s.rows.cell(y)
	if !okX || !okY {
		return math.NaN(), math.NaN(), math.NaN()
	}
	z00, z10, z01, z11 := s.corners(col, row)
	east, north, twist := z10-z00, z01-z00, (z11-z01)-(z10-z00)
	return z00 + (u*east + v*north + u*v*twist), (east + v*twist) / s.cols.step, (north + u*twist) / s.rows.step
}
