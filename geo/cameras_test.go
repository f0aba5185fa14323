package geo

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// TestFromAngles compares with the product of the three rotations.
func TestFromAngles(t *testing.T) {
	rng := newRand(t, 86)
	for range 200 {
		o, p, k := 720*rng.Float64()-360, 720*rng.Float64()-360, 720*rng.Float64()-360
		r := CameraRecords{
			ID: []string{"a"}, X: []float64{0}, Y: []float64{0}, Z: []float64{0},
			Omega: []float64{o}, Phi: []float64{p}, Kappa: []float64{k},
		}
		got, want := mustCameras(t, r).Rotations()[0], rotationByDefinition(o, p, k)
		for i, v := range got {
			if math.Abs(v-want[i/3][i%3]) > 1e-15 {
				t.Fatalf("%v %v %v: %v, want %v", o, p, k, got, want)
			}
		}
	}
}

// matrixRecords returns a camera with a rotation matrix.
func matrixRecords(m [9]float64) CameraRecords {
	r := CameraRecords{ID: []string{"A7"}, X: []float64{0}, Y: []float64{0}, Z: []float64{0}}
	for k := range m {
		r.R[k] = []float64{m[k]}
	}
	return r
}

// TestNearestRotation compares matrices printed with 3 to 12 decimals with the nearest
// rotation by singular values, U V'.
func TestNearestRotation(t *testing.T) {
	rng := newRand(t, 87)
	for i := range 200 {
		unit := math.Pow(10, float64(4+i%9))
		m := fromAngles(6*rng.Float64(), 6*rng.Float64(), 6*rng.Float64())
		for k := range m {
			m[k] = math.Round(m[k]*unit) / unit
		}
		var svd mat.SVD
		if !svd.Factorize(mat.NewDense(3, 3, slices.Clone(m[:])), mat.SVDFull) {
			t.Fatal("no singular values")
		}
		var u, v, want mat.Dense
		svd.UTo(&u)
		svd.VTo(&v)
		want.Mul(&u, v.T())
		got := mustCameras(t, matrixRecords(m)).Rotations()[0]
		for k, x := range got {
			if math.Abs(x-want.At(k/3, k%3)) > 1e-14 { // the rounding of the singular vectors
				t.Fatalf("%v: %v, want %v", m, got, want)
			}
			if math.Abs(x-m[k]) > 1.5/unit {
				t.Fatalf("%v: %v is farther than the rounding", m, got)
			}
		}
	}
}

// TestCamerasGive checks what cameras hand on, and that they hold copies.
func TestCamerasGive(t *testing.T) {
	r := CameraRecords{
		ID: []string{"a", "b"}, X: []float64{1, -2}, Y: []float64{3, 4}, Z: []float64{60, 58}, UTC: []float64{100, 90},
		Omega: []float64{0, 0}, Phi: []float64{0, 0}, Kappa: []float64{0, 0},
		FocalPx: []float64{10, 20}, WidthPx: []float64{8, 6}, HeightPx: []float64{4, 5}, CyPx: []float64{1, -1},
	}
	c := mustCameras(t, r)
	r.X[0] = 99
	x, y, z := c.Centres()
	low, high := c.Bounds()
	got := fmt.Sprintln(c.Len(), c.ID(1), x, y, z, c.UTC(), low, high, c.HasRotations(), c.HasImages(), c.images)
	const want = "2 b [1 -2] [3 4] [60 58] [100 90] [-2 3 58] [1 4 60] true true [{10 8 4 4 1} {20 6 5 3 -1}]\n"
	if got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
	c = mustCameras(t, CameraRecords{ID: []string{"a"}, X: []float64{1}, Y: []float64{3}, Z: []float64{60}})
	if c.HasRotations() || c.HasImages() || c.Rotations() != nil || c.UTC() != nil {
		t.Error("a camera with its centre only has more")
	}
	r.Omega, r.Phi, r.Kappa = nil, nil, nil
	if c = mustCameras(t, r); c.HasImages() {
		t.Error("cameras without rotations can tell what their images show")
	}
}

func TestNewCamerasRefuses(t *testing.T) {
	nan := math.NaN()
	unit := [9]float64{1, 0, 0, 0, 1, 0, 0, 0, 1}
	for _, tc := range []struct {
		name   string
		change func(r *CameraRecords)
		index  int // of the record, -1 where the columns are wrong
		want   string
	}{
		{"none", func(r *CameraRecords) { *r = CameraRecords{} }, -1, "there are no camera records, want at least 1"},
		{"empty id", func(r *CameraRecords) { r.ID[1] = "" }, 1, "record 2: id of the camera is empty, want one for every camera"},
		{"twice", func(r *CameraRecords) { r.ID[2] = "A7" }, 2, `record 3: camera "A7" stands twice, in records 1 and 3, want each camera once`},
		{"blank", func(r *CameraRecords) { r.ID[0] = "A 7" }, 0, `camera "A 7" has a blank or a ";" in its id`},
		{"tab", func(r *CameraRecords) { r.ID[0] = "A7\t" }, 0, `camera "A7\t" has a blank`},
		{"semicolon", func(r *CameraRecords) { r.ID[0] = "A;7" }, 0, `camera "A;7" has a blank or a ";"`},
		{"no centre", func(r *CameraRecords) { r.Y[1] = nan }, 1, `record 2: camera "B1" has no y, want a number for every camera`},
		{"infinite", func(r *CameraRecords) { r.Z[1] = math.Inf(-1) }, 1, `camera "B1": z is infinite, want a finite number`},
		{"too far", func(r *CameraRecords) { r.X[1] = 2e12 }, 1, `camera "B1": x is 2e+12 m, want a coordinate within 1e12`},
		{"no time", func(r *CameraRecords) { r.UTC = []float64{1, 2, nan} }, 2, `camera "B2" has no time, want a number for every camera`},
		{"no angle", func(r *CameraRecords) { r.Phi[2] = nan }, 2, `camera "B2" has no phi`},
		{"gon", func(r *CameraRecords) { r.Kappa[2] = 399.5 }, 2, `camera "B2": kappa is 399.5, want degrees from -360 to 360`},
		{"no focal length", func(r *CameraRecords) { r.FocalPx[2] = nan }, 2, `camera "B2" has no focal_px`},
		{"focal length 0", func(r *CameraRecords) { r.FocalPx[2] = 0 }, 2, `camera "B2": focal_px is 0, want more than 0 pixels`},
		{"width below 0", func(r *CameraRecords) { r.WidthPx[0] = -4000 }, 0, `camera "A7": width_px is -4000, want more than 0 pixels`},
		{"height not whole", func(r *CameraRecords) { r.HeightPx[0] = 23.5 }, 0, `camera "A7": height_px is 23.5, want a whole number of pixels`},
		{"no cx", func(r *CameraRecords) { r.CxPx = []float64{1, 2, nan} }, 2, `camera "B2" has no cx_px`},
		{"part of the angles", func(r *CameraRecords) { r.Phi = nil }, -1, "cameras have omega, kappa without phi, want all of them or none"},
		{"part of the image", func(r *CameraRecords) { r.FocalPx = nil }, -1, "cameras have width_px, height_px without focal_px, want all of them or none"},
		{"part of the matrix", func(r *CameraRecords) {
			*r = matrixRecords(unit)
			r.R[5] = nil
		}, -1, "cameras have r11, r12, r13, r21, r22, r31, r32, r33 without r23, want all of them or none"},
		{"both", func(r *CameraRecords) {
			for k := range r.R {
				r.R[k] = equal(3, unit[k])
			}
		}, -1, "cameras have omega, phi, kappa and also r11 to r33, want one of the two"},
		{"principal point alone", func(r *CameraRecords) {
			r.FocalPx, r.WidthPx, r.HeightPx, r.CyPx = nil, nil, nil, equal(3, 5)
		}, -1, "cameras have cy_px without focal_px, width_px, height_px"},
		{"mirror", func(r *CameraRecords) { *r = matrixRecords([9]float64{1, 0, 0, 0, -1, 0, 0, 0, 1}) }, 0, `camera "A7": r11 to r33 mirror (their determinant is -1)`},
		{"scaled", func(r *CameraRecords) { *r = matrixRecords([9]float64{1.001, 0, 0, 0, 1, 0, 0, 0, 1}) }, 0, `camera "A7": r11 to r33 are no rotation: a product of two columns, or the square of one, misses by 0.002`},
		{"skew", func(r *CameraRecords) { *r = matrixRecords([9]float64{1, 0.0011, 0, 0, 1, 0, 0, 0, 1}) }, 0, "no rotation"},
		{"zeros", func(r *CameraRecords) { *r = matrixRecords([9]float64{}) }, 0, "no rotation"},
		{"huge", func(r *CameraRecords) { *r = matrixRecords([9]float64{1e300, 1e300, 0, 0, 1, 0, 0, 0, 1}) }, 0, "no rotation"},
	} {
		r := CameraRecords{
			ID: []string{"A7", "B1", "B2"}, X: equal(3, 1), Y: equal(3, 2), Z: equal(3, 60),
			Omega: equal(3, 0), Phi: equal(3, 0), Kappa: equal(3, 0),
			FocalPx: equal(3, 3600), WidthPx: equal(3, 4000), HeightPx: equal(3, 3000),
		}
		tc.change(&r)
		_, err := NewCameras(r)
		t.Run(tc.name, func(t *testing.T) {
			wantError(t, err, tc.want)
			var record *RecordError
			if errors.As(err, &record) != (tc.index >= 0) || record != nil && record.Index != tc.index {
				t.Errorf("error %q is of record %v, want index %d", err, record, tc.index)
			}
		})
	}
}

func TestNewCamerasPanics(t *testing.T) {
	for k := range 4 {
		columns := [4][]float64{equal(2, 1), equal(2, 1), equal(2, 1), nil}
		columns[k] = equal(3, 1)
		mustPanic(t, func() {
			_, _ = NewCameras(CameraRecords{ID: []string{"a", "b"}, X: columns[0], Y: columns[1], Z: columns[2], UTC: columns[3]})
		})
	}
	mustPanic(t, func() { _, _ = NewCameras(CameraRecords{ID: []string{"a"}, X: equal(1, 0), Y: equal(1, 0)}) })
}
