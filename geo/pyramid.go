package geo

import "slices"

// pyramids are the parts of space that images show, by camera.
type pyramids []pyramid

// pyramid is the part of space that an image shows: its tip is the perspective centre,
// and a point is in it if its difference d from the tip has no product with the four
// sides below 0. For cx + f x/(-z) >= 0 is cx (-z) + f x >= 0 where -z > 0, and so are
// the other three borders of the image. Two opposite sides give width (-z) >= 0, so only
// the tip itself could be in all four without being in front of the camera.
type pyramid struct {
	tip   [3]float64
	sides [4][3]float64
}

// newPyramid returns the pyramid of an image with rotation r.
func newPyramid(x, y, z float64, r *[9]float64, im *pinhole) pyramid {
	p := pyramid{tip: [3]float64{x, y, z}}
	for axis := range 3 {
		right, up, back := r[3*axis], r[3*axis+1], r[3*axis+2]
		p.sides[0][axis] = im.focal*right - im.cx*back
		p.sides[1][axis] = -im.focal*right - (im.width-im.cx)*back
		p.sides[2][axis] = -im.focal*up - im.cy*back
		p.sides[3][axis] = im.focal*up - (im.height-im.cy)*back
	}
	return p
}

// dot returns the product of a side and a difference. The conversions keep compilers
// from joining a product with a sum, so that it never falls where a term rises.
func dot(side *[3]float64, dx, dy, dz float64) float64 {
	return float64(side[0]*dx) + float64(side[1]*dy) + float64(side[2]*dz)
}

// appendSeeing appends those of the cameras listed whose image shows a point. Which
// ones do is as good as random, so it counts on without a branch.
func (ps pyramids) appendSeeing(dst, cameras []int32, x, y, z float64) []int32 {
	n := len(dst)
	dst = slices.Grow(dst, len(cameras))[:n+len(cameras)]
	for _, k := range cameras {
		p := &ps[k]
		dx, dy, dz := x-p.tip[0], y-p.tip[1], z-p.tip[2]
		dst[n] = k
		n += one(dot(&p.sides[0], dx, dy, dz) >= 0) & one(dot(&p.sides[1], dx, dy, dz) >= 0) &
			one(dot(&p.sides[2], dx, dy, dz) >= 0) & one(dot(&p.sides[3], dx, dy, dz) >= 0) &
			(one(dx != 0) | one(dy != 0) | one(dz != 0))
	}
	return dst[:n]
}

// reaches tells whether a camera may see a point of a box: whether for each side the
// corner with the greatest product is in. Rounding keeps the order of numbers, so the
// product of no point of the box, as it is computed, is greater.
func (ps pyramids) reaches(k int32, b *cuboid) bool {
	return ps[k].within(b, 1)
}

// covers tells whether a camera sees all points of a box.
func (ps pyramids) covers(k int32, b *cuboid) bool {
	return ps[k].within(b, -1)
}

// within tells whether all sides have the box's corner in that has the greatest product
// with them (sign 1) or the smallest (sign -1).
func (p *pyramid) within(b *cuboid, sign float64) bool {
	for i := range p.sides {
		var d [3]float64 // 0 where the side has no part in the axis, for 0 times infinity is none
		for axis, s := range p.sides[i] {
			if s*sign > 0 {
				d[axis] = b.high[axis] - p.tip[axis]
			} else if s*sign < 0 {
				d[axis] = b.low[axis] - p.tip[axis]
			}
		}
		if !(dot(&p.sides[i], d[0], d[1], d[2]) >= 0) {
			return false
		}
	}
	return true
}

// cones are the parts of space within an angle of the vertical below cameras that look
// down (up = 1) or above those that look up (up = -1).
type cones struct {
	x, y, z     []float64
	up, tangent float64
}

// holds tells whether a plan distance, from its parts, and a height below the tip are in
// the cone. It never turns false where dx or dy falls towards 0 or dz rises.
func (c *cones) holds(dx, dy, dz float64) bool {
	radius := dz * c.tangent
	return dz > 0 && float64(dx*dx)+float64(dy*dy) <= float64(radius*radius)
}

// appendSeeing appends those of the cameras listed in whose cone a point is.
func (c *cones) appendSeeing(dst, cameras []int32, x, y, z float64) []int32 {
	n := len(dst)
	dst = slices.Grow(dst, len(cameras))[:n+len(cameras)]
	for _, k := range cameras {
		dst[n] = k
		n += one(c.holds(x-c.x[k], y-c.y[k], c.up*(c.z[k]-z)))
	}
	return dst[:n]
}

// reaches tells whether a point of a box may be in a camera's cone: whether it would be
// with the box's smallest plan distances and its greatest height below the tip.
func (c *cones) reaches(k int32, b *cuboid) bool {
	dx := max(b.low[0]-c.x[k], c.x[k]-b.high[0], 0)
	dy := max(b.low[1]-c.y[k], c.y[k]-b.high[1], 0)
	return c.holds(dx, dy, max(c.up*(c.z[k]-b.low[2]), c.up*(c.z[k]-b.high[2])))
}

// covers tells whether all points of a box are in a camera's cone.
func (c *cones) covers(k int32, b *cuboid) bool {
	dx := max(c.x[k]-b.low[0], b.high[0]-c.x[k])
	dy := max(c.y[k]-b.low[1], b.high[1]-c.y[k])
	return c.holds(dx, dy, min(c.up*(c.z[k]-b.low[2]), c.up*(c.z[k]-b.high[2])))
}

// one is 1 for true, 0 for false.
func one(b bool) int {
	if b {
		return 1
	}
	return 0
}
