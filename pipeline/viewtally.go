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
	images       imageCheck
	lift         span // true less raw z of corrected points, m
	drift        span // distance in plan of corrected points, m
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
	t.images.join(o.images)
	t.assumed, t.offside = t.assumed+o.assumed, t.offside+o.offside
	t.views.join(o.views)
	t.lift.join(o.lift)
	t.drift.join(o.drift)
}

// imageCheck counts views that the cloud names, and those of them by cameras whose image
// does not show the raw point.
type imageCheck struct{ rays, outside int64 }

// imageCheckStep is how many points lie between two whose views are looked at.
const imageCheckStep = 16

func (c *imageCheck) join(o imageCheck) { c.rays, c.outside = c.rays+o.rays, c.outside+o.outside }

// checkImages looks whether the images of a point's cameras show it, where images are
// known.
func (y *rays) checkImages(sn *sensor, w *workspace, cameras []int32, i int) {
	if !sn.cameras.HasImages() {
		return
	}
	y.seeing = sn.cameras.visibility.AppendSeeingOf(y.seeing[:0], cameras, w.raw.X[i], w.raw.Y[i], w.raw.Z[i])
	y.images.join(imageCheck{int64(len(cameras)), int64(len(cameras) - len(y.seeing))})
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
	if c := t.images; c.outside*20 > c.rays {
		say("of %d views that were looked at, %d are of cameras whose images do not show the point: are angles in degrees, and rotations those of object = centre + R camera, R = Rx(omega) Ry(phi) Rz(kappa)?", c.rays, c.outside)
	}
	if n := t.assumed; n > 0 {
		say("%d of %d points name no cameras; those that may have seen them were taken, by %s. Cameras that did not see a point cap the accuracy (60 m up, 5 m deep, 6 of 12 cameras wrong: 11 to 158 mm); a column views settles it", n, t.points, s.viewRules())
	}
	return cautions
}
