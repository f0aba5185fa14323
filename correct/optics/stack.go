package optics

import "math"

// Layer is a plane-parallel layer between two other media.
type Layer struct {
	ThicknessM float64 // metres, 0 or more; of 0 it is as if it were not there
	Index      float64 // phase index, positive and finite
}

// Stack is a pile of media with parallel plane boundaries: light passes from the near one,
// through the inner layers, to the far one. The near and the far medium go on
// without end; the end points of a path lie in them. Without inner layers it is a
// single boundary. Any medium may be the densest.
type Stack struct {
	near, far medium
	inner     []layer
	innerM    float64 // thickness of the inner layers
	straightM float64 // sum of their thicknesses, each times straight
}

// medium is what Snell's law in tangents needs of an index. The thinnest is the
// one of the smallest index in the stack.
type medium struct {
	toNear2  float64 // squared ratio to the index of the near medium
	toThin2  float64 // squared ratio to the thinnest index
	excess   float64 // toThin2 - 1
	straight float64 // thinnest index over this one
}

type layer struct {
	medium
	thicknessM float64
}

// NewStack returns the stack of the near medium, the inner layers in the order of travel,
// and the far medium, of the phase indices nNear and nFar, positive and finite.
func NewStack(nNear, nFar float64, inner ...Layer) Stack {
	var s Stack
	s.Set(nNear, nFar, inner)
	return s
}

// Set makes b the stack that NewStack returns, and allocates only when s never had so many
// inner layers.
func (b *Stack) Set(nNear, nFar float64, inner []Layer) {
	thin := min(nNear, nFar)
	for _, l := range inner {
		if l.ThicknessM != 0 {
			thin = min(thin, l.Index)
		}
	}
	b.near, b.far = newMedium(nNear, nNear, thin), newMedium(nFar, nNear, thin)
	b.inner, b.innerM, b.straightM = b.inner[:0], 0, 0
	for _, l := range inner {
		if l.ThicknessM != 0 {
			m := newMedium(l.Index, nNear, thin)
			b.inner = append(b.inner, layer{m, l.ThicknessM})
			b.innerM += l.ThicknessM
			b.straightM += l.ThicknessM * m.straight
		}
	}
}

func newMedium(n, nNear, thin float64) medium {
	ratio, toNear := n/thin, n/nNear
	return medium{toNear2: toNear * toNear, toThin2: ratio * ratio, excess: (n - thin) / thin * (ratio + 1), straight: 1 / ratio}
}

// Ratio returns nFar / nNear.
func (b *Stack) Ratio() float64 { return math.Sqrt(b.far.toNear2) }

// InnerM returns the thickness of all inner layers, metres.
func (b *Stack) InnerM() float64 { return b.innerM }

// Slopes are the tangents of a ray's angles from the normal in media of a Stack, per metre
// of run between its end points: with the distances near and far of the end points from
// the inner layers, Near near + InnerRun + Far far = 1. Divided by the run they
// are as smooth straight down as anywhere else.
type Slopes struct {
	Near, Far float64
	Thin      float64 // in the thinnest medium, which may be the near or the far one
}

// bend returns the slope in m over that in the thinnest medium, s. By Snell's law the ray
// parameter p = n sin(angle) is that of all media, so that the tangent p / sqrt(n^2 - p^2)
// is s / sqrt(k + (k - 1) s^2 run2) with the squared ratio k of the indices.
func (m *medium) bend(s, run2 float64) float64 {
	if m.excess == 0 {
		return 1
	}
	return 1 / math.Sqrt(m.toThin2+m.excess*s*s*run2)
}

// Bend returns the slopes of the ray that has the slope near in the near medium,
// per metre of a run of the square run2; Far and Thin are NaN on total reflection at any of
// the boundaries.
func (b *Stack) Bend(near, run2 float64) Slopes {
	thin := near
	if e := b.near.excess; e != 0 {
		thin = near * math.Sqrt(b.near.toThin2/(1-e*near*near*run2))
	}
	return Slopes{Near: near, Far: thin * b.far.bend(thin, run2), Thin: thin}
}

// InnerRun returns the share of the run that the ray s takes through the inner layers.
func (b *Stack) InnerRun(s Slopes, run2 float64) float64 {
	sum := 0.0
	for k := range b.inner {
		l := &b.inner[k]
		sum += l.thicknessM * s.Thin * l.bend(s.Thin, run2)
	}
	return sum
}
