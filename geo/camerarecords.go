package geo

import (
	"errors"
	"fmt"
	"math"
	"strings"
)

// pinhole is the image of a pinhole camera, in pixels.
type pinhole struct{ focal, width, height, cx, cy float64 }

// named is a column of the records with its name in files.
type named struct {
	name   string
	values []float64
}

// angles returns the columns of the angles.
func (r *CameraRecords) angles() []named {
	return []named{{"omega", r.Omega}, {"phi", r.Phi}, {"kappa", r.Kappa}}
}

// matrix returns the columns of the rotation matrix.
func (r *CameraRecords) matrix() []named {
	columns := make([]named, len(r.R))
	for k := range r.R {
		columns[k] = named{fmt.Sprintf("r%d%d", k/3+1, k%3+1), r.R[k]}
	}
	return columns
}

// sizes returns the columns that an image needs.
func (r *CameraRecords) sizes() []named {
	return []named{{"focal_px", r.FocalPx}, {"width_px", r.WidthPx}, {"height_px", r.HeightPx}}
}

// principal returns the columns of the principal point.
func (r *CameraRecords) principal() []named { return []named{{"cx_px", r.CxPx}, {"cy_px", r.CyPx}} }

// columns returns all columns of numbers, those that are not there too.
func (r *CameraRecords) columns() []named {
	columns := []named{{"x", r.X}, {"y", r.Y}, {"z", r.Z}, {"time", r.UTC}}
	for _, more := range [][]named{r.angles(), r.matrix(), r.sizes(), r.principal()} {
		columns = append(columns, more...)
	}
	return columns
}

// checkLengths panics unless the columns have one length or, where optional, are nil.
func (r *CameraRecords) checkLengths() {
	for k, c := range r.columns() {
		if needed := k < 3; len(c.values) != len(r.ID) && (needed || c.values != nil) {
			panic(errLengths)
		}
	}
}

// checkColumns returns what is wrong with which columns there are.
func (r *CameraRecords) checkColumns() error {
	if len(r.ID) == 0 {
		return errors.New("there are no camera records, want at least 1")
	}
	for _, group := range [][]named{r.angles(), r.matrix(), r.sizes()} {
		if given, missing := givenAndMissing(group); given != "" && missing != "" {
			return fmt.Errorf("cameras have %s without %s, want all of them or none", given, missing)
		}
	}
	if r.Omega != nil && r.R[0] != nil {
		return errors.New("cameras have omega, phi, kappa and also r11 to r33, want one of the two")
	}
	if given, _ := givenAndMissing(r.principal()); given != "" && r.FocalPx == nil {
		return fmt.Errorf("cameras have %s without focal_px, width_px, height_px, want these too or neither", given)
	}
	return nil
}

// givenAndMissing returns the names of the columns that are there, and of those that are not.
func givenAndMissing(group []named) (given, missing string) {
	var names [2][]string
	for _, c := range group {
		k := 0
		if c.values == nil {
			k = 1
		}
		names[k] = append(names[k], c.name)
	}
	return strings.Join(names[0], ", "), strings.Join(names[1], ", ")
}

// checkFinite returns which number of a row is none or, of a centre, too great.
func (r *CameraRecords) checkFinite(row int) error {
	for k, c := range r.columns() {
		switch {
		case c.values == nil:
		case math.IsNaN(c.values[row]):
			return fmt.Errorf("camera %q has no %s, want a number for every camera", r.ID[row], c.name)
		case math.IsInf(c.values[row], 0):
			return fmt.Errorf("camera %q: %s is infinite, want a finite number", r.ID[row], c.name)
		case k < 3 && math.Abs(c.values[row]) > maxCoordinate:
			return fmt.Errorf("camera %q: %s is %v m, want a coordinate within 1e12", r.ID[row], c.name, c.values[row])
		}
	}
	return nil
}

// pinhole returns the image of a row.
func (r *CameraRecords) pinhole(row int) (pinhole, error) {
	for k, c := range r.sizes() {
		v := c.values[row]
		if !(v > 0) {
			return pinhole{}, fmt.Errorf("%s is %v, want more than 0 pixels", c.name, v)
		}
		if k > 0 && v != math.Trunc(v) {
			return pinhole{}, fmt.Errorf("%s is %v, want a whole number of pixels", c.name, v)
		}
	}
	im := pinhole{focal: r.FocalPx[row], width: r.WidthPx[row], height: r.HeightPx[row]}
	im.cx, im.cy = im.width/2, im.height/2
	if r.CxPx != nil {
		im.cx = r.CxPx[row]
	}
	if r.CyPx != nil {
		im.cy = r.CyPx[row]
	}
	return im, nil
}
