package quality

import (
	"cmp"
	"math"
	"slices"

	"bentray/geo"
)

// checkIndex finds the check points about a place: every square cell lists those that
// a point in it may be within reach of.
type checkIndex struct {
	x, y, z   []float64
	reach     float64
	cells     map[[2]int64][]int32
	left, low float64 // corner that cells count from
	right, up float64
	most      int // neighbours kept of a check point
}

// Neighbours of all check points together, and of one.
const (
	allNeighbours = 1_000_000
	maxNeighbours = 500
	minNeighbours = 16
)

func newCheckIndex(x, y, z []float64, reach float64, match string) *checkIndex {
	k := &checkIndex{
		x: x, y: y, z: z, reach: reach, cells: map[[2]int64][]int32{}, most: 1,
		left: slices.Min(x) - reach, low: slices.Min(y) - reach, right: slices.Max(x) + reach, up: slices.Max(y) + reach,
	}
	if match == MatchPlane {
		k.most = min(max(allNeighbours/len(x), minNeighbours), maxNeighbours)
	}
	for i := range x {
		from, to := k.cell(x[i]-reach, y[i]-reach), k.cell(x[i]+reach, y[i]+reach)
		for col := from[0]; col <= to[0]; col++ {
			for row := from[1]; row <= to[1]; row++ {
				at := [2]int64{col, row}
				k.cells[at] = append(k.cells[at], int32(i))
			}
		}
	}
	return k
}

func (k *checkIndex) cell(x, y float64) [2]int64 {
	return [2]int64{int64((x - k.left) / k.reach), int64((y - k.low) / k.reach)}
}

// about lists the check points that may be within reach of a place.
func (k *checkIndex) about(x, y float64) []int32 {
	if !(x >= k.left && x <= k.right && y >= k.low && y <= k.up) {
		return nil
	}
	return k.cells[k.cell(x, y)]
}

// neighbour is a corrected point near a check point: its offset, height and level.
type neighbour struct{ distance2, u, v, z, level float64 }

func (n neighbour) compare(o neighbour) int {
	return cmp.Or(cmp.Compare(n.distance2, o.distance2), cmp.Compare(n.u, o.u), cmp.Compare(n.v, o.v), cmp.Compare(n.z, o.z))
}

// matcher keeps, for every check point, the nearest corrected points of some files.
type matcher struct {
	*checkIndex
	near  [][]neighbour // by check point; as many as are kept twice over, at most
	isDry []bool        // a dry point is within reach
}

func newMatcher(k *checkIndex) *matcher {
	return &matcher{checkIndex: k, near: make([][]neighbour, len(k.x)), isDry: make([]bool, len(k.x))}
}

// offer takes a corrected point.
func (m *matcher) offer(x, y, z, level float64) {
	for _, i := range m.about(x, y) {
		u, v := x-m.x[i], y-m.y[i]
		if d2 := u*u + v*v; d2 <= m.reach*m.reach {
			m.keep(i, neighbour{d2, u, v, z, level})
		}
	}
}

// dry takes a dry point.
func (m *matcher) dry(x, y float64) {
	for _, i := range m.about(x, y) {
		if u, v := x-m.x[i], y-m.y[i]; u*u+v*v <= m.reach*m.reach {
			m.isDry[i] = true
		}
	}
}

// keep adds a neighbour if it is among the nearest. The list is halved where it
// has twice as many as are kept.
func (m *matcher) keep(i int32, n neighbour) {
	if m.near[i] = append(m.near[i], n); len(m.near[i]) >= 2*m.most {
		m.near[i] = m.nearest(i)
	}
}

// nearest returns the neighbours that are kept, the nearest first.
func (m *matcher) nearest(i int32) []neighbour {
	slices.SortFunc(m.near[i], neighbour.compare)
	return m.near[i][:min(len(m.near[i]), m.most)]
}

func (m *matcher) join(o *matcher) {
	for i := range m.near {
		for _, n := range o.near[i] {
			m.keep(int32(i), n)
		}
		m.isDry[i] = m.isDry[i] || o.isDry[i]
	}
}

// points matches all check points; lengths in plan and heights have so many metres a
// unit.
func (m *matcher) points(match string, plan, height float64) []CheckPoint {
	list := make([]CheckPoint, len(m.x))
	var fit planeMatch
	for i := range list {
		near := m.nearest(int32(i))
		p := &list[i]
		*p = CheckPoint{X: m.x[i], Y: m.y[i], Z: m.z[i], Corrected: math.NaN(), Depth: math.NaN(), Near: len(near)}
		if len(near) > 0 {
			p.Depth = near[0].level - p.Z
			if match == MatchPlane {
				p.Corrected = fit.level(near, m.reach, plan, height)
			} else {
				p.Corrected = near[0].z
			}
		}
		p.Residual = p.Corrected - p.Z
	}
	return list
}

// planeMatch fits local planes, one after the other.
type planeMatch struct {
	plane   geo.LocalPlane
	u, v, z []float64
}

// level returns the height of the plane at the check point, NaN where its neighbours
// do not give one.
func (f *planeMatch) level(near []neighbour, reach, plan, height float64) float64 {
	f.u, f.v, f.z = f.u[:0], f.v[:0], f.z[:0]
	for _, n := range near {
		f.u, f.v, f.z = append(f.u, n.u*plan), append(f.v, n.v*plan), append(f.z, n.z*height)
	}
	level, _, _, ok := f.plane.Fit(f.u, f.v, f.z, reach*plan)
	if !ok {
		return math.NaN()
	}
	return level / height
}
