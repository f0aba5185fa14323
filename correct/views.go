package correct

import (
	"math"

	"bentray/correct/optics"
)

// Views says which cameras saw each point. Point i has the rays Start[i] up to, not
// including, Start[i+1]; Start has one value more than there are points, from 0
// to the number of rays, never falling. Camera is one value per ray, an index into
// Cameras. A camera that a point lists twice counts twice: doubles are not
// looked for.
type Views struct{ Start, Camera []int32 }

// Cameras are perspective centres in metres, with the rotation of each: object =
// centre + R camera, R row by row. A camera with R = 1 looks straight down (-z) with the
// image's top to +y. Rotation is nil where nothing is known of it.
type Cameras struct {
	XYZ
	Rotation [][9]float64
}

func (v *Views) mustHave(n int) {
	if len(v.Start) != n+1 || int(v.Start[n]) != len(v.Camera) {
		panic(errLengths)
	}
}

// of returns the rays of point i.
func (v *Views) of(i int) (from, to int) { return int(v.Start[i]), int(v.Start[i+1]) }

// MeanSlopes fills x and y, one value per point, with the mean slopes of the
// planes of each point's rays (s, one per ray). A point without rays gets NaN.
func (v *Views) MeanSlopes(x, y []float64, s Planes) {
	v.mustHave(len(x))
	mustHave(len(x), y)
	s.mustHave(len(v.Camera))
	for i := range x {
		from, to := v.of(i)
		x[i], y[i] = mean(s.SlopeX[from:to]), mean(s.SlopeY[from:to])
	}
}

// mean returns the mean of values, to the bit where they are all equal. Of none it
// is NaN.
func mean(values []float64) float64 {
	if len(values) == 0 {
		return math.NaN()
	}
	first, more := values[0], 0.0
	for _, v := range values {
		more += v - first
	}
	return first + more/float64(len(values))
}

// axes returns the object directions of camera k's x, y and z: the columns of R.
func (c *Cameras) axes(k int32) (x, y, z optics.Vec) {
	r := &c.Rotation[k]
	return optics.Vec{X: r[0], Y: r[3], Z: r[6]}, optics.Vec{X: r[1], Y: r[4], Z: r[7]}, optics.Vec{X: r[2], Y: r[5], Z: r[8]}
}
