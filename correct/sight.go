package correct

import (
	"math"

	"bentray/correct/optics"
)

// sight is one ray of a point, on its way from the point to a camera. Positions are
// relative to the raw point; the plane's normal points to the camera's side, and
// heights are along it.
type sight struct {
	back   optics.Vec // raw point to camera
	up     optics.Vec // unit normal
	above  float64    // camera above the plane, positive
	rise   float64    // plane above the raw point
	run    optics.Vec // along the plane, from the foot of the point to that of the camera
	run2   float64    // its squared length
	slopes optics.Slopes
	aim    aim
}

// aim is what a residual must know of a ray's raw direction, which does not change
// while the point is sought.
type aim struct {
	unit  optics.Vec    // angle: from raw point to camera
	scale float64       // angle: 1 / distance
	image [2]optics.Vec // image: gradients of the image coordinates x/(-z) and y/(-z) at the raw point, up to sign
	at    [2]float64    // image: these coordinates
	axes  [3]optics.Vec // image: the camera's axes
}

// look fills the geometry of a ray from the raw point to a camera, which back leads to.
func (r *sight) look(camera, back optics.Vec, surface plane, fromWater bool) {
	r.back, r.up = back, surface.normal()
	r.rise = surface.rise * r.up.Z
	r.above = (camera.Z - surface.level - surface.climb(back)) * r.up.Z
	if fromWater {
		r.up, r.rise, r.above = r.up.Scale(-1), -r.rise, -r.above
	}
	r.slopes = optics.Slopes{}
}

// isFacing reports whether the camera is finite and on its side of the plane. A height
// that overflows does not count against it.
func (r *sight) isFacing() bool { return isFiniteVec(r.back) && !(r.above <= 0) }

// aimFor prepares a residual. It is false where a camera does not face the point.
func (r *sight) aimFor(rule Residual, c *Cameras, camera int32) bool {
	switch rule {
	case Angle:
		r.aim.scale = 1 / r.back.Norm()
		r.aim.unit = r.back.Scale(r.aim.scale)
	case Image:
		x, y, z := c.axes(camera)
		away := z.Dot(r.back)
		r.aim.axes = [3]optics.Vec{x, y, z}
		r.aim.at = [2]float64{-x.Dot(r.back) / away, -y.Dot(r.back) / away}
		for k, axis := range [2]optics.Vec{x, y} {
			r.aim.image[k] = axis.Add(z.Scale(r.aim.at[k])).Scale(1 / away)
		}
		return away > 0
	}
	return true
}

// trace takes the light's path from p to the camera.
func (r *sight) trace(b *optics.Boundary, p optics.Vec) (depth float64) {
	r.layRun(r.back.Sub(p))
	depth = r.depth(p)
	r.slopes = b.Fermat(r.above, depth, r.run2, r.slopes)
	return depth
}

// bend takes the raw ray as it is on the camera's side and bends it at the plane. It
// is false on total reflection and for a ray that does not come down to the plane.
func (r *sight) bend(b *optics.Boundary) bool {
	r.layRun(r.back)
	near := 1 / (r.above + r.rise)
	r.slopes = optics.Slopes{Near: near, Far: b.Bend(near, r.run2)}
	return r.slopes.Far > 0
}

func (r *sight) layRun(back optics.Vec) {
	r.run = back.Sub(r.up.Scale(r.up.Dot(back)))
	r.run2 = r.run.Dot(r.run)
}

// depth returns how far p is beyond the plane.
func (r *sight) depth(p optics.Vec) float64 { return r.rise - r.up.Dot(p) }

// entry returns where the ray crosses the plane.
func (r *sight) entry() optics.Vec {
	return r.back.Sub(r.up.Scale(r.above)).Sub(r.run.Scale(r.above * r.slopes.Near))
}

// near returns the direction of the ray on the camera's side, towards the
// camera: 1 along the normal.
func (r *sight) near() optics.Vec { return r.up.Add(r.run.Scale(r.slopes.Near)) }

// far returns the direction of the ray on the point's side in the same manner.
func (r *sight) far() optics.Vec { return r.up.Add(r.run.Scale(r.slopes.Far)) }

// angles returns the ray's angles from the normal on both sides.
func (r *sight) angles() (near, far float64) {
	run := math.Sqrt(r.run2)
	return math.Atan(r.slopes.Near * run), math.Atan(r.slopes.Far * run)
}

// change returns the derivative of near() by the position of the point, depth beyond the
// plane: dv = spread (u uT - 1) dP + run (gradient . dP) with u = up.
func (r *sight) change(b *optics.Boundary, depth float64) (spread float64, gradient optics.Vec) {
	byFar, byRun2 := b.Change(r.slopes, r.above, depth)
	// The depth changes by -u . dP, the squared run by -2 run . dP.
	return r.slopes.Near, r.up.Scale(-byFar).Sub(r.run.Scale(2 * byRun2))
}
