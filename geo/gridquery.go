package geo

import "math"

// state is the surface at one position; the level is NaN where there is none.
type state struct{ level, sx, sy, sigma float64 }

// noState is the state where there is no surface.
var noState = state{level: math.NaN(), sx: math.NaN(), sy: math.NaN(), sigma: math.NaN()}

// add adds another state, weighted.
func (s *state) add(o state, weight float64) {
	s.level += weight * o.level
	s.sx += weight * o.sx
	s.sy += weight * o.sy
	s.sigma += weight * o.sigma
}

// at returns the surface at a position and time: the blend of the four cells whose
// centres surround it, of which the nearest one must have a surface. The sigma of
// filled cells counts if withSigma.
func (g *Grid) at(x, y, t float64, withSigma bool) state {
	cell := g.options.Cell
	fx, fy := x*g.perMetre-0.5, y*g.perMetre-0.5
	if !(math.Abs(fx) < maxCell && math.Abs(fy) < maxCell) {
		return noState
	}
	left, low := math.Floor(fx), math.Floor(fy)
	fx, fy = x-(left+0.5)*cell, y-(low+0.5)*cell
	nearest := 0
	if fx > cell/2 {
		nearest = 1
	}
	if fy > cell/2 {
		nearest += 2
	}
	var sum state
	total := 0.0
	for k := range 4 {
		corner := k ^ nearest
		right, up := corner&1, corner>>1
		u, v := fx-float64(right)*cell, fy-float64(up)*cell
		col, row := int(left)+right, int(low)+up
		weight := (cell - math.Abs(u)) * (cell - math.Abs(v))
		if p := g.patchOf(col, row, t); p != nil {
			level, sx, sy := p.at(u, v)
			sum.add(state{level, sx, sy, p.sigma}, weight)
		} else if s, ok := g.filled(col, row, t, withSigma); ok {
			s.level += s.sx*u + s.sy*v
			sum.add(s, weight)
		} else if k == 0 {
			return noState
		} else {
			continue
		}
		total += weight
	}
	return state{sum.level/total + g.options.Offset, sum.sx / total, sum.sy / total, sum.sigma / total}
}

// pick returns the patch of a node for a time: the one whose points all lie nearest
// to it, if they lie within the window; -1 where there is none.
func (g *Grid) pick(n int32, t float64) int32 {
	nd := &g.nodes[n]
	if math.IsNaN(t) {
		return nd.all
	}
	low, high := nd.first, nd.end // of the first patch whose last point is farther than its first
	for low < high {
		mid := (low + high) / 2
		if p := &g.patches[mid]; p.to-t >= t-p.from {
			high = mid
		} else {
			low = mid + 1
		}
	}
	best, distance := nd.loose, g.options.Window
	if low > nd.first && t-g.patches[low-1].from <= distance {
		best, distance = low-1, t-g.patches[low-1].from
	}
	if low < nd.end && g.patches[low].to-t <= distance {
		best = low
	}
	return best
}

// patchOf returns the patch of a cell for a time, nil where it has none.
func (g *Grid) patchOf(col, row int, t float64) *patch {
	if n := g.table.get(col, row); n > 0 {
		if k := g.pick(n-1, t); k >= 0 {
			return &g.patches[k]
		}
	}
	return nil
}

// filled returns the surface at the centre of a cell from the cells within reach:
// the mean of their slopes, and the mean of their levels, each carried to the centre
// with the mean of its own slope and that at the centre, which is exact for planes
// and, at the middle of a gap, for quadratics. False where none has a surface.
func (g *Grid) filled(col, row int, t float64, withSigma bool) (state, bool) {
	var sum state
	if g.table.get(col, row) == 0 {
		return sum, false
	}
	total, du, dv := 0.0, 0.0, 0.0
	for i := range g.fills {
		f := &g.fills[i]
		if p := g.patchOf(col+f.col, row+f.row, t); p != nil {
			sum.add(state{level: p.level - (p.sx*f.u+p.sy*f.v)/2, sx: p.sx, sy: p.sy}, f.weight)
			total += f.weight
			du += f.weight * f.u
			dv += f.weight * f.v
		}
	}
	sum.sx /= total
	sum.sy /= total
	sum.level = (sum.level - (sum.sx*du+sum.sy*dv)/2) / total
	if withSigma {
		sum.sigma = g.filledSigma(col, row, t, sum)
	}
	return sum, total > 0
}

// filledSigma returns the 1-sigma of a filled state s at the centre of a cell: the
// weighted scatter of what the cells within reach say about it, and their own sigmas.
func (g *Grid) filledSigma(col, row int, t float64, s state) float64 {
	sum, total := 0.0, 0.0
	for i := range g.fills {
		f := &g.fills[i]
		if p := g.patchOf(col+f.col, row+f.row, t); p != nil {
			d := p.level - ((p.sx+s.sx)*f.u+(p.sy+s.sy)*f.v)/2 - s.level
			sum += f.weight * (d*d + p.sigma*p.sigma)
			total += f.weight
		}
	}
	return math.Sqrt(sum / total)
}
