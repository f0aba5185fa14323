package correct

import "bentray/correct/optics"

// intersect returns the point, relative to the raw one, with the least sum of squared
// distances to the raw rays as they run beyond the surface. It is false where
// a ray does not cross the surface and where the rays are parallel.
func (s *MultiviewSolver) intersect() (optics.Vec, bool) {
	var all matrix
	var sum optics.Vec
	for k := range s.sights {
		r := &s.sights[k]
		if !r.bend(&s.stack) {
			return optics.Vec{}, false
		}
		d := r.far().Unit()
		across := diagonal(1)
		across.addOuter(d, d.Scale(-1))
		all.add(&across)
		sum = sum.Add(across.times(r.entry(&s.stack)))
	}
	return all.solve(sum)
}

// average returns the point straight below the raw one, relative to it, at the mean of the
// depths that each ray gives by itself: depth below its plane times tan(incidence) /
// tan(refraction), where the refracted ray crosses the plane's normal through
// the raw point. Depths are vertical, angles from the plane's normal (Dietrich 2017 for a
// level surface).
//
// With a Port it is the mean of the points where each refracted ray crosses the normal of its
// port through the raw point.
func (s *MultiviewSolver) average(b *Bundle) (optics.Vec, bool) {
	var sum optics.Vec
	for k := range s.sights {
		r := &s.sights[k]
		if !r.bend(&s.stack) {
			return optics.Vec{}, false
		}
		if b.Port != nil {
			sum = sum.Add(r.up.Scale(r.rise - r.crossNormal(&s.stack)))
		} else {
			sum.Z += r.rise / r.up.Z * (1 - r.slopes.Near/r.slopes.Far)
		}
	}
	n := float64(len(s.sights))
	return optics.Vec{X: sum.X / n, Y: sum.Y / n, Z: sum.Z / n}, true
}

// areBeyond reports whether p is on the far side of all planes.
func (s *MultiviewSolver) areBeyond(p optics.Vec) bool {
	for k := range s.sights {
		if !(s.sights[k].depth(p) > 0) {
			return false
		}
	}
	return true
}

// straightDown returns a point beyond the surface for rays that have no
// intersection: n times the depth, along the normal of the first.
func (s *MultiviewSolver) straightDown() optics.Vec {
	r := &s.sights[0]
	return r.up.Scale(r.rise * (1 - s.stack.Ratio()))
}
