package pipeline

import (
	"fmt"
	"math"
)

// Limits of what a plan takes for granted, in metres. Common practice, no source.
const (
	levelExtent = 2000 // one constant ellipsoidal level over more than this is not level
	levelRise   = 30   // the highest point of a shallow cloud lies no deeper than this
)

// geometryCautions looks at the bounds for the usual mistakes.
func (p *planner) geometryCautions() []string {
	var cautions []string
	say := func(format string, args ...any) { cautions = append(cautions, fmt.Sprintf(format, args...)) }
	x, y, z := p.bounds[0], p.bounds[1], p.bounds[2]
	if math.Max(math.Abs(x.low), math.Abs(x.high)) <= 180 && math.Max(math.Abs(y.low), math.Abs(y.high)) <= 90 {
		say("all x lie within 180 and all y within 90: these look like degrees; coordinates must be projected lengths")
	}
	width, length := x.high-x.low, y.high-y.low
	level := p.job.Surface.Level
	if level == nil {
		return cautions
	}
	if extent := math.Max(width, length) * p.survey.plan; extent > levelExtent {
		say("one constant level over %.1f km: an ellipsoidal level is not level over such a distance; use a plane, or heights above a geoid", extent/1000)
	}
	unit := p.job.Input.VerticalUnit
	switch {
	case *level <= z.low:
		say("the level %g lies %.1f %s below the lowest point: no point would be under water; are level and cloud in one vertical reference?", *level, z.low-*level, unit)
	case (*level-z.high)*p.height > levelRise:
		say("the level %g lies %.1f %s above the highest point: far for a shallow cloud; are level and cloud in one vertical reference?", *level, *level-z.high, unit)
	}
	return cautions
}
