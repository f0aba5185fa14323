package correct

// EntryPlan fills x, y (m) with the plan position where the straight ray of each
// Corrected point meets its plane; the other points get their raw position. A
// surface with curvature is met by taking its planes anew at these places (see
// CarryToRaw) until they no longer move.
//
// All columns have one length (otherwise it panics). A ray without entry, such as one
// with no origin above the plane, gets its raw position too.
func EntryPlan(x, y []float64, out []Outcome, raw, origin XYZ, s Planes) {
	mustHave(len(out), x, y)
	raw.mustHave(len(out))
	origin.mustHave(len(out))
	s.mustHave(len(out))
	for i := range out {
		x[i], y[i] = raw.X[i], raw.Y[i]
		if out[i] != Corrected {
			continue
		}
		point, from := raw.at(i), origin.at(i)
		surface, up := s.around(i, point.Z), from.Sub(point)
		if !isOrigin(from, up, surface) || !(surface.rise > 0) {
			continue
		}
		entry := up.Scale(surface.rise / (up.Z - surface.climb(up)))
		x[i], y[i] = point.X+entry.X, point.Y+entry.Y
	}
}

// CarryToRaw turns planes that were taken at the plan positions x, y (m) into
// planes at the raw positions: the same planes, with the elevation there.
func (s Planes) CarryToRaw(raw XYZ, x, y []float64) {
	s.mustHave(len(x))
	raw.mustHave(len(x))
	mustHave(len(x), y)
	for i := range x {
		s.Level[i] += s.SlopeX[i]*(raw.X[i]-x[i]) + s.SlopeY[i]*(raw.Y[i]-y[i])
	}
}

// Keep writes the whole entry of every point that is neither Corrected nor Dry:
// its raw position, and nothing computed. Ray models do so themselves.
func Keep(dst *Result, out []Outcome, raw XYZ) {
	dst.mustHave(len(out))
	raw.mustHave(len(out))
	for i := range out {
		if out[i] != Corrected && out[i] != Dry {
			dst.keep(i, raw.at(i))
		}
	}
}
