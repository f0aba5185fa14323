package optics

import "math"

// PlateShift returns by how much, in metres and at right angles to itself, a
// plane-parallel plate displaces a ray that crosses it:
//
//	t sin i (1 - cos i / sqrt(n^2 - sin^2 i))
//
// with the thickness t in metres (thicknessM), the incidence i from the plate's
// normal, 0 to pi/2, and the ratio n of the plate's phase index to that of the
// medium on both its sides. It is negative for n below 1 and NaN on total
// reflection (sin i above n). Textbook formula for the parallel plate, equal to
// t sin(i - r) / cos r with the refracted angle r.
func PlateShift(thicknessM, incidenceRad, ratio float64) float64 {
	sin, cos := math.Sincos(incidenceRad)
	return thicknessM * sin * (1 - cos/math.Sqrt((ratio-sin)*(ratio+sin)))
}

// ThroughPlate follows a ray that meets a plane-parallel plate at point, with unit
// direction dir, to where it leaves the plate, and returns that point and the
// direction there. normal is the plate's unit normal, on either side; thicknessM
// its thickness in metres; nAround and nPlate are the phase indices of the medium
// on both sides and of the plate. It is false on total reflection, with zero
// vectors. The direction comes out as it went in; only the position moves.
func ThroughPlate(point, dir, normal Vec, thicknessM, nAround, nPlate float64) (exit, out Vec, ok bool) {
	inside, ok := Refract(dir, normal, nAround, nPlate)
	if !ok {
		return Vec{}, Vec{}, false
	}
	exit = point.Add(inside.Scale(thicknessM / math.Abs(inside.Dot(normal))))
	out, ok = Refract(inside, normal, nPlate, nAround)
	return exit, out, ok
}
