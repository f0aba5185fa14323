package correct

import (
	"math"

	"bentray/correct/optics"
)

// sight is one ray of a point, on its way from the point to a camera. Positions are
// relative to the raw point; the plane is the one that bounds the point's medium: the water
// surface, or the outer face of a port. Its normal points to the camera's side, and
// heights are along it.
type sight struct {
	back   optics.Vec // raw point to camera, the perspective centre of the raw rays
	up     optics.Vec // unit normal
	above  float64    // way of the light in the medium at the camera, along the normal
	over   float64    // camera above the plane
	rise   float64    // plane above the raw point
	meetM  float64    // see Port.CalibrationM
	run    optics.Vec // along the plane, from the foot of the point to that of the camera
	run2   float64    // its squared length
	slopes optics.Slopes
	raw    float64 // slope of the straight raw ray, as those are
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
	r.over, r.meetM, r.slopes = r.above, 0, optics.Slopes{}
}

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
func (r *sight) trace(b *optics.Stack, p optics.Vec) (depth float64) {
	r.layRun(r.back.Sub(p))
	depth = r.depth(p)
	r.slopes = b.Fermat(r.above, depth, r.run2, r.slopes)
	r.raw = r.slopes.Near
	if r.meetM != 0 {
		r.raw = r.pinhole(depth)
	}
	return depth
}

// bend takes the straight raw ray and finds how its light runs. It is false on
// total reflection and for a ray that does not come down to the plane.
func (r *sight) bend(b *optics.Stack) bool {
	r.layRun(r.back)
	r.raw = 1 / (r.over + r.rise)
	if r.meetM != 0 {
		r.slopes = r.absorb(b)
	} else {
		r.slopes = b.Bend(r.raw, r.run2)
	}
	return r.slopes.Far > 0
}

func (r *sight) layRun(back optics.Vec) {
	r.run = back.Sub(r.up.Scale(r.up.Dot(back)))
	r.run2 = r.run.Dot(r.run)
}

// depth returns how far p is beyond the plane.
func (r *sight) depth(p optics.Vec) float64 { return r.rise - r.up.Dot(p) }

// entry returns where the light crosses the plane.
func (r *sight) entry(b *optics.Stack) optics.Vec {
	share := r.above*r.slopes.Near + b.InnerRun(r.slopes, r.run2)
	return r.back.Sub(r.up.Scale(r.over)).Sub(r.run.Scale(share))
}

// straight returns the direction of the straight raw ray, towards the camera: 1 along the
// normal.
func (r *sight) straight() optics.Vec { return r.up.Add(r.run.Scale(r.raw)) }

// far returns the direction of the light on the point's side in the same manner.
func (r *sight) far() optics.Vec { return r.up.Add(r.run.Scale(r.slopes.Far)) }

// angles returns the ray's angles from the normal on both sides.
func (r *sight) angles() (near, far float64) {
	run := math.Sqrt(r.run2)
	return math.Atan(r.slopes.Near * run), math.Atan(r.slopes.Far * run)
}

// change returns the derivative of straight() by the position of the point, depth beyond the
// plane: dv = spread (u uT - 1) dP + run (gradient . dP) with u = up.
func (r *sight) change(b *optics.Stack, depth float64) (spread float64, gradient optics.Vec) {
	byFar, byRun2 := b.Change(r.slopes, r.above, depth, r.run2)
	if r.meetM != 0 {
		byFar, byRun2 = r.pinholeChange(b, depth, byFar, byRun2)
	}
	// The depth changes by -u . dP, the squared run by -2 run . dP.
	return r.raw, r.up.Scale(-byFar).Sub(r.run.Scale(2 * byRun2))
}
