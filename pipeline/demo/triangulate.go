package demo

// sighting is a point in an image, at x and y as camera.project has them.
type sighting struct {
	camera *camera
	x, y   float64
}

// see returns a camera's sighting of a place, straight on.
func (c *camera) see(p vec) sighting {
	x, y, _ := c.project(p)
	return sighting{c, x, y}
}

// triangulate returns where software that knows nothing of water puts a point: where
// the sum of the squared distances, in all images, from the sightings to the point's
// own projections is least. Two sightings or more, from places that are not in one line
// with the point.
//
// Gauss and Newton's steps, which shrink by the rays' distance over their length, some
// 1e-3, until one is below 1e-8 m. The start is some metres off at most.
func triangulate(sightings []sighting, start vec) vec {
	p := start
	for range 50 {
		step := correction(sightings, p)
		p = p.plus(1, step)
		if step.length() < 1e-8 {
			break
		}
	}
	return p
}

// correction returns the step to the least squares of distances that are taken to be
// linear around p, by the normal equations.
func correction(sightings []sighting, p vec) vec {
	var columns [3]vec // of the normal matrix, which is symmetric
	var right vec
	for _, s := range sightings {
		x, y, away := s.camera.project(p)
		for _, d := range [2]struct {
			axis    vec
			at, off float64
		}{{s.camera.right, x, s.x - x}, {s.camera.top, y, s.y - y}} {
			g := vec{}.plus(1/away, d.axis.plus(d.at, s.camera.back)) // derivative of at by p
			columns[0] = columns[0].plus(g.x, g)
			columns[1] = columns[1].plus(g.y, g)
			columns[2] = columns[2].plus(g.z, g)
			right = right.plus(d.off, g)
		}
	}
	// Cramer's rule.
	a, b, c := columns[0], columns[1], columns[2]
	bc := cross(b, c)
	return vec{}.plus(1/dot(a, bc), vec{dot(right, bc), dot(a, cross(right, c)), dot(a, cross(b, right))})
}
