package correct

// MarkNoCameras sets NoSurface where a ray of the point has no surface, and NoOrigin
// where the centre of a camera is not finite or not on its side of the ray's plane: above
// it, or below it with b.FromWater. A MultiviewSolver does the same; call this before the outcomes that come between
// NoOrigin and Grazing are set. With b.Port there is no surface, and NoOrigin is for a centre or a
// rotation that is not finite.
func MarkNoCameras(out []Outcome, raw XYZ, b *Bundle) {
	raw.mustHave(len(out))
	b.mustHave(len(out))
	for i := range out {
		if out[i] != Corrected {
			continue
		}
		out[i] = b.look(i, raw)
	}
}

// look returns NoSurface or NoOrigin where that is point i's outcome, else Corrected.
func (b *Bundle) look(i int, raw XYZ) Outcome {
	from, to := b.of(i)
	point, facing := raw.at(i), true
	var r sight
	for k := from; k < to; k++ {
		if !b.sight(&r, i, k, point) {
			return NoSurface
		}
		facing = facing && b.isFacing(&r)
	}
	if !facing {
		return NoOrigin
	}
	return Corrected
}
