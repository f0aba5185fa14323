package geo

import (
	"fmt"
	"math"
)

const (
	tileSide = 16 // cells along a side of a tile
	tileSize = tileSide * tileSide
	maxTiles = 1 << 22 // 16 MiB of tile numbers
)

// cellTable holds one number for each cell of a large raster of which most is
// empty: 0 where nothing was put. It keeps tiles of 16 by 16 cells, only those in
// use, so memory follows the water and not the rectangle around it.
type cellTable struct {
	col0, row0   int // first cell
	cols, rows   int // cells; whole tiles
	tilesAcross  int
	tiles, cells []int32 // tiles holds where a tile starts in cells, plus 1
}

// newCellTable returns an empty table of the cells from col0, row0 to col1, row1.
func newCellTable(col0, row0, col1, row1 int) (*cellTable, error) {
	across, up := (col1-col0)/tileSide+1, (row1-row0)/tileSide+1
	if float64(across)*float64(up) > maxTiles {
		return nil, fmt.Errorf("surface points span %d by %d cells, want at most %.0f million: look for points far away, or take larger cells",
			col1-col0+1, row1-row0+1, math.Floor(maxTiles*tileSize/1e6))
	}
	return &cellTable{
		col0: col0, row0: row0, cols: across * tileSide, rows: up * tileSide,
		tilesAcross: across, tiles: make([]int32, across*up),
	}, nil
}

// get returns the number of a cell, 0 outside the table.
func (c *cellTable) get(col, row int) int32 {
	col -= c.col0
	row -= c.row0
	if uint(col) >= uint(c.cols) || uint(row) >= uint(c.rows) {
		return 0
	}
	tile := c.tiles[row/tileSide*c.tilesAcross+col/tileSide]
	if tile == 0 {
		return 0
	}
	return c.cells[int(tile)-1+row%tileSide*tileSide+col%tileSide]
}

// at returns the place of a cell within the table, for writing; it is valid until
// the next call.
func (c *cellTable) at(col, row int) *int32 {
	col -= c.col0
	row -= c.row0
	tile := &c.tiles[row/tileSide*c.tilesAcross+col/tileSide]
	if *tile == 0 {
		*tile = int32(len(c.cells)) + 1
		c.cells = append(c.cells, make([]int32, tileSize)...)
	}
	return &c.cells[int(*tile)-1+row%tileSide*tileSide+col%tileSide]
}
