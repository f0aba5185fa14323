package quality

import (
	"cmp"
	"math"
	"slices"
	"sync"

	"bentray/geo"
)

// checkIndex finds the check points about a place: every square cell lists those that
// a point in it may be within reach of.
type checkIndex struct {
	x, y, z   []float64
	reach     float64
	cells     map[[2]int64]int32 // first entry of a cell's list
	entries   []checkEntry       // the first is none
	left, low float64            // corner that cells count from
	right, up float64
}

// checkEntry is a check point in the list of a cell; next is 0 at its end.
type checkEntry struct{ point, next int32 }

func newCheckIndex(x, y, z []float64, reach float64) *checkIndex {
	k := &checkIndex{
		x: x, y: y, z: z, reach: reach, cells: map[[2]int64]int32{}, entries: make([]checkEntry, 1, 1+4*len(x)),
		left: slices.Min(x) - reach, low: slices.Min(y) - reach, right: slices.Max(x) + reach, up: slices.Max(y) + reach,
	}
	for i := range x {
		from, to := k.cell(x[i]-reach, y[i]-reach), k.cell(x[i]+reach, y[i]+reach)
		for col := from[0]; col <= to[0]; col++ {
			for row := from[1]; row <= to[1]; row++ {
				at := [2]int64{col, row}
				k.entries = append(k.entries, checkEntry{int32(i), k.cells[at]})
				k.cells[at] = int32(len(k.entries) - 1)
			}
		}
	}
	return k
}

// cell returns the number of a place's cell; cells are twice as wide as the reach, so
// that a check point is listed in four.
func (k *checkIndex) cell(x, y float64) [2]int64 {
	return [2]int64{int64((x - k.left) / (2 * k.reach)), int64((y - k.low) / (2 * k.reach))}
}

// about returns the first entry of those that may be within reach of a place; 0 where
// there are none.
func (k *checkIndex) about(x, y float64) int32 {
	if !(x >= k.left && x <= k.right && y >= k.low && y <= k.up) {
		return 0
	}
	return k.cells[k.cell(x, y)]
}

// neighbour is a corrected point near a check point: its offset, height and level.
type neighbour struct{ u, v, z, level float64 }

func (n neighbour) distance2() float64 { return n.u*n.u + n.v*n.v }

// compare orders neighbours by distance. Those that are equal in it are equal in all, so
// that the nearest do not depend on the order of arrival.
func (n neighbour) compare(o neighbour) int {
	return cmp.Or(cmp.Compare(n.distance2(), o.distance2()), cmp.Compare(n.u, o.u), cmp.Compare(n.v, o.v), cmp.Compare(n.z, o.z), cmp.Compare(n.level, o.level))
}

// Bounds of the memory: check points, neighbours of all of them together, and of one.
const (
	maxChecks     = 250_000
	allNeighbours = 1_000_000
	maxNeighbours = 500
	minNeighbours = 8
)

// matcher keeps, for every check point, the nearest corrected points. Files that are
// compared side by side share it.
type matcher struct {
	*checkIndex
	most  int            // neighbours kept of a check point
	locks [64]sync.Mutex // of check points by their number
	near  [][]neighbour  // by check point; in order once there are as many as are kept
	isDry []bool         // a dry point is within reach
}

func newMatcher(k *checkIndex, match string) *matcher {
	m := &matcher{checkIndex: k, most: 1, near: make([][]neighbour, len(k.x)), isDry: make([]bool, len(k.x))}
	if match == MatchPlane {
		m.most = min(max(allNeighbours/len(k.x), minNeighbours), maxNeighbours)
	}
	return m
}

// offer takes a corrected point.
func (m *matcher) offer(x, y, z, level float64) {
	for e := m.about(x, y); e > 0; e = m.entries[e].next {
		i := m.entries[e].point
		n := neighbour{x - m.x[i], y - m.y[i], z, level}
		if n.distance2() <= m.reach*m.reach {
			m.keep(i, n)
		}
	}
}

// dry takes a dry point.
func (m *matcher) dry(x, y float64) {
	for e := m.about(x, y); e > 0; e = m.entries[e].next {
		i := m.entries[e].point
		if u, v := x-m.x[i], y-m.y[i]; u*u+v*v <= m.reach*m.reach {
			lock := &m.locks[int(i)%len(m.locks)]
			lock.Lock()
			m.isDry[i] = true
			lock.Unlock()
		}
	}
}

// keep adds a neighbour if it is among the nearest.
func (m *matcher) keep(i int32, n neighbour) {
	lock := &m.locks[int(i)%len(m.locks)]
	lock.Lock()
	defer lock.Unlock()
	list := m.near[i]
	if len(list) < m.most {
		if len(list) == cap(list) {
			list = slices.Grow(list, min(max(len(list), minNeighbours), m.most-len(list)))
		}
		if m.near[i] = append(list, n); len(list)+1 == m.most {
			slices.SortFunc(m.near[i], neighbour.compare)
		}
		return
	}
	if at, _ := slices.BinarySearchFunc(list, n, neighbour.compare); at < len(list) {
		copy(list[at+1:], list[at:])
		list[at] = n
	}
}

// points matches all check points; lengths in plan and heights have so many metres a
// unit.
func (m *matcher) points(match string, plan, height float64) []CheckPoint {
	list := make([]CheckPoint, len(m.x))
	var fit planeMatch
	for i := range list {
		near := m.near[i]
		slices.SortFunc(near, neighbour.compare)
		p := &list[i]
		*p = CheckPoint{X: m.x[i], Y: m.y[i], Z: m.z[i], Corrected: math.NaN(), Depth: math.NaN(), Scatter: math.NaN(), Near: len(near)}
		if len(near) > 0 {
			p.Depth = near[0].level - p.Z
			if match == MatchPlane {
				p.Corrected, p.Scatter = fit.level(near, m.reach, plan, height)
			} else {
				p.Corrected = near[0].z
			}
		}
		p.Residual = p.Corrected - p.Z
	}
	return list
}

// normalMAD turns the median of magnitudes into the standard deviation of normal values
// (Rousseeuw and Croux 1993, Alternatives to the median absolute deviation).
const normalMAD = 1.4826

// planeMatch fits local planes, one after the other.
type planeMatch struct {
	plane   geo.LocalPlane
	u, v, z []float64
}

// level returns the height of the plane at the check point and how far the neighbours
// scatter about the plane, NaN where they do not give one.
func (f *planeMatch) level(near []neighbour, reach, plan, height float64) (level, scatter float64) {
	f.u, f.v, f.z = f.u[:0], f.v[:0], f.z[:0]
	for _, n := range near {
		f.u, f.v, f.z = append(f.u, n.u*plan), append(f.v, n.v*plan), append(f.z, n.z*height)
	}
	level, slopeX, slopeY, ok := f.plane.Fit(f.u, f.v, f.z, reach*plan)
	if !ok {
		return math.NaN(), math.NaN()
	}
	for i := range f.z {
		f.z[i] = math.Abs(f.z[i] - level - slopeX*f.u[i] - slopeY*f.v[i])
	}
	return level / height, normalMAD * percentile(f.z, 0.5) / height
}
