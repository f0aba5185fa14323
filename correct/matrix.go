package correct

import (
	"math"

	"bentray/correct/optics"
)

// matrix is a 3 by 3 matrix by its rows.
type matrix struct{ x, y, z optics.Vec }

// singular is the volume of the rows' directions below which a matrix has no inverse: what
// rounding leaves of it is some 1e-16. Two rays 1e-6 radians apart still have 1e-12.
const singular = 1e-14

// addOuter adds the outer product v wT.
func (m *matrix) addOuter(v, w optics.Vec) {
	m.x = m.x.Add(w.Scale(v.X))
	m.y = m.y.Add(w.Scale(v.Y))
	m.z = m.z.Add(w.Scale(v.Z))
}

// times returns m v.
func (m *matrix) times(v optics.Vec) optics.Vec {
	return optics.Vec{X: m.x.Dot(v), Y: m.y.Dot(v), Z: m.z.Dot(v)}
}

// solve returns the x with m x = v by Cramer's rule. It is false for a
// singular m and one that is not finite.
func (m *matrix) solve(v optics.Vec) (optics.Vec, bool) {
	yz, zx, xy := m.y.Cross(m.z), m.z.Cross(m.x), m.x.Cross(m.y)
	volume := m.x.Dot(yz)
	scale := math.Sqrt(m.x.Dot(m.x) * m.y.Dot(m.y) * m.z.Dot(m.z))
	if !(math.Abs(volume) > singular*scale) {
		return optics.Vec{}, false
	}
	sum := yz.Scale(v.X).Add(zx.Scale(v.Y)).Add(xy.Scale(v.Z))
	return sum.Scale(1 / volume), true
}

// diagonal returns s times the unit matrix.
func diagonal(s float64) matrix {
	return matrix{optics.Vec{X: s}, optics.Vec{Y: s}, optics.Vec{Z: s}}
}

func (m *matrix) add(b *matrix) {
	m.x, m.y, m.z = m.x.Add(b.x), m.y.Add(b.y), m.z.Add(b.z)
}
