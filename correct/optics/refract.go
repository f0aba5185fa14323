package optics

import "math"

// Refract returns the unit direction of travel after a boundary between two media.
//
// dir is the unit direction of travel before it, normal the boundary's unit
// normal, on either side (for a ray along the boundary: on the side it comes
// from). nFrom and nTo are the phase indices before and after the boundary,
// positive. The result is false on total reflection, with the zero vector.
//
// With c = |dir . normal|, Snell's law in vector form is
//
//	nTo out = nFrom dir + (nFrom c - b) normal,  b = sqrt(nTo^2 - nFrom^2 (1 - c^2)) = nTo cos(refraction)
//
// for a normal against travel (Rinner 1969). Written that way, nFrom c - b cancels when the
// indices are nearly equal, and so does the root near the critical angle. Here
// both use the exact factor d = (nTo - nFrom)(nTo + nFrom): b^2 = d + (nFrom c)^2
// and nFrom c - b = -d / (nFrom c + b). Equal indices return dir itself.
func Refract(dir, normal Vec, nFrom, nTo float64) (Vec, bool) {
	if nFrom == nTo {
		return dir, true
	}
	along := nFrom * dir.Dot(normal) // signed: positive when the normal points along travel
	d := (nTo - nFrom) * (nTo + nFrom)
	square := d + along*along
	if square < 0 {
		return Vec{}, false
	}
	bend := d / (math.Abs(along) + math.Sqrt(square)) / nTo
	if along <= 0 {
		bend = -bend
	}
	return dir.Scale(nFrom / nTo).Add(normal.Scale(bend)), true
}

// CriticalAngleRad returns the incidence beyond which a ray from a medium of
// phase index nFrom is totally reflected at one of nTo: asin(nTo / nFrom). It is
// pi/2 where nTo is not smaller: no ray is totally reflected.
func CriticalAngleRad(nFrom, nTo float64) float64 {
	if nTo >= nFrom {
		return math.Pi / 2
	}
	return math.Asin(nTo / nFrom)
}
