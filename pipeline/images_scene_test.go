package pipeline

import (
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

// An independent simulation of a survey from images. Light takes the way of least time
// over the surface (scene), and the raw point is where the sum of squares that a
// triangulation is said to minimise is least. Derivatives are differences. It
// shares no code and no formula with the ray models.

// photo is a camera: its centre, its angles (degrees) and when it saw.
type photo struct {
	at                vec
	omega, phi, kappa float64
	utc               float64
}

// photoFocal, photoWidth and photoHeight (pixels) are those of every camera; it sees to 39
// and 31 degrees.
const photoFocal, photoWidth, photoHeight = 1000.0, 1620.0, 1200.0

func (v vec) cross(w vec) vec {
	return vec{v[1]*w[2] - v[2]*w[1], v[2]*w[0] - v[0]*w[2], v[0]*w[1] - v[1]*w[0]}
}

func (v vec) unit() vec { return v.plus(1/v.length()-1, v) }

// turned is v turned about an axis (0 x, 1 y, 2 z) by degrees.
func (v vec) turned(axis int, degrees float64) vec {
	sin, cos := math.Sincos(degrees * math.Pi / 180)
	a, b := (axis+1)%3, (axis+2)%3
	v[a], v[b] = cos*v[a]-sin*v[b], sin*v[a]+cos*v[b]
	return v
}

// outward takes a direction of the camera's frame to the object.
func (p photo) outward(v vec) vec {
	return v.turned(2, p.kappa).turned(1, p.phi).turned(0, p.omega)
}

// inward takes a direction of the object to the camera's frame.
func (p photo) inward(v vec) vec {
	return v.turned(0, -p.omega).turned(1, -p.phi).turned(2, -p.kappa)
}

// shows tells whether a straight ray from the point falls into the image.
func (p photo) shows(point vec) bool {
	c := p.inward(point.plus(-1, p.at))
	return c[2] < 0 && math.Abs(c[0]/c[2])*photoFocal <= photoWidth/2 && math.Abs(c[1]/c[2])*photoFocal <= photoHeight/2
}

// offNadir is the angle of the point from the vertical through the camera, degrees.
func (p photo) offNadir(point vec) float64 {
	d := point.plus(-1, p.at)
	return math.Atan2(math.Hypot(d[0], d[1]), math.Abs(d[2])) * 180 / math.Pi
}

// block is 30 cameras over a square of 100 m, 60 m above 0, tilted up to 20 degrees, each at
// its own time within an hour.
func block(r *rand.Rand) (list []photo) {
	for k := range 30 {
		p := photo{at: vec{20*float64(k%6) + 6*r.Float64(), 24*float64(k/6) + 6*r.Float64(), 57 + 6*r.Float64()}}
		p.omega, p.phi, p.kappa = 40*r.Float64()-20, 40*r.Float64()-20, 360*r.Float64()-180
		p.utc = tideStart + 14_000 + 3600*float64(k*7%30)/30
		list = append(list, p)
	}
	return list
}

// miss is what a triangulation with the residual named makes small, of the ray from a
// camera along dir and a point.
func (p photo) miss(residual string, dir, point vec) (e vec) {
	x, d := point.plus(-1, p.at), dir.unit()
	switch residual {
	case "image":
		a, b := p.inward(x), p.inward(d)
		return vec{b[0]/b[2] - a[0]/a[2], b[1]/b[2] - a[1]/a[2]}
	case "angle":
		across := d.cross(x)
		share := 1 / x.length()
		if sin := across.length(); sin > 0 {
			share = math.Atan2(sin, d.dot(x)) / sin
		}
		return e.plus(share, across)
	}
	return x.plus(-d.dot(x), d)
}

// triangulate minimises the sum of squared misses from start on: Gauss-Newton.
func triangulate(residual string, cameras []photo, dirs []vec, start vec) vec {
	const h = 1e-3
	point := start
	for range 60 {
		var n [3][4]float64
		for k, c := range cameras {
			e := c.miss(residual, dirs[k], point)
			var by [3]vec
			for axis := range by {
				up, down := point, point
				up[axis] += h
				down[axis] -= h
				a, b := c.miss(residual, dirs[k], up), c.miss(residual, dirs[k], down)
				by[axis] = vec{}.plus(1/(2*h), a.plus(-1, b))
			}
			for i := range by {
				for j := range by {
					n[i][j] += by[i].dot(by[j])
				}
				n[i][3] -= by[i].dot(e)
			}
		}
		step := eliminate(n)
		if point = point.plus(1, step); step.length() < 1e-12 {
			break
		}
	}
	return point
}

// eliminate solves three equations with a positive definite matrix.
func eliminate(n [3][4]float64) vec {
	for c := range 3 {
		for r := range 3 {
			if r != c {
				f := n[r][c] / n[c][c]
				for k := range 4 {
					n[r][k] -= f * n[c][k]
				}
			}
		}
	}
	return vec{n[0][3] / n[0][0], n[1][3] / n[1][1], n[2][3] / n[2][2]}
}

// crossing returns where light between a place in the air and one in the water crosses
// the surface: where the time is least, sought from the crossing of the plane that touches
// the surface above the water's place.
func (c *scene) crossing(dry, wet vec, utc float64) vec {
	slope := func(x, y float64) (p vec, gx, gy float64) {
		z, sx, sy := c.surface(x, y, utc)
		p = vec{x, y, z}
		pull := vec{}.plus(c.air, p.plus(-1, dry).unit()).plus(c.waterPhase, p.plus(-1, wet).unit())
		return p, pull[0] + sx*pull[2], pull[1] + sy*pull[2]
	}
	z, sx, sy := c.surface(wet[0], wet[1], utc)
	start := sea{level: z - sx*wet[0] - sy*wet[1], slopeX: sx, slopeY: sy, air: c.air, waterPhase: c.waterPhase}.entry(dry, wet)
	x, y := start[0], start[1]
	const h = 1e-4
	for range 50 {
		_, gx, gy := slope(x, y)
		_, ax, ay := slope(x+h, y)
		_, bx, by := slope(x-h, y)
		_, cx, cy := slope(x, y+h)
		_, dx, dy := slope(x, y-h)
		xx, xy, yx, yy := (ax-bx)/(2*h), (cx-dx)/(2*h), (ay-by)/(2*h), (cy-dy)/(2*h)
		det := xx*yy - xy*yx
		stepX, stepY := (gx*yy-gy*xy)/det, (gy*xx-gx*yx)/det
		if x, y = x-stepX, y-stepY; math.Hypot(stepX, stepY) < 1e-12 {
			break
		}
	}
	p, _, _ := slope(x, y)
	return p
}

// image is a point made from images, with its truth. Levels and slopes are means over the
// rays, but waterLevel, which is over the bed at the point's time.
type image struct {
	bed, raw               vec
	views                  []int
	utc                    float64
	waterLevel, entryLevel float64
	slopeX, slopeY         float64
	incidence, refraction  float64 // degrees
}

// look sees the bed from the cameras listed, each through the surface at its own time or,
// where own is false, at the point's. Cameras may be in the air or in the water.
func (c *scene) look(residual string, all []photo, views []int, bed vec, utc float64, own bool) image {
	im := image{bed: bed, views: views, utc: utc}
	im.waterLevel, _, _ = c.surface(bed[0], bed[1], utc)
	var cameras []photo
	var dirs []vec
	for _, k := range views {
		camera, at := all[k], utc
		if own {
			at = camera.utc
		}
		dry, wet := camera.at, bed
		if bed[2] > camera.at[2] {
			dry, wet = bed, camera.at
		}
		entry := c.crossing(dry, wet, at)
		_, sx, sy := c.surface(entry[0], entry[1], at)
		normal := vec{-sx, -sy, 1}.unit()
		near, far := entry.plus(-1, camera.at), bed.plus(-1, entry)
		im.incidence += angleBetween(near, normal)
		im.refraction += angleBetween(far, normal)
		im.entryLevel += entry[2]
		im.slopeX += sx
		im.slopeY += sy
		cameras, dirs = append(cameras, camera), append(dirs, near)
	}
	n := float64(len(views))
	for _, sum := range []*float64{&im.incidence, &im.refraction, &im.entryLevel, &im.slopeX, &im.slopeY} {
		*sum /= n
	}
	im.raw = triangulate(residual, cameras, dirs, bed)
	return im
}

// angleBetween is the angle of a direction from a line, degrees.
func angleBetween(d, line vec) float64 {
	return math.Atan2(d.cross(line).length(), math.Abs(d.dot(line))) * 180 / math.Pi
}

// choose picks from 2 to 8 of the cameras that are within 40 degrees of the point.
func choose(r *rand.Rand, all []photo, point vec) (views []int) {
	n := 2 + r.IntN(7)
	for _, k := range r.Perm(len(all)) {
		if all[k].offNadir(point) < 40 && len(views) < n && !inLine(all, views, k) {
			views = append(views, k)
		}
	}
	slices.Sort(views)
	return views
}

// inLine tells a second camera that is too near the first to give a depth.
func inLine(all []photo, views []int, k int) bool {
	return len(views) == 1 && all[views[0]].at.plus(-1, all[k].at).length() < 20
}

// dive returns a place in the square from 0.1 to 12 m below the surface at a time.
func (c *scene) dive(r *rand.Rand, utc float64) vec {
	p := vec{10 + 80*r.Float64(), 10 + 80*r.Float64()}
	p[2], _, _ = c.surface(p[0], p[1], utc)
	p[2] -= 0.1 + 11.9*r.Float64()
	return p
}

// survey sees n places of the bed from cameras of a block.
func (c *scene) images(r *rand.Rand, residual string, all []photo, n int, utc float64, own bool) (list []image) {
	for range n {
		bed := c.dive(r, utc)
		list = append(list, c.look(residual, all, choose(r, all, bed), bed, utc, own))
	}
	return list
}

// What a camera file may say of rotations.
const (
	noRotations = ""
	withAngles  = ",omega,phi,kappa"
	withMatrix  = ",r11,r12,r13,r21,r22,r23,r31,r32,r33"
)

// cameraFile writes cameras: their rotations as named, and their images and times if so.
func cameraFile(all []photo, rotations string, images, times bool, in truthCase) string {
	var b bytes.Buffer
	b.WriteString("camera,x,y,z" + rotations)
	if images {
		b.WriteString(",focal_px,width_px,height_px")
	}
	if times {
		b.WriteString(",time")
	}
	b.WriteByte('\n')
	for k, p := range all {
		fields := append([]string{photoName(k)}, in.in(p.at)...)
		switch rotations {
		case withAngles:
			fields = append(fields, exact(p.omega), exact(p.phi), exact(p.kappa))
		case withMatrix:
			x, y, z := p.outward(vec{1}), p.outward(vec{0, 1}), p.outward(vec{0, 0, 1})
			for i := range x {
				fields = append(fields, exact(x[i]), exact(y[i]), exact(z[i]))
			}
		}
		if images {
			fields = append(fields, exact(photoFocal), exact(photoWidth), exact(photoHeight))
		}
		if times {
			fields = append(fields, exact(p.utc))
		}
		row(&b, fields...)
	}
	return b.String()
}

func photoName(k int) string { return fmt.Sprintf("IMG_%04d", k) }

// named lists cameras as a cell of the column views has them.
func named(views []int, between string) string {
	var names []string
	for _, k := range views {
		names = append(names, photoName(k))
	}
	return strings.Join(names, between)
}

// imageCloud writes points: their views, times and levels if so.
func imageCloud(list []image, views, times bool, in truthCase) string {
	var b bytes.Buffer
	b.WriteString("x,y,z,tide")
	if views {
		b.WriteString(",views")
	}
	if times {
		b.WriteString(",gps_time")
	}
	b.WriteByte('\n')
	for i, im := range list {
		fields := append(in.in(im.raw), exact(im.waterLevel/in.height))
		if views {
			fields = append(fields, named(im.views, []string{" ", ";", "; "}[i%3]))
		}
		if times {
			fields = append(fields, exact(im.utc))
		}
		row(&b, fields...)
	}
	return b.String()
}

// imageJob is a job of the clouds below raw/ with the air of standardSea, in
// nanometres; keys of rays and then tables come behind it.
const imageJob = "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"true\"\ndecimals = 9\n[air]\ntemperature = 18\nhumidity = 60\n[rays]\nmodel = \"multiview\"\ncameras = \"cameras.csv\"\n"

var inMetres = truthCase{plan: 1, height: 1}

// lastStep (m) is what the entries may still be off: they are of the rays before the last step
// of the solution, which is shorter.
const lastStep = 1e-7

// tolerances of what is written of images, in the case's units.
type tolerances struct{ plan, height float64 }

// compareImages holds an output against the truth.
func compareImages(t *testing.T, got table, list []image, source string, in truthCase, tol tolerances) {
	t.Helper()
	if len(got.rows) != len(list) {
		t.Fatalf("%d rows, want %d", len(got.rows), len(list))
	}
	for i, im := range list {
		if outcome := got.text(t, i, "outcome"); outcome != "corrected" {
			t.Fatalf("seed %d, row %d is %s, want corrected: %+v", seed, i, outcome, im)
		}
		near(t, i, "x", got.number(t, i, "x"), im.bed[0]/in.plan, tol.plan)
		near(t, i, "y", got.number(t, i, "y"), (im.bed[1]+in.north)/in.plan, tol.plan)
		near(t, i, "z", got.number(t, i, "z"), im.bed[2]/in.height, tol.height)
		near(t, i, "depth", got.number(t, i, "depth"), (im.waterLevel-im.bed[2])/in.height, tol.height)
		near(t, i, "water_level", got.number(t, i, "water_level"), im.waterLevel/in.height, tol.height)
		near(t, i, "entry_level", got.number(t, i, "entry_level"), im.entryLevel/in.height, tol.height+lastStep*math.Hypot(im.slopeX, im.slopeY)/in.height)
		near(t, i, "slope_x", got.number(t, i, "slope_x"), im.slopeX, 1e-9+tol.plan)
		near(t, i, "slope_y", got.number(t, i, "slope_y"), im.slopeY, 1e-9+tol.plan)
		near(t, i, "incidence_deg", got.number(t, i, "incidence_deg"), im.incidence, 0.6e-5+10*tol.plan)
		near(t, i, "refraction_deg", got.number(t, i, "refraction_deg"), im.refraction, 0.6e-5+10*tol.plan)
		if n := got.number(t, i, "ray_count"); n != float64(len(im.views)) {
			t.Errorf("row %d: ray_count is %g, want %d", i, n, len(im.views))
		}
		for name, want := range map[string]string{"view_source": source, "model": "multiview"} {
			if is := got.text(t, i, name); is != want {
				t.Errorf("row %d: %s is %q, want %q", i, name, is, want)
			}
		}
		if t.Failed() {
			t.FailNow()
		}
	}
}
