package pipeline

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"github.com/paulmach/orb"

	"bentray/geo"

	"bentray/pipeline/job"
)

// How many level points a profile has at least for a blunder among them to be set aside:
// at times, and mostly (geo's TestProfileFewLevels).
const (
	blindLevels = 4
	fewLevels   = 8
)

// Limits of what a plan takes for granted, in metres. Common practice, no source.
const (
	levelExtent = 2000 // one constant ellipsoidal level over more than this is not level
	levelRise   = 30   // the highest point of a shallow cloud lies no deeper than this
	farPlaces   = 5e4  // stations and gauges that are all farther off tell nothing of the water here
)

// geometryCautions looks at the bounds of raw points for the usual mistakes.
func (t *tally) geometryCautions(s *survey) []string {
	var cautions []string
	say := func(format string, args ...any) { cautions = append(cautions, fmt.Sprintf(format, args...)) }
	x, y, z := t.bounds[0], t.bounds[1], t.bounds[2]
	if x.isEmpty() || y.isEmpty() || z.isEmpty() {
		return nil
	}
	if likeDegrees(x, y) {
		say("all x lie within 180 and all y within 90: these look like degrees; coordinates must be projected lengths")
	}
	apart := func(what string, b orb.Bound) {
		if b.Max[0] < x.low || b.Min[0] > x.high || b.Max[1] < y.low || b.Min[1] > y.high {
			say("the %s (x %.1f to %.1f, y %.1f to %.1f) do not meet the points (x %.1f to %.1f, y %.1f to %.1f); are both in one projected system?",
				what, b.Min[0], b.Max[0], b.Min[1], b.Max[1], x.low, x.high, y.low, y.high)
		}
	}
	if s.extent != nil {
		apart("polygons", s.extentBound)
	}
	if b := s.zones.bound; s.zones.index != nil && likeDegrees(span{b.Min[0], b.Max[0]}, span{b.Min[1], b.Max[1]}) {
		apart("zones", b) // elsewhere a tile may well lie outside all zones
	}
	for _, places := range []struct {
		what string
		x, y []float64
	}{{"stations", s.water.records.X, s.water.records.Y}, {"gauges", s.surface.source.gauges.X, s.surface.source.gauges.Y}} {
		if text := s.farFrom(x, y, places.x, places.y); text != "" {
			say("the %s %s; are both in one projected system and unit?", places.what, text)
		}
	}
	for _, sn := range s.sensors {
		if sn.isMultiview() {
			if text := s.farFrom(x, y, sn.cameras.centres.X, sn.cameras.centres.Y); text != "" {
				say("the cameras %s; are both in one projected system and unit?", text)
			}
		}
	}
	if t.looksLikeWeek(s) {
		say("gps_time is %.0f to %.0f: these look like seconds of a GPS week; set time = \"gps-week\" and week in [input]", t.times.low, t.times.high)
	}
	if s.surface.isConstant() {
		cautions = append(cautions, s.levelCautions(*s.job.Surface.Level, math.Max(x.high-x.low, y.high-y.low)*s.plan, z)...)
	} else if t.depth.low > levelRise && !t.depth.isEmpty() {
		say("no corrected point lies within %g m of the water's surface: far for a shallow cloud; are surface and cloud in one vertical reference?", float64(levelRise))
	}
	return cautions
}

// looksLikeWeek tells whether times that should be adjusted standard GPS times are all
// within a week of its zero, in 2011.
func (t *tally) looksLikeWeek(s *survey) bool {
	const week = 7 * 86400
	return s.job.Input.Time == job.GPSAdjusted && !t.times.isEmpty() && t.times.low >= 0 && t.times.high <= week
}

// profileCautions looks at how the level points agree with their profile, and at
// what they leave unsaid.
func (s *survey) profileCautions() {
	f := s.surface.profile.Fit()
	say := func(format string, args ...any) { s.cautions = append(s.cautions, fmt.Sprintf(format, args...)) }
	switch n := len(f.Chainage) - f.Beyond; {
	case n < blindLevels:
		say("%d level points only: a blunder among them would not show", n)
	case n < fewLevels:
		say("%d level points only: a blunder among them may not show", n)
	}
	if f.IsUneven() {
		say("the level points are %.3f %s (rms) off the profile, but scatter by %.3f from one to the next: their levels do not keep falling along the centreline; look at them with bentray surface",
			f.Spread/s.height, s.job.Input.VerticalUnit, f.Scatter/s.height)
	}
	if len(f.Unplaced) > 0 {
		s.unplacedCaution(f.Unplaced)
	}
}

// unplacedCaution tells of the gap with the greatest fall, and how many more there are.
func (s *survey) unplacedCaution(gaps []geo.Drop) {
	d := s.drop(slices.MaxFunc(gaps, func(a, b geo.Drop) int { return cmp.Compare(a.Fall, b.Fall) }))
	more := ""
	if n := len(gaps) - 1; n > 0 {
		more = fmt.Sprintf(" (and %d more like it)", n)
	}
	unit := s.job.Input.VerticalUnit
	s.cautions = append(s.cautions, fmt.Sprintf("the level changes by %.3f %s between level points at %.1f and %.1f %s along the centreline%s, more than the slope beside explains: a weir or rapid there has no place, and the level may be wrong by nearly as much; measure levels close to it",
		d.Fall, unit, d.From, d.To, s.job.Input.Unit, more))
}

// likeDegrees tells whether coordinates may be longitudes and latitudes.
func likeDegrees(x, y span) bool {
	return max(-x.low, x.high) <= 180 && max(-y.low, y.high) <= 90
}

// farFrom says how places (m) lie where they do not seem to belong to points of these
// bounds (in the job's unit): nothing where they do, or there are none.
func (s *survey) farFrom(x, y span, placeX, placeY []float64) string {
	if len(placeX) == 0 {
		return ""
	}
	nearest, ownX, ownY := math.Inf(1), emptySpan(), emptySpan()
	for i := range placeX {
		ownX.add(placeX[i] / s.plan)
		ownY.add(placeY[i] / s.plan)
		nearest = min(nearest, math.Hypot(x.beyond(placeX[i]/s.plan), y.beyond(placeY[i]/s.plan))*s.plan)
	}
	switch {
	case nearest > 0 && likeDegrees(ownX, ownY) && !likeDegrees(x, y):
		return fmt.Sprintf("(x %.6g to %.6g, y %.6g to %.6g) look like degrees beside the points (x %.1f to %.1f, y %.1f to %.1f)",
			ownX.low, ownX.high, ownY.low, ownY.high, x.low, x.high, y.low, y.high)
	case nearest > farPlaces:
		return fmt.Sprintf("all lie far from the points, the nearest %.0f km", nearest/1000)
	}
	return ""
}

// levelCautions looks at one constant level; extent is in metres, level and
// heights are in the job's unit.
func (s *survey) levelCautions(level, extent float64, z span) (cautions []string) {
	say := func(format string, args ...any) { cautions = append(cautions, fmt.Sprintf(format, args...)) }
	if extent > levelExtent {
		say("one constant level over %.1f km: an ellipsoidal level is not level over such a distance; use a plane, or heights above a geoid", extent/1000)
	}
	unit := s.job.Input.VerticalUnit
	switch up := slices.ContainsFunc(s.sensors, (*sensor).looksUp); {
	case up && level >= z.high:
		say("the level %g lies %.1f %s above the highest point: no point would be out of the water; are level and cloud in one vertical reference?", level, level-z.high, unit)
	case up: // points far from the level may be in the air
	case level <= z.low:
		say("the level %g lies %.1f %s below the lowest point: no point would be under water; are level and cloud in one vertical reference?", level, z.low-level, unit)
	case (level-z.high)*s.height > levelRise:
		say("the level %g lies %.1f %s above the highest point: far for a shallow cloud; are level and cloud in one vertical reference?", level, level-z.high, unit)
	}
	return cautions
}
