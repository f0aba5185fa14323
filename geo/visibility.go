package geo

import (
	"errors"
	"fmt"
	"math"
	"sync/atomic"
)

// Visibility finds the cameras that see a point. A tree of boxes over all of space knows
// the cameras that may see a point of a box; the rule itself decides on each of those.
// A box is divided when a point first comes into it, until an eighth of its cameras see
// all of it or few are in doubt; so a point costs about what the cameras that see it
// cost, however many others there are. A tree that has grown to 32 MiB is begun anew.
// Several goroutines may ask at once; what they get does not depend on the tree.
type Visibility struct {
	rule cameraRule
	tree atomic.Pointer[cameraTree]
}

// cameraRule says which cameras see a point.
type cameraRule interface {
	// appendSeeing appends those of the cameras listed that see a point, in their order.
	appendSeeing(dst, cameras []int32, x, y, z float64) []int32
	// reaches tells whether a camera may see a point of a box, never wrongly that it
	// does not.
	reaches(k int32, b *cuboid) bool
	// covers tells whether a camera sees all points of a box.
	covers(k int32, b *cuboid) bool
}

// farthestPlace (m) is beyond all places, and its square is a number.
const farthestPlace = 1e100

// ByImage returns the rule by which a camera sees the points that its image shows, as
// the pinhole camera of Cameras projects them: points in front of it with 0 <= column
// <= width and 0 <= row <= height. It knows of no distortion and of nothing in between.
//
// It is an error if the cameras have no rotations or no focal lengths.
func (c *Cameras) ByImage() (*Visibility, error) {
	if c.rotations == nil {
		return nil, errors.New("cameras have no rotations, which tell what their images show, want omega, phi, kappa or r11 to r33")
	}
	if c.images == nil {
		return nil, errors.New("cameras have no image sizes, which tell what their images show, want focal_px, width_px, height_px")
	}
	ps := make(pyramids, c.Len())
	for k := range ps {
		ps[k] = newPyramid(c.x[k], c.y[k], c.z[k], &c.rotations[k], &c.images[k])
	}
	return c.visibility(ps), nil
}

// ByAngle returns the rule by which a camera sees the points below it whose direction is
// at most maxOffNadirRad (radians) from straight down; with fromWater, for cameras that
// look up out of the water, the points above it and from straight up. A camera at the
// height of the point does not see it.
//
// It is an error if the angle is not above 0 and below pi/2.
func (c *Cameras) ByAngle(maxOffNadirRad float64, fromWater bool) (*Visibility, error) {
	if !(maxOffNadirRad > 0 && maxOffNadirRad < math.Pi/2) {
		return nil, fmt.Errorf("largest angle from the vertical is %v degrees, want more than 0 and less than 90", maxOffNadirRad*(180/math.Pi))
	}
	cs := &cones{x: c.x, y: c.y, z: c.z, up: 1, tangent: math.Tan(maxOffNadirRad)}
	if fromWater {
		cs.up = -1
	}
	return c.visibility(cs), nil
}

// visibility returns the finder of a rule, its tree not yet divided.
func (c *Cameras) visibility(r cameraRule) *Visibility {
	low, high := c.Bounds()
	v := &Visibility{rule: r}
	v.tree.Store(newCameraTree(r, c.Len(), low, high))
	return v
}

// AppendSeeing appends the numbers of the cameras that see the point x, y, z (m), in
// rising order, and returns the longer slice. No camera sees a point with a coordinate
// that is not finite or beyond 1e100 m.
//
// It allocates where dst is too short, and where the point is the first in a box
// of the tree.
func (v *Visibility) AppendSeeing(dst []int32, x, y, z float64) []int32 {
	if !isPlace(x, y, z) {
		return dst
	}
	t := v.tree.Load()
	if t.size.Load() > maxTreeSize {
		v.tree.CompareAndSwap(t, t.bare())
		t = v.tree.Load()
	}
	return v.rule.appendSeeing(dst, t.cameras(v.rule, x, y, z), x, y, z)
}

// AppendSeeingOf is AppendSeeing for the cameras listed alone, in their order, each of
// which it asks.
func (v *Visibility) AppendSeeingOf(dst, cameras []int32, x, y, z float64) []int32 {
	if !isPlace(x, y, z) {
		return dst
	}
	return v.rule.appendSeeing(dst, cameras, x, y, z)
}

func isPlace(x, y, z float64) bool {
	return math.Abs(x) <= farthestPlace && math.Abs(y) <= farthestPlace && math.Abs(z) <= farthestPlace
}
