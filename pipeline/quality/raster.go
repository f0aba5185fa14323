package quality

import "math"

// MapSide is the greatest number of cells of a Map along either axis.
const MapSide = 256

// raster adds shifts up in square cells, whose side doubles where the points range
// too far: so its size is bounded whatever the extent, and the side depends on the
// extent alone. Cell col, row lies at its numbers modulo MapSide.
type raster struct {
	exponent               int // side is 2^exponent
	count                  int64
	left, right, low, high int // cells in use
	cells                  []cell
}

type cell struct {
	count  int64
	dz, dh float64
}

// finestCell is the exponent that rasters begin with: 1/16.
const finestCell = -4

func newRaster() *raster { return &raster{exponent: finestCell} }

func (r *raster) at(col, row int) *cell {
	return &r.cells[(row&(MapSide-1))*MapSide+col&(MapSide-1)]
}

// add counts a point; one that is not finite is left out.
func (r *raster) add(x, y, dz, dh float64) {
	if !isBinned(x) || !isBinned(y) {
		return
	}
	col, row := int(math.Floor(math.Ldexp(x, -r.exponent))), int(math.Floor(math.Ldexp(y, -r.exponent)))
	if col < r.left || col > r.right || row < r.low || row > r.high || r.count == 0 {
		r.reach(col, row, col, row)
		shift := uint(r.exponent - finestCell)
		col, row = int(math.Floor(math.Ldexp(x, -finestCell)))>>shift, int(math.Floor(math.Ldexp(y, -finestCell)))>>shift
	}
	r.count++
	c := r.at(col, row)
	c.count++
	c.dz += dz
	c.dh += dh
}

// reach widens the cells in use, and their sides as often as that takes.
func (r *raster) reach(left, low, right, high int) {
	if r.count == 0 {
		r.left, r.low, r.right, r.high = left, low, right, high
		r.cells = make([]cell, MapSide*MapSide)
	}
	left, low, right, high = min(left, r.left), min(low, r.low), max(right, r.right), max(high, r.high)
	for right-left >= MapSide || high-low >= MapSide {
		r.double()
		left, low, right, high = left>>1, low>>1, right>>1, high>>1
	}
	r.left, r.low, r.right, r.high = left, low, right, high
}

// double makes four cells one.
func (r *raster) double() {
	old := *r
	r.exponent++
	if r.count == 0 {
		return
	}
	r.cells = make([]cell, MapSide*MapSide)
	r.left, r.low, r.right, r.high = r.left>>1, r.low>>1, r.right>>1, r.high>>1
	for row := old.low; row <= old.high; row++ {
		for col := old.left; col <= old.right; col++ {
			r.at(col>>1, row>>1).join(old.at(col, row))
		}
	}
}

func (c *cell) join(o *cell) {
	c.count += o.count
	c.dz += o.dz
	c.dh += o.dh
}

// join adds another raster, which may lose its finer cells by it.
func (r *raster) join(o *raster) {
	if o.count == 0 {
		return
	}
	for o.exponent < r.exponent {
		o.double()
	}
	for r.exponent < o.exponent {
		r.double()
	}
	r.reach(o.left, o.low, o.right, o.high)
	for o.exponent < r.exponent {
		o.double()
	}
	r.count += o.count
	for row := o.low; row <= o.high; row++ {
		for col := o.left; col <= o.right; col++ {
			r.at(col, row).join(o.at(col, row))
		}
	}
}

// report is the raster as means; nil where it has no point.
func (r *raster) report() *Map {
	if r.count == 0 {
		return nil
	}
	side := math.Ldexp(1, r.exponent)
	m := &Map{X: float64(r.left) * side, Y: float64(r.low) * side, Cell: side, Cols: r.right - r.left + 1, Rows: r.high - r.low + 1}
	for row := r.low; row <= r.high; row++ {
		for col := r.left; col <= r.right; col++ {
			c, n := r.at(col, row), math.NaN()
			if c.count > 0 {
				n = float64(c.count)
			}
			m.Count = append(m.Count, c.count)
			m.MeanDZ = append(m.MeanDZ, c.dz/n)
			m.MeanDH = append(m.MeanDH, c.dh/n)
		}
	}
	return m
}
