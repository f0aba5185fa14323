package geo

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// maxCell is the greatest number of a cell, so that numbers are exact.
const maxCell = 1 << 40

// maxCellTrials bounds the search for the default cell. It ends within a few trials,
// later where a few points lie very far from each other.
const maxCellTrials = 50

// surfacePoint is a surface point with its cell.
type surfacePoint struct {
	col, row   int
	x, y, z, t float64
}

// compare orders points by cell, then by value, so that no sum depends on the order
// in which the points came.
func (p surfacePoint) compare(q surfacePoint) int {
	if p.row != q.row {
		return cmp.Compare(p.row, q.row)
	}
	if p.col != q.col {
		return cmp.Compare(p.col, q.col)
	}
	if p.x != q.x {
		return cmp.Compare(p.x, q.x)
	}
	return cmp.Or(cmp.Compare(p.y, q.y), cmp.Compare(p.z, q.z), cmp.Compare(p.t, q.t))
}

// gridBuilder makes a Grid.
type gridBuilder struct {
	options GridOptions
	points  []surfacePoint // sorted
	cells   []cellRun
	places  [][2]int   // column and row of each node
	slots   *cellTable // number of a cell's run plus 1
	grid    *Grid
	fitter  patchFitter
	near    []sample // around the cell in work: by time, then those without
	part    []sample
}

// cellRun is a cell with points, points[first:end].
type cellRun struct{ col, row, first, end int }

// take keeps the points with finite coordinates; a time that is not finite is none.
func (b *gridBuilder) take(x, y, z, t []float64) {
	b.points = make([]surfacePoint, 0, len(x))
	for i := range x {
		if !isFinite(x[i], y[i], z[i]) {
			continue
		}
		p := surfacePoint{x: x[i], y: y[i], z: z[i], t: math.NaN()}
		if t != nil && isFinite(t[i]) {
			p.t = t[i]
		}
		b.points = append(b.points, p)
	}
}

// build makes the grid from what was taken of n points.
func (b *gridBuilder) build(n int) (*Grid, error) {
	b.grid = &Grid{options: b.options, perMetre: 1 / b.options.Cell}
	b.fitter.radius = patchRadius * b.options.Cell
	if err := b.sortCells(); err != nil {
		return nil, err
	}
	b.addNodes()
	if len(b.grid.nodes) == 0 {
		return nil, fmt.Errorf("no cell of %v m has enough of the %d surface points near it, want %d points around it: take larger cells",
			b.options.Cell, len(b.points), minPlane)
	}
	b.addGaps()
	b.describe(n)
	return b.grid, nil
}

// sortCells sorts the points into cells and makes the tables.
func (b *gridBuilder) sortCells() error {
	low, high := [2]float64{math.Inf(1), math.Inf(1)}, [2]float64{math.Inf(-1), math.Inf(-1)}
	for i := range b.points {
		p := &b.points[i]
		col, row := math.Floor(p.x/b.options.Cell), math.Floor(p.y/b.options.Cell)
		if !(math.Abs(col) < maxCell && math.Abs(row) < maxCell) {
			return fmt.Errorf("surface point at %v %v m is too far away for cells of %v m", p.x, p.y, b.options.Cell)
		}
		p.col, p.row = int(col), int(row)
		low = [2]float64{min(low[0], col), min(low[1], row)}
		high = [2]float64{max(high[0], col), max(high[1], row)}
	}
	slices.SortFunc(b.points, surfacePoint.compare)
	margin := patchRadius + int(b.options.Reach)
	var err error
	for _, table := range []**cellTable{&b.slots, &b.grid.table} {
		*table, err = newCellTable(int(low[0])-margin, int(low[1])-margin, int(high[0])+margin, int(high[1])+margin)
		if err != nil {
			return err
		}
	}
	b.runs()
	return nil
}

// runs finds the run of points of each cell.
func (b *gridBuilder) runs() {
	for i := range b.points {
		p := &b.points[i]
		if i == 0 || p.col != b.points[i-1].col || p.row != b.points[i-1].row {
			b.cells = append(b.cells, cellRun{col: p.col, row: p.row, first: i})
			*b.slots.at(p.col, p.row) = int32(len(b.cells))
		}
		b.cells[len(b.cells)-1].end = i + 1
	}
}

// addGaps marks the cells without a patch that lie within reach of one, and lists
// the cells that a fill looks at.
func (b *gridBuilder) addGaps() {
	g, reach := b.grid, b.options.Reach
	for row := -int(reach); row <= int(reach); row++ {
		for col := -int(reach); col <= int(reach); col++ {
			if d2 := float64(col*col + row*row); d2 > 0 && d2 <= reach*reach {
				g.fills = append(g.fills, fill{col, row, float64(col) * b.options.Cell, float64(row) * b.options.Cell, 1 / (d2 * d2)})
			}
		}
	}
	for _, place := range b.places {
		if b.isInner(place) {
			continue
		}
		for _, f := range g.fills {
			if at := g.table.at(place[0]+f.col, place[1]+f.row); *at == 0 {
				*at = gap
			}
		}
	}
}

// isInner tells whether all eight cells around a node have patches, so that no gap
// is nearer to it than to another one.
func (b *gridBuilder) isInner(place [2]int) bool {
	for row := place[1] - 1; row <= place[1]+1; row++ {
		for col := place[0] - 1; col <= place[0]+1; col++ {
			if b.grid.table.get(col, row) <= 0 {
				return false
			}
		}
	}
	return true
}

// describe takes the grid's numbers, of n points.
func (b *gridBuilder) describe(n int) {
	sigmas := make([]float64, len(b.grid.patches))
	for i := range sigmas {
		sigmas[i] = b.grid.patches[i].sigma
	}
	b.grid.stats = GridStats{
		Cell: b.options.Cell, Used: len(b.points), Ignored: n - len(b.points),
		Cells: len(b.grid.nodes), Patches: len(sigmas), Sigma: median(sigmas),
	}
}

// defaultCell returns the side (m) of the cells that hold pointsPerCell points on
// average, empty cells left out. It starts with the rectangle around the points and
// comes closer with the points that the cells in use hold.
func defaultCell(points []surfacePoint) float64 {
	low, high := points[0], points[0]
	for _, p := range points {
		low.x, low.y = min(low.x, p.x), min(low.y, p.y)
		high.x, high.y = max(high.x, p.x), max(high.y, p.y)
	}
	long := max(high.x-low.x, high.y-low.y)
	if long == 0 {
		return 1 // any cell holds them all
	}
	cell := long
	for range maxCellTrials {
		used := map[[2]int]struct{}{}
		for _, p := range points {
			used[[2]int{int((p.x - low.x) / cell), int((p.y - low.y) / cell)}] = struct{}{}
		}
		share := pointsPerCell / (float64(len(points)) / float64(len(used)))
		cell = min(cell*math.Sqrt(share), long)
		if math.Abs(share-1) < 0.02 {
			break
		}
	}
	return cell
}
