package geo

import (
	"fmt"
	"testing"
)

// benchSurvey returns 5000 cameras in 50 strips, 60 m above a bed of 1.5 km by 0.7 km, with
// images of 90 m by 60 m at the surface. Their ids are like those of a survey.
func benchSurvey(b *testing.B, tiltDeg float64) *Cameras {
	rng := newRand(b, 91)
	var r CameraRecords
	for strip := range 50 {
		for k := range 100 {
			r.ID = append(r.ID, fmt.Sprintf("F%02d_%04d.JPG", strip, k))
			r.X = append(r.X, 512000+15*float64(k)+rng.NormFloat64())
			r.Y = append(r.Y, 7012000+14*float64(strip)+rng.NormFloat64())
			r.Z = append(r.Z, 60+rng.NormFloat64())
			r.Omega = append(r.Omega, 3*rng.NormFloat64())
			r.Phi = append(r.Phi, tiltDeg+3*rng.NormFloat64())
			r.Kappa = append(r.Kappa, float64(strip%2)*180+5*rng.NormFloat64())
		}
	}
	r.FocalPx, r.WidthPx, r.HeightPx = equal(5000, 3600), equal(5000, 5400), equal(5000, 3600)
	return mustCameras(b, r)
}

// benchCloud returns points over a bed 0 to 12 m deep, along a swath or anywhere.
func benchCloud(b *testing.B, swath bool) (x, y, z []float64) {
	const n = 1 << 20
	rng := newRand(b, 92)
	x, y, z = make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		along := rng.Float64()
		if swath {
			along = float64(i) / n
		}
		x[i], y[i], z[i] = 512000+1485*along, 7012000+686*rng.Float64(), -12*rng.Float64()
	}
	return x, y, z
}

// runVisibility measures a rule in points, trees grown before.
func runVisibility(b *testing.B, v *Visibility) {
	for _, s := range swaths {
		x, y, z := benchCloud(b, s.swath)
		b.Run(s.name, func(b *testing.B) {
			seen := 0
			var dst []int32
			each := func() {
				seen = 0
				for i := range x {
					dst = v.AppendSeeing(dst[:0], x[i], y[i], z[i])
					seen += len(dst)
				}
			}
			each()
			runChunks(b, len(x), each)
			b.ReportMetric(float64(seen)/float64(len(x)), "views/point")
			b.ReportMetric(float64(v.tree.Load().size.Load())*4/(1<<20), "MiB")
			listed := 0
			for i := range x {
				listed += len(v.tree.Load().cameras(v.rule, x[i], y[i], z[i]))
			}
			b.ReportMetric(float64(listed)/float64(len(x)), "listed/point")
		})
	}
}

func BenchmarkVisibilityByImage(b *testing.B) {
	for _, tilt := range []float64{0, 45, 75} { // 75 degrees: to the horizon
		v, err := benchSurvey(b, tilt).ByImage()
		if err != nil {
			b.Fatal(err)
		}
		b.Run(fmt.Sprintf("tilt%v", tilt), func(b *testing.B) { runVisibility(b, v) })
	}
}

func BenchmarkVisibilityByAngle(b *testing.B) {
	v, err := benchSurvey(b, 0).ByAngle(radians(30), false)
	if err != nil {
		b.Fatal(err)
	}
	runVisibility(b, v)
}

// BenchmarkVisibilityFirst takes a chunk of points anywhere with a tree that is not
// yet divided.
func BenchmarkVisibilityFirst(b *testing.B) {
	const n = 1 << 16
	c := benchSurvey(b, 0)
	x, y, z := benchCloud(b, false)
	var dst []int32
	runChunks(b, n, func() {
		v, err := c.ByImage()
		if err != nil {
			b.Fatal(err)
		}
		for i := range n {
			dst = v.AppendSeeing(dst[:0], x[i], y[i], z[i])
		}
	})
}

// BenchmarkAppendViews takes a million cells of 8 ids each, of cameras anywhere.
func BenchmarkAppendViews(b *testing.B) {
	const n = 1 << 20
	c := benchSurvey(b, 0)
	rng := newRand(b, 93)
	var text []byte
	ends := make([]int, n)
	for i := range ends {
		for range 8 {
			text = append(append(text, c.ID(rng.IntN(c.Len()))...), ' ')
		}
		ends[i] = len(text)
	}
	var dst []int32
	runChunks(b, n, func() {
		first := 0
		for _, end := range ends {
			got, err := c.AppendViews(dst[:0], text[first:end])
			if err != nil {
				b.Fatal(err)
			}
			dst, first = got, end
		}
	})
}
