package correct

import "bentray/correct/optics"

// Bundle is what a MultiviewSolver must know beside the raw points: the rays of each,
// the water surface where they cross it, and the indices.
type Bundle struct {
	Views
	Cameras *Cameras
	// Planes has one plane per ray: the elevation at the raw plan position of the ray's
	// point, and the slopes.
	Planes Planes
	// Light has the indices: Air, and Water for each point. The others are not read.
	Light    Light
	Solve    Solve
	Residual Residual // of the triangulation that made the raw points; Invert alone reads it
	// FromWater says that the cameras are under water and the points in the air.
	FromWater bool
	// Warm says that dst holds points near the solutions to start from, such as those of the
	// same points under planes that differ a little. Invert alone reads it.
	Warm bool
	// MaxIncidenceRad is the largest angle between ray and surface normal on
	// the camera's side, 0 to pi/2.
	MaxIncidenceRad float64
}

func (b *Bundle) mustHave(n int) {
	b.Views.mustHave(n)
	b.Planes.mustHave(len(b.Camera))
	b.Cameras.XYZ.mustHave(len(b.Cameras.X))
	mustHave(n, b.Light.Water)
	if b.Residual == Image && b.Solve == Invert && len(b.Cameras.Rotation) != len(b.Cameras.X) {
		panic(errRotations)
	}
}

const errRotations = "correct: the image residual needs the rotation of each camera"

// sight fills r with the geometry of ray k, of a point. It is false where the ray has no
// surface.
func (b *Bundle) sight(r *sight, k int, point optics.Vec) bool {
	surface := b.Planes.around(k, point.Z)
	camera := b.Cameras.at(int(b.Camera[k]))
	r.look(camera, camera.Sub(point), surface, b.FromWater)
	return surface.isFinite()
}

// boundary returns the surface at point i, from the cameras' side.
func (b *Bundle) boundary(i int) optics.Boundary {
	if b.FromWater {
		return optics.NewBoundary(b.Light.Water[i], b.Light.Air)
	}
	return optics.NewBoundary(b.Light.Air, b.Light.Water[i])
}
