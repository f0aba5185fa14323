package correct

import "bentray/correct/optics"

// Newton's method ends when its last full step is shorter than doneM, metres; what it
// leaves is of the order of that step's square. Usual are 3 steps.
const (
	doneM       = 1e-7
	newtonSteps = 30
)

// invertFrom inverts from the best start there is: the last solution, the
// intersection of the refracted raw rays, or n times the depth.
func (s *MultiviewSolver) invertFrom(i int, from optics.Vec, b *Bundle) (optics.Vec, bool) {
	first := b.Start[i]
	for k := range s.sights {
		if !s.sights[k].aimFor(b.Residual, b.Cameras, b.Camera[int(first)+k]) {
			return optics.Vec{}, false
		}
	}
	if b.Warm && s.areBeyond(from) {
		if p, ok := s.invert(from, b.Residual); ok {
			return p, true
		}
	}
	from, ok := s.intersect()
	if !ok || !s.areBeyond(from) {
		from = s.straightDown()
	}
	if !s.areBeyond(from) {
		return from, false
	}
	return s.invert(from, b.Residual)
}

// invert returns the point, relative to the raw one, whose refracted rays the survey's
// triangulation intersected at the raw point: with the rays traced to it the gradient
// of the triangulation's cost vanishes at the raw point. Three equations, Newton's
// method with exact derivatives.
func (s *MultiviewSolver) invert(from optics.Vec, rule Residual) (optics.Vec, bool) {
	p := from
	for range newtonSteps {
		g, by := s.gradient(p, rule)
		step, ok := by.solve(g)
		if !ok {
			return p, false
		}
		share := s.share(p, step)
		p = p.Sub(step.Scale(share))
		if step.Norm() < doneM {
			return p, s.areAhead(rule)
		}
	}
	return p, false
}

// gradient traces the rays to p and returns the gradient of the cost at the raw point
// and the derivative of that gradient by p.
func (s *MultiviewSolver) gradient(p optics.Vec, rule Residual) (g optics.Vec, by matrix) {
	for k := range s.sights {
		r := &s.sights[k]
		depth := r.trace(&s.stack, p)
		var e optics.Vec
		var byV matrix
		switch v := r.straight(); rule {
		case Image:
			e, byV = r.image(v)
		case Angle:
			e, byV = r.angle(v)
		default:
			e, byV = r.equal(v)
		}
		g = g.Add(e)
		spread, gradient := r.change(&s.stack, depth)
		by.x = by.x.Sub(byV.x.Scale(spread))
		by.y = by.y.Sub(byV.y.Scale(spread))
		by.z = by.z.Sub(byV.z.Scale(spread))
		by.addOuter(byV.times(r.up), r.up.Scale(spread))
		by.addOuter(byV.times(r.run), gradient)
	}
	return g, by
}

// share returns how much of a step, to be taken back from p, keeps p beyond all
// planes: all of it, or nine tenths of the way to the first plane.
func (s *MultiviewSolver) share(p, step optics.Vec) float64 {
	share := 1.0
	for k := range s.sights {
		r := &s.sights[k]
		if depth, rise := r.depth(p), -r.up.Dot(step); share*rise >= depth {
			share = 0.9 * depth / rise
		}
	}
	return share
}

// areAhead reports whether each ray leaves its camera forwards, to within a right
// angle of the raw point. Behind a camera the gradient has roots that are no
// intersection.
func (s *MultiviewSolver) areAhead(rule Residual) bool {
	for k := range s.sights {
		r := &s.sights[k]
		v := r.straight()
		if !(v.Dot(r.back) > 0) || rule == Image && !(r.aim.axes[2].Dot(v) > 0) {
			return false
		}
	}
	return true
}
