package pipeline

import (
	"fmt"
	"math"

	"github.com/paulmach/orb"
)

// Limits of what a plan takes for granted, in metres. Common practice, no source.
const (
	levelExtent = 2000 // one constant ellipsoidal level over more than this is not level
	levelRise   = 30   // the highest point of a shallow cloud lies no deeper than this
)

// geometryCautions looks at the bounds of raw points for the usual mistakes.
func (t *tally) geometryCautions(s *survey) []string {
	var cautions []string
	say := func(format string, args ...any) { cautions = append(cautions, fmt.Sprintf(format, args...)) }
	x, y, z := t.bounds[0], t.bounds[1], t.bounds[2]
	if x.isEmpty() || y.isEmpty() || z.isEmpty() {
		return nil
	}
	if math.Max(math.Abs(x.low), math.Abs(x.high)) <= 180 && math.Max(math.Abs(y.low), math.Abs(y.high)) <= 90 {
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
	if b := s.zones.bound; s.zones.index != nil && math.Max(math.Abs(b.Min[0]), math.Abs(b.Max[0])) <= 180 && math.Max(math.Abs(b.Min[1]), math.Abs(b.Max[1])) <= 90 {
		apart("zones", b) // elsewhere a tile may well lie outside all zones
	}
	if s.surface.isConstant() {
		cautions = append(cautions, s.levelCautions(*s.job.Surface.Level, math.Max(x.high-x.low, y.high-y.low)*s.plan, z)...)
	} else if t.depth.low > levelRise && !t.depth.isEmpty() {
		say("no corrected point lies within %g m of the water's surface: far for a shallow cloud; are surface and cloud in one vertical reference?", float64(levelRise))
	}
	return cautions
}

// profileCautions looks at how the level points agree with their profile.
func (s *survey) profileCautions() {
	f := s.surface.profile.Fit()
	if f.IsUneven() {
		s.cautions = append(s.cautions, fmt.Sprintf("the level points are %.3f %s (rms) off the profile, but scatter by %.3f from one to the next: their levels do not keep falling along the centreline; look at them with bentray surface",
			f.Spread/s.height, s.job.Input.VerticalUnit, f.Scatter/s.height))
	}
}

// levelCautions looks at one constant level; extent is in metres, level and
// heights are in the job's unit.
func (s *survey) levelCautions(level, extent float64, z span) (cautions []string) {
	say := func(format string, args ...any) { cautions = append(cautions, fmt.Sprintf(format, args...)) }
	if extent > levelExtent {
		say("one constant level over %.1f km: an ellipsoidal level is not level over such a distance; use a plane, or heights above a geoid", extent/1000)
	}
	unit := s.job.Input.VerticalUnit
	switch {
	case level <= z.low:
		say("the level %g lies %.1f %s below the lowest point: no point would be under water; are level and cloud in one vertical reference?", level, z.low-level, unit)
	case (level-z.high)*s.height > levelRise:
		say("the level %g lies %.1f %s above the highest point: far for a shallow cloud; are level and cloud in one vertical reference?", level, level-z.high, unit)
	}
	return cautions
}
