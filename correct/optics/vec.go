package optics

import "math"

// Vec is a vector in right-handed Cartesian axes, z up: metres for a position,
// without unit for a direction.
type Vec struct{ X, Y, Z float64 }

// Add returns v + w.
func (v Vec) Add(w Vec) Vec { return Vec{v.X + w.X, v.Y + w.Y, v.Z + w.Z} }

// Sub returns v - w.
func (v Vec) Sub(w Vec) Vec { return Vec{v.X - w.X, v.Y - w.Y, v.Z - w.Z} }

// Scale returns s v.
func (v Vec) Scale(s float64) Vec { return Vec{s * v.X, s * v.Y, s * v.Z} }

// Dot returns the scalar product v . w.
func (v Vec) Dot(w Vec) float64 { return v.X*w.X + v.Y*w.Y + v.Z*w.Z }

// Cross returns the vector product v x w.
func (v Vec) Cross(w Vec) Vec {
	return Vec{v.Y*w.Z - v.Z*w.Y, v.Z*w.X - v.X*w.Z, v.X*w.Y - v.Y*w.X}
}

// Norm returns the length of v. It is +Inf where the square overflows (components
// beyond 1e154) and 0 where it underflows.
func (v Vec) Norm() float64 { return math.Sqrt(v.Dot(v)) }

// Unit returns v at length 1. A vector whose Norm is 0 has no direction: its
// Unit has no finite length.
func (v Vec) Unit() Vec { return v.Scale(1 / v.Norm()) }

// AngleRad returns the angle between v and w, 0 to pi. The vectors need not have
// unit length. The arc tangent of sine over cosine keeps full precision at every
// angle, where the arc cosine loses half the digits near 0 and pi.
func (v Vec) AngleRad(w Vec) float64 {
	return math.Atan2(v.Cross(w).Norm(), v.Dot(w))
}
