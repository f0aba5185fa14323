package geo

import (
	"math"
	"slices"
)

const (
	// nearestCount is how many stations a point takes its water from.
	nearestCount = 8
	// cellsPerSite and maxBounds choose the cells of a nearIndex; maxBounds keeps it
	// below 8 MiB.
	cellsPerSite = 16
	maxBounds    = 1 << 20
)

// nearIndex knows, for each cell of a grid, all sites by their distance from the cell.
// A search reads the list of the point's cell until no later site can be nearer than
// those found, so it is exact also where sites take no part.
type nearIndex struct {
	cols, rows axis
	count      int
	bounds     []bound // count for each cell
}

// bound is a site and the square of a distance (m2, as a float32) that no point of the
// cell falls below: the bits of the distance above those of the site's number, so that
// bounds have the order of the distances, then of the numbers.
type bound uint64

func newBound(distance2 float64, site int) bound {
	return bound(math.Float32bits(float32(distance2)))<<32 | bound(site)
}

func (b bound) distance2() float64 { return float64(math.Float32frombits(uint32(b >> 32))) }

func (b bound) site() int32 { return int32(uint32(b)) }

// newNearIndex returns the index of at least one site. The grid reaches beyond the
// sites by half their larger extent; cells at its rim reach on without end.
func newNearIndex(x, y []float64) nearIndex {
	left, right, low, high := slices.Min(x), slices.Max(x), slices.Min(y), slices.Max(y)
	margin := max(right-left, high-low) / 2
	left, right, low, high = left-margin, right+margin, low-margin, high+margin
	cells := float64(max(min(cellsPerSite*len(x), maxBounds/len(x)), 1))
	across := 1.0
	if margin > 0 {
		across = min(max(math.Sqrt(cells*((right-left)/(high-low))), 1), cells)
	}
	n := nearIndex{
		cols: newAxis(left, right, int(across)), rows: newAxis(low, high, int(cells/across)), count: len(x),
	}
	n.bounds = make([]bound, 0, n.cols.n*n.rows.n*n.count)
	for row := range n.rows.n {
		for col := range n.cols.n {
			n.appendCell(col, row, x, y)
		}
	}
	return n
}

// appendCell appends the list of a cell.
func (n *nearIndex) appendCell(col, row int, x, y []float64) {
	first := len(n.bounds)
	for k := range x {
		dx, dy := n.cols.apart(col, x[k]), n.rows.apart(row, y[k])
		d2 := (dx*dx + dy*dy) * (1 - 0x1p-20) // so that the rounding to float32 stays below
		n.bounds = append(n.bounds, newBound(d2, k))
	}
	slices.Sort(n.bounds[first:])
}

// apart returns the distance of v from a cell of the axis, less than it is by a 16th
// of a cell; the first and the last cell have no outer end.
func (a *axis) apart(cell int, v float64) float64 {
	low, high := math.Inf(-1), math.Inf(1)
	if cell > 0 {
		low = a.at(float64(cell) - 1.0/16)
	}
	if cell < a.n-1 {
		high = a.at(float64(cell) + 17.0/16)
	}
	return max(low-v, v-high, 0)
}

// of returns the list of the cell of a point.
func (n *nearIndex) of(x, y float64) []bound {
	cell := n.rows.cell(y)*n.cols.n + n.cols.cell(x)
	return n.bounds[cell*n.count : (cell+1)*n.count]
}

// nearest holds the sites nearest to a point, by their numbers once settled, and where
// and when they are the same ones.
type nearest struct {
	count        int
	site         [nearestCount + 1]int32
	distance2    [nearestCount + 1]float64 // m2
	worst        float64                   // a site farther than this (m2) need not be offered
	x, y, reach2 float64                   // for points nearer to x, y than a reach (squared, m2)
	after, until float64                   // and times between these
}

// covers tells whether the nearest sites are those of another point and time, too.
func (n *nearest) covers(x, y, utc float64) bool {
	dx, dy := x-n.x, y-n.y
	return dx*dx+dy*dy < n.reach2 && utc > n.after && utc < n.until
}

// offer takes a site at the square of a distance (m2) if it is among the nearest, of
// equal ones that with the lower number first, or next after them; not at NaN.
func (n *nearest) offer(distance2 float64, site int32) {
	if !(distance2 <= n.worst) {
		return
	}
	k := n.count
	if k <= nearestCount {
		n.count++
	} else {
		k-- // the one after the nearest gives way
	}
	for ; k > 0 && (distance2 < n.distance2[k-1] || distance2 == n.distance2[k-1] && site < n.site[k-1]); k-- {
		n.distance2[k], n.site[k] = n.distance2[k-1], n.site[k-1]
	}
	n.distance2[k], n.site[k] = distance2, site
	if n.count > nearestCount {
		n.worst = n.distance2[nearestCount]
	}
}

// settle ends a search. Moving a point by r moves each distance by r at most, so the
// nearest stay the nearest within half of what the next one is farther; less a
// margin for roundings. Sites go by number, so sums over them do not depend on the
// point that was searched for.
func (n *nearest) settle() {
	n.reach2 = math.Inf(1)
	if n.count > nearestCount {
		n.count = nearestCount
		last, next := math.Sqrt(n.distance2[nearestCount-1]), math.Sqrt(n.distance2[nearestCount])
		reach := max((next-last)/2-1e-9*next, 0)
		n.reach2 = reach * reach
	}
	slices.Sort(n.site[:n.count])
}
