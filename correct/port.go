package correct

import (
	"math"

	"bentray/correct/optics"
)

// Port is the flat window of an underwater camera: the gas of the housing
// (Bundle.Light.Air), panes of glass, then water. It is fixed to the camera, which looks along
// its -z. The light ends in the entrance pupil, where it would have gone in the
// housing.
type Port struct {
	// DistanceM is the way from the entrance pupil to the inner face of the first pane along the
	// camera's axis, metres, 0 or more.
	DistanceM float64
	// Panes are the layers from the gas to the water, of 0 thickness or more and positive index.
	// One of no thickness, and none at all, is no glass.
	Panes []optics.Layer
	// Normal is the unit normal of the faces in the camera's frame, towards the camera: 0 0 1
	// where the port is not tilted. See PortNormal.
	Normal optics.Vec
	// CalibrationM is 0 where the cameras were calibrated in air: the raw rays run straight on as
	// they do in the housing, and Cameras has the entrance pupils.
	//
	// Otherwise they were calibrated in water as pinholes that absorb the port, at targets this
	// far in front of its outer face, metres along its normal, positive: Cameras has the
	// perspective centres of these pinholes, and the raw rays start there. The package comment
	// defines them.
	CalibrationM float64
}

// PortNormal returns Port.Normal for a port that is turned about the camera's y axis and then
// about its x axis, both by right-handed angles below pi/2: Rx(x) Ry(y) (0, 0, 1).
func PortNormal(tiltXRad, tiltYRad float64) optics.Vec {
	sinX, cosX := math.Sincos(tiltXRad)
	sinY, cosY := math.Sincos(tiltYRad)
	return optics.Vec{X: sinY, Y: -sinX * cosY, Z: cosX * cosY}
}

// hasPhase reports whether the indices of the panes are usable.
func (p *Port) hasPhase() bool {
	for _, l := range p.Panes {
		if !isIndex(l.Index) {
			return false
		}
	}
	return true
}

// ahead returns how far the entrance pupil is in front of the centre of the pinhole that
// absorbs the port, along the normal: distance is that of the inner face from the pupil.
func (p *Port) ahead(distance, nGas, nWater float64) float64 {
	sum := distance * (nWater/nGas - 1)
	for _, l := range p.Panes {
		sum += l.ThicknessM * (nWater/l.Index - 1)
	}
	return sum
}

// lookThrough fills the geometry of a ray from the raw point to a camera behind a port,
// which back leads to.
func (r *sight) lookThrough(p *Port, c *Cameras, camera int32, back optics.Vec, nGas, nWater float64) {
	x, y, z := c.axes(camera)
	r.back, r.up = back, x.Scale(p.Normal.X).Add(y.Scale(p.Normal.Y)).Add(z.Scale(p.Normal.Z))
	r.above = p.DistanceM * p.Normal.Z
	r.over, r.meetM, r.slopes = r.above, p.CalibrationM, optics.Slopes{}
	for _, l := range p.Panes {
		r.over += l.ThicknessM
	}
	if r.meetM != 0 {
		r.over += p.ahead(r.above, nGas, nWater)
	}
	r.rise = r.up.Dot(back) - r.over
}

// pinhole returns the slope of the straight raw ray, from its pinhole to where the light of
// a point, depth beyond the plane, meets the plane of calibration. There the
// light has 1 + (meetM - depth) far of its run.
func (r *sight) pinhole(depth float64) float64 {
	return (1 + (r.meetM-depth)*r.slopes.Far) / (r.over + r.meetM)
}

// pinholeChange returns the derivatives of pinhole by depth and squared run from those of
// the near slope.
func (r *sight) pinholeChange(b *optics.Stack, depth, byFar, byRun2 float64) (float64, float64) {
	byFar, byRun2 = b.ChangeFar(r.slopes, byFar, byRun2)
	before, all := r.meetM-depth, r.over+r.meetM
	return (before*byFar - r.slopes.Far) / all, before * byRun2 / all
}

// absorb returns how the light of the straight raw ray runs that leaves a pinhole: to where
// that ray meets the plane of calibration.
func (r *sight) absorb(b *optics.Stack) optics.Slopes {
	share := r.raw * (r.over + r.meetM)
	s := b.Fermat(r.above, r.meetM, r.run2*share*share, optics.Slopes{})
	return optics.Slopes{Near: share * s.Near, Far: share * s.Far, Thin: share * s.Thin}
}

// crossNormal returns how far beyond the plane the bent raw ray crosses the normal
// through the raw point.
func (r *sight) crossNormal(b *optics.Stack) float64 {
	return (1 - r.above*r.slopes.Near - b.InnerRun(r.slopes, r.run2)) / r.slopes.Far
}

// rawIncidence returns the angle between the light of the straight raw ray and the normal on the
// camera's side; that of the raw ray itself where no light runs so.
func (r *sight) rawIncidence(b *optics.Stack) float64 {
	if r.meetM != 0 && r.bend(b) {
		near, _ := r.angles()
		return near
	}
	return r.back.AngleRad(r.up)
}

// putPoint writes where point i is, without a water surface, and returns its final outcome.
// The rest of the entry is written.
func (r *Result) putPoint(i int, point, end optics.Vec) Outcome {
	if !isFiniteVec(end) {
		r.keep(i, point)
		return Unsolved
	}
	r.X[i], r.Y[i], r.Z[i] = end.X, end.Y, end.Z
	return Corrected
}
