package demo

import (
	"math"

	"bentray/correct/medium"
)

// vec is a position or a way in metres, z up.
type vec struct{ x, y, z float64 }

func (v vec) plus(s float64, w vec) vec { return vec{v.x + s*w.x, v.y + s*w.y, v.z + s*w.z} }
func (v vec) minus(w vec) vec           { return v.plus(-1, w) }
func (v vec) length() float64           { return math.Sqrt(v.x*v.x + v.y*v.y + v.z*v.z) }

func dot(v, w vec) float64 { return v.x*w.x + v.y*w.y + v.z*w.z }

func cross(v, w vec) vec {
	return vec{v.y*w.z - v.z*w.y, v.z*w.x - v.x*w.z, v.x*w.y - v.y*w.x}
}

// left is the level way to the left of a level way.
func (v vec) left() vec { return vec{x: -v.y, y: v.x} }

// round rounds to whole parts of 1/scale.
func (v vec) round(scale float64) vec {
	return vec{math.Round(v.x*scale) / scale, math.Round(v.y*scale) / scale, math.Round(v.z*scale) / scale}
}

// light holds the indices of air and water, referred to vacuum.
type light struct{ airPhase, airGroup, waterPhase, waterGroup float64 }

// The media of the cove, as its job file states them; the air is that of all surveys.
const (
	waterTemperatureC = 17.5
	salinity          = 34.9
	airTemperatureC   = 18.0
	humidityPercent   = 60.0
	laserNM           = 532.0 // in vacuum; the job's default for a laser
)

// newLight returns the indices at the survey, in a water of its own.
func newLight(waterC, salinity, wavelengthNM float64) (l light, err error) {
	water := medium.Water{TemperatureC: waterC, Salinity: salinity}
	if l.waterPhase, l.waterGroup, err = medium.QuanFry.Index(water, wavelengthNM); err != nil {
		return l, err
	}
	air := medium.StandardAir()
	air.TemperatureC, air.HumidityPercent = airTemperatureC, humidityPercent
	l.airPhase, l.airGroup, err = air.Index(wavelengthNM)
	return l, err
}

// plane is a plane water surface through a point, with its slopes to the east and
// to the north.
type plane struct {
	at             vec
	slopeX, slopeY float64
}

// z returns the elevation of the surface at a plan position.
func (p plane) z(x, y float64) float64 {
	return p.at.z + p.slopeX*(x-p.at.x) + p.slopeY*(y-p.at.y)
}

// up returns the unit normal of the surface.
func (p plane) up() vec {
	n := vec{-p.slopeX, -p.slopeY, 1}
	return vec{}.plus(1/n.length(), n)
}

// entry returns where light from an origin above the water to a point of the bed
// below it enters the surface: on the line between the feet of both, for light stays
// in one plane with the surface's normal.
func (l light) entry(surface plane, origin, bed vec) vec {
	up := surface.up()
	above := (origin.z - surface.z(origin.x, origin.y)) * up.z
	below := (surface.z(bed.x, bed.y) - bed.z) * up.z
	from := origin.plus(-above, up)
	way := bed.plus(below, up).minus(from)
	across := way.length()
	if across == 0 {
		return from
	}
	return from.plus(l.entryOffset(above, below, across)/across, way)
}

// entryOffset returns how far from the origin's foot light enters: the s of least
//
//	airPhase sqrt(height^2 + s^2) + waterPhase sqrt(depth^2 + (across - s)^2)
//
// as the root of its derivative, which rises from below 0 at s = 0 to above 0 at
// s = across. Newton's method, kept in the bracket by bisection, until a step
// is below 1e-12 of the way. Lengths in m, all above 0.
func (l light) entryOffset(height, depth, across float64) float64 {
	low, high := 0.0, across
	s := across * height / (height + depth)
	for range 100 {
		air, water := math.Hypot(height, s), math.Hypot(depth, across-s)
		slope := l.airPhase*s/air - l.waterPhase*(across-s)/water
		if slope > 0 {
			high = s
		} else {
			low = s
		}
		curvature := l.airPhase*height*height/(air*air*air) + l.waterPhase*depth*depth/(water*water*water)
		next := s - slope/curvature
		if !(next >= low && next <= high) {
			next = (low + high) / 2
		}
		if math.Abs(next-s) <= 1e-12*across {
			return next
		}
		s = next
	}
	return s
}

// apparent returns where a cloud that knows nothing of water has a point of the
// bed: straight on behind the entry, as far as the pulse's travel time in the
// water would reach in air. A point on land is where it is.
func (l light) apparent(surface plane, origin, bed vec) vec {
	if bed.z >= surface.z(bed.x, bed.y) {
		return bed
	}
	entry := l.entry(surface, origin, bed)
	in := entry.minus(origin)
	return entry.plus(bed.minus(entry).length()*l.waterGroup/l.airGroup/in.length(), in)
}
