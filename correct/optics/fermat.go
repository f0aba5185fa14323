package optics

import "math"

// Boundary is the plane boundary of two media as Fermat's principle needs it: the light
// from a near point in one medium to a far point in the other takes the way
// whose optical path is stationary, which is the way that obeys Snell's law. Either
// medium may be the denser one.
type Boundary struct {
	ratio2   float64 // (nFar / nNear)^2
	dense2   float64 // squared ratio of the larger index to the smaller one
	excess   float64 // dense2 - 1
	straight float64 // smaller index over the larger one
	isUp     bool    // from the denser medium to the thinner one
}

// NewBoundary returns the boundary between media of the phase indices nNear and nFar,
// positive and finite.
func NewBoundary(nNear, nFar float64) Boundary {
	thin, dense := min(nNear, nFar), max(nNear, nFar)
	ratio, step := dense/thin, (dense-thin)/thin
	return Boundary{
		ratio2: (nFar / nNear) * (nFar / nNear), dense2: ratio * ratio, excess: step * (ratio + 1),
		straight: 1 / ratio, isUp: nNear > nFar,
	}
}

// Ratio returns nFar / nNear.
func (b *Boundary) Ratio() float64 { return math.Sqrt(b.ratio2) }

// Slopes are the tangents of a ray's angles from the normal on both sides of a
// boundary, per metre of run between its end points: with the distances near and far
// of the end points from the boundary, Near near + Far far = 1. Divided by the run they
// are as smooth straight down as anywhere else.
type Slopes struct{ Near, Far float64 }

// fermatSteps bounds the steps of Fermat. The usual number is 2 to 4; the worst
// case is a run that the denser side can only just not cover, with next to nothing
// on the thinner side: some log(dense/thin) / log(3.4).
const fermatSteps = 200

// Fermat returns the ray between two points on opposite sides of the boundary, at the
// distances nearM and farM from it, metres, one of them positive and the other not
// negative (the one on the thinner side positive if the run is long), whose feet
// on the boundary have the squared distance run2, square metres. guess may be any
// slopes, the zero value too: those of a ray nearby save steps.
//
// The unknown is s, the slope on the thinner side. With w = 1 / sqrt(m^2 + (m^2 - 1) s^2 run2)
// Snell's law makes the other slope s w, and the ray ends where it should if
//
//	f(s) = s (thin + dense w) - 1 = 0,  f'(s) = thin + dense m^2 w^3 > 0
//
// f” is not positive, since w falls with s. A Newton step on an increasing concave function
// ends at or before the root, wherever it began, and from there each step goes up to
// it. No step goes below 1 / (thin + dense/m), which is at or before the root
// because w is at most 1/m; equal indices are done there. The error of a step is at most
// 1.5 times the square of the step before, both relative to s:
// -f” s / 2f' = 1.5 (m^2 - 1) s^2 run2 w^2 dense m^2 w^3 / f', where neither of the last two
// factors exceeds 1. So a step of 1e-8 leaves nothing to gain.
//
// With layers of thickness t_k in place of two sides the same holds: a sum of such
// terms with the slope in the thinnest medium as unknown.
func (b *Boundary) Fermat(nearM, farM, run2 float64, guess Slopes) Slopes {
	if b.isUp {
		thin, dense := b.thin(farM, nearM, run2, guess.Far)
		return Slopes{Near: dense, Far: thin}
	}
	thin, dense := b.thin(nearM, farM, run2, guess.Near)
	return Slopes{Near: thin, Far: dense}
}

// thin returns the slopes in the thinner and the denser medium, from a guess
// of the first.
func (b *Boundary) thin(thinM, denseM, run2, guess float64) (thin, dense float64) {
	low := 1 / (thinM + denseM*b.straight)
	s := low
	if guess > low && guess <= math.MaxFloat64 {
		s = guess
	}
	for range fermatSteps {
		w := b.bend(s, run2)
		w3 := w * w * w
		step := (1 - s*(thinM+denseM*w)) / (thinM + denseM*b.dense2*w3)
		if math.Abs(step) <= 1e-8*s {
			// w changes by its derivative; the square of the step is nothing.
			return s + step, (s + step) * (w - b.excess*s*run2*w3*step)
		}
		s = max(s+step, low)
	}
	return s, s * b.bend(s, run2)
}

// bend returns the slope in the denser medium over that in the thinner one, s.
func (b *Boundary) bend(s, run2 float64) float64 {
	return 1 / math.Sqrt(b.dense2+b.excess*s*s*run2)
}

// Bend returns the slope on the far side of a ray that has the slope near on the near
// side, both per metre of run; it is NaN on total reflection. Snell's law in
// tangents: far = near / sqrt(r + (r - 1) near^2 run2) with r = (nFar / nNear)^2.
func (b *Boundary) Bend(near, run2 float64) float64 {
	if !b.isUp {
		return near * b.bend(near, run2)
	}
	// The same with numerator and denominator divided by r = 1 / dense2.
	return near * math.Sqrt(b.dense2/(1-b.excess*near*near*run2))
}

// Change returns how the near slope of the ray s that Fermat found changes with
// the distance of the far point from the boundary and with the squared run: the
// implicit derivatives of Near near + Far far = 1 under Snell's law.
func (b *Boundary) Change(s Slopes, nearM, farM float64) (byFar, byRun2 float64) {
	w := s.Far / s.Near
	all := nearM + farM*b.ratio2*w*w*w
	return -s.Far / all, farM * (b.ratio2 - 1) * s.Far * s.Far * s.Far / (2 * all)
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
	b := NewBoundary(nFrom, nTo)
	nearM := math.Abs(near)
	s := b.Fermat(nearM, math.Abs(far), run.Dot(run), Slopes{})
	return from.Sub(normal.Scale(near)).Add(run.Scale(s.Near * nearM)), true
}
