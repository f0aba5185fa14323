package correct

// Vertical corrects points as if each had been seen straight down through a level
// surface: depth below the surface at the point's plan position times Water/Air, plan position
// kept. It is the small-angle law, h = n h_a (Tewinkel 1963; Woodget et al.
// 2015), the quickest kernel and the one that needs no rays. At an off-nadir
// angle i it leaves a depth too small, by a share of about tan^2(i) (n^2-1)/2n^2 for
// images all around a point and up to three times that along a short base.
//
// Of l it reads Air and Water, so WaterGroup may be nil; of s the level. It
// writes all columns of dst but the angles, which it does not know (NaN). A
// point that is not Corrected keeps its raw position. An index that is not
// positive and finite, or a result that is not finite, gives Unsolved.
func Vertical(dst *Result, out []Outcome, raw XYZ, s Planes, l Light) {
	dst.mustHave(len(out))
	raw.mustHave(len(out))
	s.mustHave(len(out))
	mustHave(len(out), l.Water)
	for i := range out {
		if out[i] == Dry {
			continue
		}
		point := raw.at(i)
		dst.keep(i, point)
		if out[i] != Corrected {
			continue
		}
		level, ratio := s.Level[i], l.Water[i]/l.Air
		rise := level - point.Z
		z := point.Z - (ratio-1)*rise // not level - ratio*rise: a ratio of 1 changes no bit
		depth := level - z
		if !(rise > 0) || !l.hasPhase(i) || !isFiniteVec(point) || !isFinite(depth) {
			out[i] = Unsolved
			continue
		}
		dst.Z[i], dst.Depth[i] = z, depth
		dst.WaterLevel[i], dst.EntryLevel[i] = level, level
	}
}
