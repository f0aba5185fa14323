package correct

import "bentray/correct/optics"

// Pulse corrects the points of an airborne laser. The pulse ran straight from its
// origin to its entry on the point's plane of the surface, bent there by Snell's law with
// the phase indices l.Air and l.Water[i] at the plane's normal, and ran on for
//
//	w = r RangeIndex / WaterGroup[i]
//
// where r is the distance from entry to apparent point: the file has r as half the
// travel time times c / RangeIndex, but the pulse ran at c / WaterGroup (Guenther
// 1985; Parrish et al. 2019; Schwarz et al. 2020). The plane also holds at the entry
// and at the true point.
//
// It writes all columns of dst. A point that is not Corrected keeps its raw
// position. New outcomes:
//   - NoOrigin: see MarkNoOrigin.
//   - Grazing: incidence not within maxIncidenceRad (0 to pi/2, from the plane's
//     normal), or total reflection. IncidenceRad is written all the same.
//   - Unsolved: an index that is not positive and finite, or a result that is not
//     finite.
func Pulse(dst *Result, out []Outcome, raw, origin XYZ, s Planes, l Light, maxIncidenceRad float64) {
	dst.mustHave(len(out))
	raw.mustHave(len(out))
	origin.mustHave(len(out))
	s.mustHave(len(out))
	mustHave(len(out), l.Water, l.WaterGroup)
	for i := range out {
		if out[i] == Dry {
			continue
		}
		point := raw.at(i)
		dst.keep(i, point)
		if out[i] != Corrected {
			continue
		}
		surface, from := s.around(i, point.Z), origin.at(i)
		up := from.Sub(point)
		if !isOrigin(from, up, surface) {
			out[i] = NoOrigin
			continue
		}
		p, o := bend(up, surface, &l, i, maxIncidenceRad)
		out[i] = dst.put(i, point, surface, p, o)
	}
}

// path is a pulse's way near the water, relative to the apparent point.
type path struct {
	entry, end                  optics.Vec
	incidenceRad, refractionRad float64
}

// bend follows the pulse of point i; up is the way from the apparent point to its
// origin. The entry is at t up with t = rise / (height of the origin above the surface +
// rise). Both are positive; rise is not where a Mark function was left out.
func bend(up optics.Vec, surface plane, l *Light, i int, maxIncidenceRad float64) (path, Outcome) {
	normal, back := surface.normal(), up.Unit()
	if !(surface.rise > 0 && back.Dot(normal) > 0) {
		return path{}, Unsolved
	}
	p := path{incidenceRad: back.AngleRad(normal)}
	if !(p.incidenceRad <= maxIncidenceRad) {
		return p, Grazing
	}
	if !l.hasPhase(i) || !l.hasGroup(i) {
		return path{}, Unsolved
	}
	down, ok := optics.Refract(back.Scale(-1), normal, l.Air, l.Water[i])
	if !ok {
		return p, Grazing
	}
	p.refractionRad = down.AngleRad(normal.Scale(-1))
	p.entry = up.Scale(surface.rise / (up.Z - surface.climb(up)))
	p.end = p.entry.Add(down.Scale(p.entry.Norm() * l.RangeIndex / l.WaterGroup[i]))
	return p, Corrected
}

// put writes entry i from its path and returns its final outcome.
func (r *Result) put(i int, point optics.Vec, surface plane, p path, o Outcome) Outcome {
	if o == Grazing {
		r.IncidenceRad[i] = p.incidenceRad
	}
	if o != Corrected {
		return o
	}
	end := point.Add(p.end)
	waterLevel, entryLevel := surface.levelAt(p.end), surface.levelAt(p.entry)
	depth := waterLevel - end.Z
	if !isFiniteVec(end) || !isFinite(depth) {
		return Unsolved
	}
	r.X[i], r.Y[i], r.Z[i] = end.X, end.Y, end.Z
	r.Depth[i], r.WaterLevel[i], r.EntryLevel[i] = depth, waterLevel, entryLevel
	r.IncidenceRad[i], r.RefractionRad[i] = p.incidenceRad, p.refractionRad
	return Corrected
}
