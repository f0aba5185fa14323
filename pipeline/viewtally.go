package pipeline

import (
	"fmt"
	"math"

	"bentray/correct"
)

// viewTally counts the rays of points made from images, and how far the correction
// moved them.
type viewTally struct {
	points, rays int64 // points whose cameras were looked for, and these
	views        span
	widest       float64 // squared tangent from the vertical of a straight ray to a point
	assumed      int64   // of the points, those whose cameras the cloud does not name
	offside      int64   // of the points, those with a camera on their own side of the surface
	lift         span    // true less raw z of corrected points, m
	drift        span    // distance in plan of corrected points, m
}

func newViewTally() viewTally {
	return viewTally{views: emptySpan(), lift: emptySpan(), drift: emptySpan()}
}

// add counts point i, whose results are in metres.
func (t *viewTally) add(w *workspace, i int, named bool) {
	n := w.rayCount[i]
	if n != n {
		return
	}
	t.points++
	t.rays += int64(n)
	t.views.add(n)
	if !named {
		t.assumed++
	}
	switch w.out[i] {
	case correct.Corrected:
		t.lift.add(w.result.Z[i] - w.raw.Z[i])
		t.drift.add(math.Hypot(w.result.X[i]-w.raw.X[i], w.result.Y[i]-w.raw.Y[i]))
	case correct.NoOrigin:
		t.offside++
	}
}

func (t *viewTally) join(o *viewTally) {
	t.points, t.rays = t.points+o.points, t.rays+o.rays
	t.widest = max(t.widest, o.widest)
	t.assumed, t.offside = t.assumed+o.assumed, t.offside+o.offside
	t.views.join(o.views)
	t.lift.join(o.lift)
	t.drift.join(o.drift)
}

// cautions says what caps the accuracy of points made from images.
func (t *viewTally) cautions(s *survey) (cautions []string) {
	say := func(format string, args ...any) { cautions = append(cautions, fmt.Sprintf(format, args...)) }
	for _, sn := range s.sensors {
		if sn.isMultiview() && sn.Rays.Residual == "" && sn.Rays.Solve == "invert" {
			say("what the raw cloud's rays were intersected by is not known; residual = %q was taken, and another rule can move points by millimetres to centimetres at 20 to 45 degrees; set %s", sn.residualName(), sn.key("residual"))
		}
	}
	if n := t.offside; n > 0 {
		say("%d of %d points were seen by a camera that is on their own side of the surface: are cameras, cloud and level in one system and unit?", n, t.points)
	}
	if n := t.assumed; n > 0 {
		say("%d of %d points name no cameras; those that may have seen them were taken, by %s. Cameras that did not see a point cap the accuracy (60 m up, 5 m deep, 6 of 12 cameras wrong: 11 to 158 mm); a column views settles it", n, t.points, s.viewRules())
	}
	return cautions
}
