package demo

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
)

// The camera: a pinhole without distortion.
const (
	focalPx       = 3650.0
	imageWidthPx  = 5472.0
	imageHeightPx = 3648.0
)

// camera is an image: where it was taken from, and which way it looks.
type camera struct {
	id                string
	centre            vec     // m, in millimetres as the file has it
	omega, phi, kappa float64 // degrees, in ten-thousandths as the file has them
	right, top, back  vec     // the axes of its frame, unit
}

// cameraRow is a straight row of images with one aim, which sways a little.
type cameraRow struct {
	name          string
	images        int
	from, stepM   float64 // m from the west: the first image, and from image to image
	north, height float64 // m from the southern edge, and above the water
	omega, kappa  float64 // degrees
}

// cameraRows are three rows along the reach that look straight down, flown to and fro,
// and one from each side that looks obliquely across the water.
var cameraRows = []cameraRow{
	{"A", 14, -5, 10, 18, 40, 0, -90},
	{"B", 14, -5, 10, 32, 45, 0, 90},
	{"C", 14, -5, 10, 46, 50, 0, -90},
	{"S", 9, -4, 16, -4, 60, 30, 0},
	{"N", 9, -4, 16, 68, 60, -30, 180},
}

// poolCameras returns the 60 images. Equal seeds give equal images.
func poolCameras() []camera {
	var cameras []camera
	random := rand.New(rand.NewPCG(60, 550))
	sway := func(most float64) float64 { return most * (2*random.Float64() - 1) }
	degrees := func(v float64) float64 { return math.Round(v*1e4) / 1e4 }
	for _, row := range cameraRows {
		for i := range row.images {
			at := vec{poolX + row.from + float64(i)*row.stepM + sway(1), poolY + row.north + sway(1), poolSurface.at.z + row.height + sway(1)}
			c := camera{id: fmt.Sprintf("%s%02d", row.name, i+1), centre: at.round(1e3)}
			c.omega, c.phi, c.kappa = degrees(row.omega+sway(3)), degrees(sway(3)), degrees(row.kappa+sway(5))
			c.right, c.top, c.back = c.turn(vec{x: 1}), c.turn(vec{y: 1}), c.turn(vec{z: 1})
			cameras = append(cameras, c)
		}
	}
	return cameras
}

// turn takes a way in the camera's frame to the frame of the survey: by kappa about z,
// then by phi about y, then by omega about x.
func (c *camera) turn(v vec) vec {
	sin, cos := math.Sincos(c.kappa * math.Pi / 180)
	v.x, v.y = cos*v.x-sin*v.y, sin*v.x+cos*v.y
	sin, cos = math.Sincos(c.phi * math.Pi / 180)
	v.z, v.x = cos*v.z-sin*v.x, sin*v.z+cos*v.x
	sin, cos = math.Sincos(c.omega * math.Pi / 180)
	v.y, v.z = cos*v.y-sin*v.z, sin*v.y+cos*v.z
	return v
}

// project returns the place of a point in the image, to the right and to the top of its
// middle, both over the focal length, and how far before the camera it is.
func (c *camera) project(p vec) (x, y, away float64) {
	way := p.minus(c.centre)
	away = -dot(way, c.back)
	return dot(way, c.right) / away, dot(way, c.top) / away, away
}

// shows tells whether a point that is seen straight on is in the image, at most
// maxOffNadirDeg off nadir.
func (c *camera) shows(p vec) bool {
	x, y, away := c.project(p)
	return away > 0 && math.Abs(x) <= imageWidthPx/2/focalPx && math.Abs(y) <= imageHeightPx/2/focalPx &&
		c.offNadirDeg(p) <= maxOffNadirDeg
}

// offNadirDeg returns how far from straight down a point below the camera is seen.
func (c *camera) offNadirDeg(p vec) float64 {
	way := p.minus(c.centre)
	return math.Atan2(math.Hypot(way.x, way.y), -way.z) * 180 / math.Pi
}

// cameraText is the file of the cameras.
func cameraText(cameras []camera) []byte {
	text := []byte("camera,x,y,z,omega,phi,kappa,focal_px,width_px,height_px\n")
	for i := range cameras {
		c := &cameras[i]
		text = appendVec(append(append(text, c.id...), ','), c.centre, 3)
		text = appendVec(append(text, ','), vec{c.omega, c.phi, c.kappa}, 4)
		for _, px := range []float64{focalPx, imageWidthPx, imageHeightPx} {
			text = strconv.AppendInt(append(text, ','), int64(px), 10)
		}
		text = append(text, '\n')
	}
	return text
}
