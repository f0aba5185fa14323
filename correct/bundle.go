package correct

import "bentray/correct/optics"

// Bundle is what a MultiviewSolver must know beside the raw points: the rays of each,
// the water surface where they cross it, and the indices.
type Bundle struct {
	Views
	Cameras *Cameras
	// Port is what the cameras look through into the water; nil where they look through the
	// water surface. It needs the rotation of each camera.
	Port *Port
	// Planes has one plane per ray: the elevation at the raw plan position of the ray's
	// point, and the slopes. Not read with a Port.
	Planes Planes
	// Light has the indices: Air, with a Port that of the gas in the housing, and Water for each
	// point. The others are not read.
	Light    Light
	Solve    Solve
	Residual Residual // of the triangulation that made the raw points; Invert alone reads it
	// FromWater says that the cameras are under water and the points in the air. Not read with a
	// Port.
	FromWater bool
	// Warm says that dst holds points near the solutions to start from, such as those of the
	// same points under planes that differ a little. Invert alone reads it.
	Warm bool
	// EntryX and EntryY (m), one value per ray, are filled with the plan positions where the
	// rays of Corrected points cross their planes, as by EntryPlan, but for the last step of
	// Newton's method. Nil where they are not wanted.
	EntryX, EntryY []float64
	// MaxIncidenceRad is the largest angle between ray and surface normal on
	// the camera's side, 0 to pi/2; with a Port that between the light and its normal in the
	// housing.
	MaxIncidenceRad float64
}

func (b *Bundle) mustHave(n int) {
	b.Views.mustHave(n)
	b.Cameras.XYZ.mustHave(len(b.Cameras.X))
	mustHave(n, b.Light.Water)
	if b.Port == nil {
		b.Planes.mustHave(len(b.Camera))
	}
	if b.EntryX != nil {
		mustHave(len(b.Camera), b.EntryX, b.EntryY)
	}
	if (b.Residual == Image && b.Solve == Invert || b.Port != nil) && len(b.Cameras.Rotation) != len(b.Cameras.X) {
		panic(errRotations)
	}
}

const errRotations = "correct: the image residual and a port need the rotation of each camera"

// sight fills r with the geometry of ray k, of point i. It is false where the ray has no
// surface.
func (b *Bundle) sight(r *sight, i, k int, point optics.Vec) bool {
	camera := b.Cameras.at(int(b.Camera[k]))
	if b.Port != nil {
		r.lookThrough(b.Port, b.Cameras, b.Camera[k], camera.Sub(point), b.Light.Air, b.Light.Water[i])
		return true
	}
	surface := b.Planes.around(k, point.Z)
	r.look(camera, camera.Sub(point), surface, b.FromWater)
	return surface.isFinite()
}

// isFacing reports whether the camera of r is finite and on its side of the surface, which
// with a Port it always is. A height that overflows does not count against it.
func (b *Bundle) isFacing(r *sight) bool {
	if b.Port != nil {
		return isFiniteVec(r.back) && isFiniteVec(r.up)
	}
	return isFiniteVec(r.back) && !(r.above <= 0)
}

// hasPhase reports whether the phase indices of point i are usable.
func (b *Bundle) hasPhase(i int) bool {
	return b.Light.hasPhase(i) && (b.Port == nil || b.Port.hasPhase())
}

// setStack makes s the media between cameras and point i.
func (b *Bundle) setStack(s *optics.Stack, i int) {
	switch near, far := b.Light.Air, b.Light.Water[i]; {
	case b.Port != nil:
		s.Set(near, far, b.Port.Panes)
	case b.FromWater:
		s.Set(far, near, nil)
	default:
		s.Set(near, far, nil)
	}
}
