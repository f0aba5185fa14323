package correct

import (
	"math"
	"slices"

	"bentray/correct/optics"
)

// Solve is how Multiview undoes the refraction of intersected rays.
type Solve uint8

// The ways to solve.
const (
	// Invert finds the point whose refracted rays, prolonged straight from the cameras, the
	// triangulation intersected at the raw point. Exact for the Residual it had.
	Invert Solve = iota
	// Intersect refracts each raw ray at the surface and intersects them again.
	Intersect
	// Average keeps the plan position and takes the mean of the depths that each raw
	// ray gives by itself.
	Average
)

// MultiviewSolver corrects points that a triangulation intersected from images, taken through
// the water surface or through a Port. The zero value is ready; it holds room for the rays of
// one point, so each goroutine needs its own.
type MultiviewSolver struct {
	sights []sight
	stack  optics.Stack
}

// Solve corrects the points whose indices are listed, or all where points is nil, and
// leaves all others in dst and out as they are. Of the listed ones it takes those that are
// Corrected. It writes all columns of dst: WaterLevel is that of the plane of the
// point's first ray at the true plan position, EntryLevel, IncidenceRad and RefractionRad are
// means over the rays. With a Port there is no water surface: Depth, WaterLevel and EntryLevel are
// NaN, and the angles are from the port's normal, in the housing and in the water. A point that
// is not Corrected keeps its raw position. New outcomes:
//   - NoSurface: a ray has no surface.
//   - NoOrigin: see MarkNoCameras.
//   - FewRays: fewer than two rays.
//   - Grazing: a ray's incidence is not within b.MaxIncidenceRad, or a raw ray is totally
//     reflected. IncidenceRad is written all the same. Invert looks at the rays of
//     the solution, and at the raw rays where there is none. So does a raw point behind a
//     Port or its camera; a ray from behind has more than pi/2.
//   - Unsolved: the rays are parallel or too nearly so, a camera of the image residual
//     looks away from the point, the method did not converge to a point beyond the surface, an
//     index is not positive and finite, or the result is not finite.
//
// dst.XYZ may be the raw columns themselves, once; a Warm start needs them apart.
// Columns of other lengths than these panic: one value per point (len(out)), one
// plane per ray.
func (s *MultiviewSolver) Solve(dst *Result, out []Outcome, points []int32, raw XYZ, b *Bundle) {
	dst.mustHave(len(out))
	raw.mustHave(len(out))
	b.mustHave(len(out))
	if points == nil {
		for i := range out {
			s.point(dst, out, i, raw, b)
		}
		return
	}
	for _, i := range points {
		s.point(dst, out, int(i), raw, b)
	}
}

// point corrects point i.
func (s *MultiviewSolver) point(dst *Result, out []Outcome, i int, raw XYZ, b *Bundle) {
	if out[i] == Dry {
		return
	}
	point, last := raw.at(i), dst.at(i)
	dst.keep(i, point)
	if out[i] != Corrected {
		return
	}
	if out[i] = s.gather(i, point, b); out[i] != Corrected {
		return
	}
	p, o := s.solve(i, last.Sub(point), b)
	near, far, widest := s.incidence(o)
	if !(widest <= b.MaxIncidenceRad) || o == Grazing {
		out[i], dst.IncidenceRad[i] = Grazing, near
		return
	}
	if out[i] = o; o == Corrected {
		dst.IncidenceRad[i], dst.RefractionRad[i] = near, far
		out[i] = s.put(dst, i, point, p, b)
	}
}

// gather fills s.sights with the rays of point i.
func (s *MultiviewSolver) gather(i int, point optics.Vec, b *Bundle) Outcome {
	from, to := b.of(i)
	s.sights = slices.Grow(s.sights[:0], to-from)[:to-from]
	facing := true
	for k := range s.sights {
		if !b.sight(&s.sights[k], i, from+k, point) {
			return NoSurface
		}
		facing = facing && b.isFacing(&s.sights[k])
	}
	switch {
	case !facing:
		return NoOrigin
	case to-from < 2:
		return FewRays
	}
	return Corrected
}

// solve returns the true point relative to the raw one. from is where a warm start begins.
// Where there is no solution the outcome is Unsolved, or Grazing where a raw ray
// is totally reflected.
func (s *MultiviewSolver) solve(i int, from optics.Vec, b *Bundle) (optics.Vec, Outcome) {
	if !b.hasPhase(i) {
		return optics.Vec{}, Unsolved
	}
	b.setStack(&s.stack, i)
	var p optics.Vec
	ok := true
	switch b.Solve {
	case Invert:
		p, ok = s.invertFrom(i, from, b)
	case Intersect:
		p, ok = s.intersect()
	default:
		p, ok = s.average(b)
	}
	if ok && s.areBeyond(p) {
		return p, Corrected
	}
	if s.isReflected(b) {
		return p, Grazing
	}
	return p, Unsolved
}

// isReflected reports whether a raw ray is totally reflected, or does not come down to its
// plane at all; with a Port also whether the raw point is not beyond it.
func (s *MultiviewSolver) isReflected(b *Bundle) bool {
	for k := range s.sights {
		if r := &s.sights[k]; !r.bend(&s.stack) || b.Port != nil && !(r.rise > 0) {
			return true
		}
	}
	return false
}

// incidence returns the mean angles of the rays from their normals on both sides, and
// the largest on the camera's: of the solved rays, or of the raw ones.
func (s *MultiviewSolver) incidence(o Outcome) (near, far, widest float64) {
	for k := range s.sights {
		r := &s.sights[k]
		var i, t float64
		if o == Corrected {
			i, t = r.angles()
		} else {
			i, t = r.rawIncidence(&s.stack), math.NaN()
		}
		near, far, widest = near+i, far+t, max(widest, i)
	}
	n := float64(len(s.sights))
	return near / n, far / n, widest
}

// put writes where point i is and how deep, and returns its final outcome.
func (s *MultiviewSolver) put(dst *Result, i int, point, p optics.Vec, b *Bundle) Outcome {
	end := point.Add(p)
	if b.Port != nil {
		return dst.putPoint(i, point, end)
	}
	from, _ := b.of(i)
	first := b.Planes.around(from, point.Z)
	level, entry := first.levelAt(p), 0.0
	for k := range s.sights {
		surface := b.Planes.around(from+k, point.Z)
		at := s.sights[k].entry(&s.stack)
		entry += surface.level - first.level + surface.climb(at)
		if b.EntryX != nil {
			b.EntryX[from+k], b.EntryY[from+k] = point.X+at.X, point.Y+at.Y
		}
	}
	depth := level - end.Z
	if !isFiniteVec(end) || !isFinite(depth) {
		dst.keep(i, point)
		return Unsolved
	}
	dst.X[i], dst.Y[i], dst.Z[i] = end.X, end.Y, end.Z
	dst.Depth[i], dst.WaterLevel[i] = depth, level
	dst.EntryLevel[i] = first.level + entry/float64(len(s.sights))
	return Corrected
}
