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

// gridBuilder makes a Grid.
type gridBuilder struct {
	options GridOptions
	points  *SurfacePoints
	order   []uint32 // numbers of the points, cell by cell, in a cell by value
	cells   []cellRun
	places  [][2]int   // column and row of each node
	slots   *cellTable // number of a cell's run plus 1
	grid    *Grid
	fitter  patchFitter
	near    []sample // around the cell in work: by time, then those without
	part    []sample
}

// cellRun is a cell with points, those that order[first:end] names.
type cellRun struct{ col, row, first, end int }

// build makes the grid.
func (b *gridBuilder) build() (*Grid, error) {
	b.grid = &Grid{options: b.options, perMetre: 1 / b.options.Cell}
	b.fitter.radius = patchRadius * b.options.Cell
	if err := b.sortCells(); err != nil {
		return nil, err
	}
	b.addNodes()
	if len(b.grid.nodes) == 0 {
		return nil, fmt.Errorf("no cell of %v m has enough of the %d surface points near it, want %d points around it: take larger cells",
			b.options.Cell, b.points.held, minPlane)
	}
	b.addGaps()
	b.describe()
	return b.grid, nil
}

// cellOf returns the cell of a position.
func (b *gridBuilder) cellOf(x, y float64) (col, row int) {
	return int(math.Floor(x / b.options.Cell)), int(math.Floor(y / b.options.Cell))
}

// sortCells makes the tables and sorts the points into cells.
func (b *gridBuilder) sortCells() error {
	low, high := b.points.Bounds()
	for _, corner := range [][2]float64{low, high} {
		if far := max(math.Abs(corner[0]), math.Abs(corner[1])); !(far/b.options.Cell < maxCell) {
			return fmt.Errorf("surface points reach out to %v %v m, too far away for cells of %v m", corner[0], corner[1], b.options.Cell)
		}
	}
	margin := patchRadius + int(b.options.Reach)
	left, bottom := b.cellOf(low[0], low[1])
	right, top := b.cellOf(high[0], high[1])
	for _, table := range []**cellTable{&b.slots, &b.grid.table} {
		var err error
		if *table, err = newCellTable(left-margin, bottom-margin, right+margin, top+margin); err != nil {
			return err
		}
	}
	b.countCells()
	b.fillCells()
	return nil
}

// countCells finds the cells with points, row by row, and how many each holds: its
// run is then empty, and as long as the next one leaves room.
func (b *gridBuilder) countCells() {
	b.points.each(func(_ uint32, p *surfacePoint) {
		col, row := b.cellOf(p.x, p.y)
		slot := b.slots.at(col, row)
		if *slot == 0 {
			b.cells = append(b.cells, cellRun{col: col, row: row})
			*slot = int32(len(b.cells))
		}
		b.cells[*slot-1].end++
	})
	slices.SortFunc(b.cells, func(a, c cellRun) int { return cmp.Or(cmp.Compare(a.row, c.row), cmp.Compare(a.col, c.col)) })
	first := 0
	for k := range b.cells {
		run := &b.cells[k]
		*b.slots.at(run.col, run.row) = int32(k + 1)
		count := run.end
		run.first, run.end = first, first
		first += count
	}
}

// fillCells puts each point's number into the run of its cell, sorted by value.
func (b *gridBuilder) fillCells() {
	b.order = make([]uint32, b.points.held)
	b.points.each(func(number uint32, p *surfacePoint) {
		run := &b.cells[*b.slots.at(b.cellOf(p.x, p.y))-1]
		b.order[run.end] = number
		run.end++
	})
	for _, run := range b.cells {
		slices.SortFunc(b.order[run.first:run.end], func(p, q uint32) int { return b.points.at(p).compare(b.points.at(q)) })
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

// describe takes the grid's numbers.
func (b *gridBuilder) describe() {
	sigmas := make([]float64, len(b.grid.patches))
	for i := range sigmas {
		sigmas[i] = b.grid.patches[i].sigma
	}
	b.grid.stats = GridStats{
		Cell: b.options.Cell, Used: b.points.held, Ignored: b.points.given - b.points.held,
		Cells: len(b.grid.nodes), Patches: len(sigmas), Sigma: median(sigmas),
	}
}

// defaultCell returns the side (m) of the cells that hold pointsPerCell points on
// average, empty cells left out. It starts with the rectangle around the points and
// comes closer with the points that the cells in use hold.
func defaultCell(points *SurfacePoints) float64 {
	low, high := points.Bounds()
	long := max(high[0]-low[0], high[1]-low[1])
	if long == 0 {
		return 1 // any cell holds them all
	}
	cell := long
	for range maxCellTrials {
		used := map[[2]int]struct{}{}
		points.each(func(_ uint32, p *surfacePoint) {
			used[[2]int{int((p.x - low[0]) / cell), int((p.y - low[1]) / cell)}] = struct{}{}
		})
		share := pointsPerCell / (float64(points.held) / float64(len(used)))
		cell = min(cell*math.Sqrt(share), long)
		if math.Abs(share-1) < 0.02 {
			break
		}
	}
	return cell
}
