package correct

import "bentray/correct/optics"

// EntryPlan fills x, y (m), one value per ray, with the plan positions where the rays of the
// listed points (all where points is nil) cross their planes: with b.Solve Invert
// the rays traced to the points at, with Intersect and Average the straight raw
// rays. A surface with curvature is met by taking its planes anew at these
// places (see Views.CarryToRaw) and solving again, until they no longer move; the entries
// of Intersect are a good first guess for Invert.
//
// Rays of points that are not Corrected, and rays without an entry, get the point's raw position.
func (s *MultiviewSolver) EntryPlan(x, y []float64, out []Outcome, points []int32, raw, at XYZ, b *Bundle) {
	raw.mustHave(len(out))
	at.mustHave(len(out))
	b.mustHave(len(out))
	mustHave(len(b.Camera), x, y)
	if points == nil {
		for i := range out {
			s.entries(x, y, out, i, raw, at, b)
		}
		return
	}
	for _, i := range points {
		s.entries(x, y, out, int(i), raw, at, b)
	}
}

// entries fills the entries of point i's rays.
func (s *MultiviewSolver) entries(x, y []float64, out []Outcome, i int, raw, at XYZ, b *Bundle) {
	from, to := b.of(i)
	point := raw.at(i)
	for k := from; k < to; k++ {
		x[k], y[k] = point.X, point.Y
	}
	if out[i] != Corrected || !b.hasPhase(i) {
		return
	}
	b.setStack(&s.stack, i)
	p := at.at(i).Sub(point)
	var r sight
	for k := from; k < to; k++ {
		if b.sight(&r, i, k, point) && b.isFacing(&r) && r.cross(&s.stack, p, b.Solve) {
			entry := r.entry(&s.stack)
			x[k], y[k] = point.X+entry.X, point.Y+entry.Y
		}
	}
}

// cross takes the ray from p, or the straight raw ray, and reports whether it has an entry.
func (r *sight) cross(b *optics.Stack, p optics.Vec, by Solve) bool {
	if by != Invert {
		r.bend(b)
		return r.slopes.Near > 0
	}
	return r.trace(b, p) > 0
}

// CarryToRaw turns planes that were taken at the plan positions x, y (m), one per
// ray, into planes at the raw positions of the rays' points: the same planes, with the
// elevation there. It does so for the rays of the listed points, or of all where
// points is nil.
func (v *Views) CarryToRaw(s Planes, points []int32, raw XYZ, x, y []float64) {
	v.mustHave(len(raw.X))
	raw.mustHave(len(raw.X))
	s.mustHave(len(v.Camera))
	mustHave(len(v.Camera), x, y)
	if points == nil {
		for i := range raw.X {
			v.carry(s, i, raw, x, y)
		}
		return
	}
	for _, i := range points {
		v.carry(s, int(i), raw, x, y)
	}
}

// carry does so for the rays of point i.
func (v *Views) carry(s Planes, i int, raw XYZ, x, y []float64) {
	from, to := v.of(i)
	for k := from; k < to; k++ {
		s.Level[k] += s.SlopeX[k]*(raw.X[i]-x[k]) + s.SlopeY[k]*(raw.Y[i]-y[k])
	}
}
