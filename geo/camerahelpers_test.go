package geo

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// mustCameras returns the cameras of right records.
func mustCameras(t testing.TB, r CameraRecords) *Cameras {
	t.Helper()
	c, err := NewCameras(r)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// mustByImage returns the image rule of cameras with images.
func mustByImage(t testing.TB, c *Cameras) *Visibility {
	t.Helper()
	v, err := c.ByImage()
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// mustByAngle returns the angle rule.
func mustByAngle(t testing.TB, c *Cameras, maxOffNadirRad float64, fromWater bool) *Visibility {
	t.Helper()
	v, err := c.ByAngle(maxOffNadirRad, fromWater)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// equal returns a column of n equal numbers.
func equal(n int, v float64) []float64 {
	column := make([]float64, n)
	for i := range column {
		column[i] = v
	}
	return column
}

// matrix3 is a matrix, row by row.
type matrix3 [3][3]float64

// times returns the product of two matrices.
func (a matrix3) times(b matrix3) (c matrix3) {
	for i := range 3 {
		for j := range 3 {
			for k := range 3 {
				c[i][j] += a[i][k] * b[k][j]
			}
		}
	}
	return c
}

// rotationByDefinition returns Rx(omega) Ry(phi) Rz(kappa), angles in degrees, as the
// product of the three rotations about the axes.
func rotationByDefinition(omega, phi, kappa float64) matrix3 {
	s, c := func(deg float64) float64 { return math.Sin(deg / 180 * math.Pi) }, func(deg float64) float64 { return math.Cos(deg / 180 * math.Pi) }
	rx := matrix3{{1, 0, 0}, {0, c(omega), -s(omega)}, {0, s(omega), c(omega)}}
	ry := matrix3{{c(phi), 0, s(phi)}, {0, 1, 0}, {-s(phi), 0, c(phi)}}
	rz := matrix3{{c(kappa), -s(kappa), 0}, {s(kappa), c(kappa), 0}, {0, 0, 1}}
	return rx.times(ry).times(rz)
}

// plainly returns by how many pixels the image of camera k of the records shows a point,
// from the nearest border (below 0: not), by the pinhole's equations.
func plainly(r *CameraRecords, k int, x, y, z float64) float64 {
	m := rotationByDefinition(r.Omega[k], r.Phi[k], r.Kappa[k])
	d := [3]float64{x - r.X[k], y - r.Y[k], z - r.Z[k]}
	var p [3]float64
	for i := range 3 {
		p[i] = m[0][i]*d[0] + m[1][i]*d[1] + m[2][i]*d[2]
	}
	if p[2] >= 0 {
		return math.Inf(-1)
	}
	col, row := r.CxPx[k]+r.FocalPx[k]*p[0]/-p[2], r.CyPx[k]-r.FocalPx[k]*p[1]/-p[2]
	return min(col, r.WidthPx[k]-col, row, r.HeightPx[k]-row)
}

// addCamera appends a camera with an image of 1200 by 800 pixels.
func addCamera(r *CameraRecords, x, y, z, omega, phi, kappa float64) {
	r.ID = append(r.ID, fmt.Sprint("c", len(r.ID)))
	r.X, r.Y, r.Z = append(r.X, x), append(r.Y, y), append(r.Z, z)
	r.Omega, r.Phi, r.Kappa = append(r.Omega, omega), append(r.Phi, phi), append(r.Kappa, kappa)
	r.FocalPx, r.WidthPx, r.HeightPx = append(r.FocalPx, 800), append(r.WidthPx, 1200), append(r.HeightPx, 800)
	r.CxPx, r.CyPx = append(r.CxPx, 610), append(r.CyPx, 385)
}

// networks are made-up surveys around a place, from 30 m above the bed to 3 m from a
// wall, that a tree of cameras must serve alike.
var networks = []struct {
	name string
	add  func(r *CameraRecords, rng *rand.Rand, x, y, z float64)
}{
	{"nadir block", func(r *CameraRecords, rng *rand.Rand, x, y, z float64) {
		for k := range 400 {
			addCamera(r, x+8*float64(k%20)-80, y+8*float64(k/20)-80, z+30+rng.Float64(), 3*rng.NormFloat64(), 3*rng.NormFloat64(), 180*float64(k/20%2)+4*rng.NormFloat64())
		}
	}},
	{"exact rows", func(r *CameraRecords, _ *rand.Rand, x, y, z float64) { // borders of images coincide
		for k := range 400 {
			addCamera(r, x+8*float64(k%20)-80, y+8*float64(k/20)-80, z+32, 0, 0, 90*float64(k/20%4))
		}
	}},
	{"oblique, to the horizon", func(r *CameraRecords, rng *rand.Rand, x, y, z float64) {
		for range 200 {
			addCamera(r, x+100*rng.NormFloat64(), y+100*rng.NormFloat64(), z+40, 75*(2*rng.Float64()-1), 75*(2*rng.Float64()-1), 360*rng.Float64())
		}
	}},
	{"close-range ring", func(r *CameraRecords, rng *rand.Rand, x, y, z float64) {
		for k := range 60 {
			at := float64(k) * 6 // degrees; looks at the centre, to the horizon
			addCamera(r, x+15*math.Cos(radians(at)), y+15*math.Sin(radians(at)), z+rng.Float64(), 90, at-270, 360*rng.Float64())
		}
	}},
	{"under water, looking up", func(r *CameraRecords, rng *rand.Rand, x, y, z float64) {
		for range 150 {
			addCamera(r, x+20*rng.NormFloat64(), y+20*rng.NormFloat64(), z-3-3*rng.Float64(), 180+10*rng.NormFloat64(), 10*rng.NormFloat64(), 360*rng.Float64())
		}
	}},
	{"one place", func(r *CameraRecords, rng *rand.Rand, x, y, z float64) {
		for range 80 {
			addCamera(r, x, y, z+10, 360*rng.Float64()-180, 360*rng.Float64()-180, 360*rng.Float64()-180)
		}
	}},
	{"one camera", func(r *CameraRecords, _ *rand.Rand, x, y, z float64) { addCamera(r, x, y, z+10, 0, 0, 0) }},
}

// somePoint returns a point near the place, and now and then one far from it.
func somePoint(rng *rand.Rand, x, y, z float64) (px, py, pz float64) {
	reach, height := 100.0, 20.0
	switch rng.IntN(20) {
	case 0:
		reach, height = math.Pow(10, 12*rng.Float64()), math.Pow(10, 12*rng.Float64())
	case 1:
		reach, height = 1, 1
	}
	return x + reach*rng.NormFloat64(), y + reach*rng.NormFloat64(), z + height*rng.NormFloat64()
}
