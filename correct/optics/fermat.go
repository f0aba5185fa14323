package optics

import "math"

// fermatSteps bounds the steps of Fermat. The usual number is 2 to 4; the worst
// case is a run that the denser media can only just not cover, with next to nothing
// in the thinnest: some log(dense/thin) / log(3.4).
const fermatSteps = 200

// Fermat returns the ray between two points in the near and the far medium, the way whose
// optical path is stationary: it obeys Snell's law. The points are at the distances nearM
// and farM from the inner layers, metres, not negative and at least one positive (the
// one in the thinnest medium, if the run is long); their feet along the boundaries
// have the squared distance run2, square metres. guess may be any slopes, the
// zero value too: those of a ray nearby save steps. A run that no ray covers, with
// no way at all in the thinnest medium, gives slopes that are NaN or infinite.
//
// The unknown is s, the slope in the thinnest medium. Where that medium has thickness, any
// s has a ray, while the ray parameter p = n sin(angle) ends at the
// thinnest index. With w = 1 / sqrt(m^2 + (m^2 - 1) s^2 run2) Snell's law makes the slope in a
// layer of m times the thinnest index s w, and the ray ends where it should if
//
//	f(s) = s sum(t w) - 1 = 0,  f'(s) = sum(t m^2 w^3) > 0
//
// with the sums over all layers of thickness t, nearM and farM among them. f” is not
// positive, since no w rises with s. A Newton step on an increasing concave function
// ends at or before the root, wherever it began, and from there each step goes up to
// it. No step goes below 1 / sum(t/m), which is at or before the root
// because w is at most 1/m; equal indices are done there. The error of a step is at most
// 1.5 times the square of the step before, both relative to s: -f” s / 2f' is 1.5 times the
// mean of (m^2 - 1) s^2 run2 w^2, weighted by t m^2 w^3, and none of these exceeds 1. So
// a step of 1e-8 leaves nothing to gain.
func (b *Stack) Fermat(nearM, farM, run2 float64, guess Slopes) Slopes {
	low := 1 / (nearM*b.near.straight + farM*b.far.straight + b.straightM)
	s := low
	if guess.Thin > low && guess.Thin <= math.MaxFloat64 {
		s = guess.Thin
	}
	for range fermatSteps {
		wNear, wFar := b.near.bend(s, run2), b.far.bend(s, run2)
		near3, far3 := wNear*wNear*wNear, wFar*wFar*wFar
		run, rise := nearM*wNear+farM*wFar, nearM*b.near.toThin2*near3+farM*b.far.toThin2*far3
		if len(b.inner) > 0 {
			run, rise = b.addInner(run, rise, s, run2)
		}
		step := (1 - s*run) / rise
		if math.Abs(step) <= 1e-8*s {
			// Each w changes by its derivative; the square of the step is nothing.
			thin := s + step
			return Slopes{
				Near: thin * (wNear - b.near.excess*s*run2*near3*step),
				Far:  thin * (wFar - b.far.excess*s*run2*far3*step), Thin: thin,
			}
		}
		s = max(s+step, low)
	}
	return Slopes{Near: s * b.near.bend(s, run2), Far: s * b.far.bend(s, run2), Thin: s}
}

// addInner adds what the inner layers have of the sums in f and f'.
func (b *Stack) addInner(run, rise, s, run2 float64) (float64, float64) {
	for k := range b.inner {
		l := &b.inner[k]
		w := l.bend(s, run2)
		run += l.thicknessM * w
		rise += l.thicknessM * l.toThin2 * w * w * w
	}
	return run, rise
}

// Change returns how the near slope of the ray s that Fermat found changes with
// the distance of the far point from the inner layers and with the squared run: the
// implicit derivatives of Near near + InnerRun + Far far = 1 under Snell's law.
func (b *Stack) Change(s Slopes, nearM, farM, run2 float64) (byFar, byRun2 float64) {
	w := s.Far / s.Near
	all := nearM + farM*b.far.toNear2*w*w*w
	bent := farM * (b.far.toNear2 - 1) * s.Far * s.Far * s.Far
	for k := range b.inner {
		l := &b.inner[k]
		slope := s.Thin * l.bend(s.Thin, run2)
		w := slope / s.Near
		all += l.thicknessM * l.toNear2 * w * w * w
		bent += l.thicknessM * (l.toNear2 - 1) * slope * slope * slope
	}
	return -s.Far / all, bent / (2 * all)
}

// ChangeFar is Change for the far slope, from what Change returned: Far = Near / sqrt(r + (r - 1)
// Near^2 run2) with r = (nFar / nNear)^2 has the derivative r (Far / Near)^3 by Near.
func (b *Stack) ChangeFar(s Slopes, nearByFar, nearByRun2 float64) (byFar, byRun2 float64) {
	w := s.Far / s.Near
	turn := b.far.toNear2 * w * w * w
	return turn * nearByFar, turn*nearByRun2 - (b.far.toNear2-1)*s.Far*s.Far*s.Far/2
}

// ThroughPlane returns where the light from one point to another crosses a plane
// between them. at is any point of the plane, normal its unit normal on either side; nFrom
// and nTo are the phase indices on the sides of from and to. It is false, with the
// zero vector, where the points are not on opposite sides. Lengths are
// metres, and no larger than the distances between the three points.
func ThroughPlane(from, to, at, normal Vec, nFrom, nTo float64) (entry Vec, ok bool) {
	near, far := from.Sub(at).Dot(normal), at.Sub(to).Dot(normal)
	if !(near*far > 0) {
		return Vec{}, false
	}
	way := to.Sub(from)
	run := way.Sub(normal.Scale(way.Dot(normal)))
	b := NewStack(nFrom, nTo)
	nearM := math.Abs(near)
	s := b.Fermat(nearM, math.Abs(far), run.Dot(run), Slopes{})
	return from.Sub(normal.Scale(near)).Add(run.Scale(s.Near * nearM)), true
}
