package geo

import (
	"errors"
	"fmt"
	"slices"
	"strings"
)

// CameraRecords are the records of cameras, as the rows of a file have them, in any
// order; the columns have one length or, where optional, are nil. A column that is
// there has a value in every record.
type CameraRecords struct {
	ID      []string  // different in each, without blanks and ";"
	X, Y, Z []float64 // perspective centre, m

	Omega, Phi, Kappa []float64    // degrees, optional
	R                 [9][]float64 // r11, r12, ..., r33, row by row, optional, not beside angles

	FocalPx, WidthPx, HeightPx []float64 // pixels, optional, all three or none
	CxPx, CyPx                 []float64 // principal point, pixels, optional

	UTC []float64 // s since 1970, POSIX, optional
}

// Cameras are the cameras of a survey, numbered as their records. They do not change
// once made, so goroutines may share them.
//
// A rotation R takes directions from the camera to the object: object = centre +
// R camera, R = Rx(omega) Ry(phi) Rz(kappa). The camera's x is to the right of the
// image and y to its top; z is backwards, so what it sees has z below 0. With zero
// angles it looks straight down and the image's top is to the north (+y). A point
// x, y, z of the camera's frame has column cx + f x/(-z) and row cy - f y/(-z), where
// 0, 0 is the outer corner of the first pixel (top left).
type Cameras struct {
	ids       []string
	x, y, z   []float64
	rotations [][9]float64 // nil without
	images    []pinhole    // nil without
	utc       []float64    // nil without
	known     map[string]int32
	similar   map[string]int32 // by plainID
}

// NewCameras returns the cameras with the records given. It keeps no column of theirs
// but ID and UTC, which must not change afterwards. It panics if their lengths differ.
//
// Matrices are replaced by the nearest rotation, which takes off the rounding of the
// decimals they were printed with. The principal point is the middle of the image,
// along each side of which cx or cy is not given.
//
// Errors: no records; angles together with a matrix, or some of the columns of one
// without the others; focal length, width and height not all together, or a principal point
// without them; and, as *RecordError, an id that is empty, has a blank or a ";" in it
// or stands in an earlier record; a value that is not finite (so one that only some
// records have); a centre beyond 1e12 m; an angle beyond 360 degrees; a matrix that
// misses a rotation by more than 1e-3 in a product of its columns, or mirrors; a focal
// length, width or height not above 0, a width or height that is not whole.
func NewCameras(r CameraRecords) (*Cameras, error) {
	r.checkLengths()
	if err := r.checkColumns(); err != nil {
		return nil, err
	}
	n := len(r.ID)
	c := &Cameras{
		ids: r.ID, x: slices.Clone(r.X), y: slices.Clone(r.Y), z: slices.Clone(r.Z), utc: r.UTC,
		known: make(map[string]int32, n), similar: make(map[string]int32, n),
	}
	for row := range n {
		if err := c.add(&r, row); err != nil {
			return nil, &RecordError{Index: row, Err: err}
		}
	}
	return c, nil
}

// add checks a row and adds its camera.
func (c *Cameras) add(r *CameraRecords, row int) error {
	if err := c.addID(r.ID[row], int32(row)); err != nil {
		return err
	}
	if err := r.checkFinite(row); err != nil {
		return err
	}
	if r.Omega != nil || r.R[0] != nil {
		rotation, err := r.rotation(row)
		if err != nil {
			return fmt.Errorf("camera %q: %w", r.ID[row], err)
		}
		c.rotations = append(c.rotations, rotation)
	}
	if r.FocalPx != nil {
		im, err := r.pinhole(row)
		if err != nil {
			return fmt.Errorf("camera %q: %w", r.ID[row], err)
		}
		c.images = append(c.images, im)
	}
	return nil
}

// addID checks an id and notes it.
func (c *Cameras) addID(id string, row int32) error {
	if id == "" {
		return errors.New("id of the camera is empty, want one for every camera")
	}
	if strings.ContainsFunc(id, func(r rune) bool { return r < 0x80 && separates(byte(r)) }) {
		return fmt.Errorf(`camera %q has a blank or a ";" in its id, which separate ids in the views of points; want an id without`, id)
	}
	if first, taken := c.known[id]; taken {
		return fmt.Errorf("camera %q stands twice, in records %d and %d, want each camera once", id, first+1, row+1)
	}
	c.known[id] = row
	c.noteSimilar(plainID(id), row)
	return nil
}

// noteSimilar notes the plain id of a camera.
func (c *Cameras) noteSimilar(plain string, row int32) {
	switch _, taken := c.similar[plain]; {
	case taken:
		c.similar[plain] = several
	case plain != "":
		c.similar[plain] = row
	}
}

// Len returns how many cameras there are, at least 1.
func (c *Cameras) Len() int { return len(c.ids) }

// ID returns the id of camera k.
func (c *Cameras) ID(k int) string { return c.ids[k] }

// Centres returns the perspective centres (m) by camera. They must not be changed.
func (c *Cameras) Centres() (x, y, z []float64) { return c.x, c.y, c.z }

// Rotations returns the rotations by camera, row by row, nil where the records have
// none. They must not be changed.
func (c *Cameras) Rotations() [][9]float64 { return c.rotations }

// UTC returns the times (s since 1970) by camera, nil where the records have none. They
// must not be changed.
func (c *Cameras) UTC() []float64 { return c.utc }

// HasRotations tells whether the cameras have rotations.
func (c *Cameras) HasRotations() bool { return c.rotations != nil }

// HasImages tells whether the cameras have rotations, focal lengths and image sizes,
// so that ByImage can find who sees a point.
func (c *Cameras) HasImages() bool { return c.rotations != nil && c.images != nil }

// Bounds returns the smallest and the greatest x, y and z (m) of the centres.
func (c *Cameras) Bounds() (low, high [3]float64) {
	for axis, v := range [3][]float64{c.x, c.y, c.z} {
		low[axis], high[axis] = slices.Min(v), slices.Max(v)
	}
	return low, high
}
