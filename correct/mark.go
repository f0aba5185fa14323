package correct

import "bentray/correct/optics"

// MarkInvalid sets Invalid where a coordinate of the raw point is not a finite number.
func MarkInvalid(out []Outcome, raw XYZ) {
	raw.mustHave(len(out))
	for i := range out {
		if out[i] == Corrected && !isFiniteVec(raw.at(i)) {
			out[i] = Invalid
		}
	}
}

// MarkNoSurface sets NoSurface where the elevation or a slope of the surface is
// not a finite number.
func MarkNoSurface(out []Outcome, s Planes) {
	s.mustHave(len(out))
	for i := range out {
		if out[i] == Corrected && !(isFinite(s.Level[i]) && isFinite(s.SlopeX[i]) && isFinite(s.SlopeY[i])) {
			out[i] = NoSurface
		}
	}
}

// MarkDry sets Dry where the raw point is on the air's side of the surface at its
// plan position, or exactly on it. It writes the whole entry of a dry point: raw
// position, WaterLevel there, and Depth, negative or 0; the kernels leave
// that entry as it is.
func MarkDry(out []Outcome, dst *Result, raw XYZ, s Planes) {
	dst.mustHave(len(out))
	raw.mustHave(len(out))
	s.mustHave(len(out))
	for i := range out {
		if out[i] != Corrected || !(raw.Z[i] >= s.Level[i]) {
			continue
		}
		out[i] = Dry
		dst.keepDry(i, raw.at(i), s.Level[i])
	}
}

// MarkWet is MarkDry for cameras under water: it sets Dry where the raw point is on
// the water's side of the surface at its plan position, or exactly on it. Depth is positive
// or 0 there.
func MarkWet(out []Outcome, dst *Result, raw XYZ, s Planes) {
	dst.mustHave(len(out))
	raw.mustHave(len(out))
	s.mustHave(len(out))
	for i := range out {
		if out[i] != Corrected || !(raw.Z[i] <= s.Level[i]) {
			continue
		}
		out[i] = Dry
		dst.keepDry(i, raw.at(i), s.Level[i])
	}
}

// MarkNoOrigin sets NoOrigin where a coordinate of the ray origin is not finite,
// or where the origin is not above the plane of the point's surface: a ray from
// there did not cross the surface, so nothing bent it. Pulse does the same; call this
// before the outcomes that come between NoOrigin and Grazing are set.
func MarkNoOrigin(out []Outcome, raw, origin XYZ, s Planes) {
	raw.mustHave(len(out))
	origin.mustHave(len(out))
	s.mustHave(len(out))
	for i := range out {
		if out[i] != Corrected {
			continue
		}
		point, from := raw.at(i), origin.at(i)
		if !isOrigin(from, from.Sub(point), s.around(i, point.Z)) {
			out[i] = NoOrigin
		}
	}
}

// isOrigin reports whether a ray origin, which up leads to from the raw point, is
// finite and above the surface. A height that overflows does not count against it.
func isOrigin(origin, up optics.Vec, surface plane) bool {
	return isFiniteVec(origin) && !(origin.Z-surface.level-surface.climb(up) <= 0)
}
