package correct

import (
	"math"

	"bentray/correct/optics"
)

// Residual is what a triangulation makes least when it intersects rays: the sum of
// squares of one of these.
type Residual uint8

// The residuals.
const (
	Image Residual = iota // differences of x/(-z) and of y/(-z) in each camera's frame; needs rotations
	Angle                 // the angle between ray and point, atan2(|d x v|, d . v)
	Equal                 // the distance from ray to point
)

// Each function below gives what a ray adds to the gradient of the cost at the raw
// point, up to a common factor, and the derivative of that by the ray's direction
// v (of any length, towards the camera).

// equal has the distance vector e = back - l v from the point to the ray, with l = v . back / v . v:
// de = -l dv - v (dv . (e - l v)) / v . v.
func (r *sight) equal(v optics.Vec) (e optics.Vec, by matrix) {
	vv := v.Dot(v)
	l := v.Dot(r.back) / vv
	e = r.back.Sub(v.Scale(l))
	by = diagonal(-l)
	by.addOuter(v, e.Sub(v.Scale(l)).Scale(-1/vv))
	return e, by
}

// angle has the gradient of half the squared angle a between the unit directions d
// of the ray and x of the point, (a / sin a) (d - x cos a) / distance.
func (r *sight) angle(v optics.Vec) (g optics.Vec, by matrix) {
	x, length := r.aim.unit, 1/v.Norm()
	d := v.Scale(length)
	cos := x.Dot(d)
	g = d.Sub(x.Scale(cos))
	k, dk := angleOverSine(g.Dot(g), cos)
	// By d: k (dd - x (x . dd)) + dk (x . dd) g; then dd = (1 - d dT) dv / |v|.
	f := g.Scale(dk).Sub(x.Scale(k))
	scale := r.aim.scale * length
	by = diagonal(k * scale)
	by.addOuter(d, d.Scale(-k*scale))
	by.addOuter(f, x.Sub(d.Scale(cos)).Scale(scale))
	return g.Scale(k * r.aim.scale), by
}

// angleOverSine returns k = a / sin a of the angle a with the squared sine sin2
// and cosine cos, and its derivative by the cosine, (k cos - 1) / sin2. Near 0 both are
// the series of asin(s) / s, whose first term left out is below 1e-17.
func angleOverSine(sin2, cos float64) (k, byCos float64) {
	if sin2 < 1e-3 && cos > 0 {
		k = 1 + sin2*(1./6+sin2*(3./40+sin2*(5./112+sin2*(35./1152+sin2*63./2816))))
		bySin2 := 1./6 + sin2*(3./20+sin2*(15./112+sin2*(35./288+sin2*315./2816)))
		return k, -2 * cos * bySin2
	}
	sin := math.Sqrt(sin2)
	k = math.Atan2(sin, cos) / sin
	return k, (k*cos - 1) / sin2
}

// image has the gradients of the image coordinates at the point times their
// differences to those of the ray.
func (r *sight) image(v optics.Vec) (g optics.Vec, by matrix) {
	axes := &r.aim.axes
	away := 1 / axes[2].Dot(v)
	for k := range 2 {
		at := -axes[k].Dot(v) * away
		g = g.Add(r.aim.image[k].Scale(at - r.aim.at[k]))
		by.addOuter(r.aim.image[k], axes[k].Add(axes[2].Scale(at)).Scale(-away))
	}
	return g, by
}
