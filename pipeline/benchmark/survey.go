package main

import (
	"math"
	"math/rand/v2"
)

// The setting of the survey: one water level, one water, one air.
const (
	levelM       = 0.42
	flightM      = 400.0 // height of flight above the level
	speedMS      = 60.0
	pulseS       = 5e-6 // time from pulse to pulse
	maxOffNadir  = 20 * math.Pi / 180
	minDepthM    = 0.5
	maxDepthM    = 15.0
	startX       = 412000.0
	startY       = 5311000.0
	startS       = 460000000.0 // LAS adjusted standard GPS time
	temperatureC = 17.5
	salinityPSU  = 34.9
)

// Indices at 532 nm in vacuum, referred to vacuum: air of 15 C, 1013.25 hPa,
// dry, 450 ppm CO2 (Ciddor 1996, Applied Optics 35(9), 1566-1573); water of
// temperatureC and salinityPSU (Quan & Fry 1995, Applied Optics 34(18),
// 3477-3480, times air at the water's temperature). Computed apart from
// bentray, so that the comparison of the outputs checks its indices too.
const (
	nAir    = 1.000278208
	ngAir   = 1.000289748
	nWater  = 1.342110524
	ngWater = 1.364435532
)

// vec is a position or a step in metres, z up.
type vec struct{ x, y, z float64 }

// plus returns v + s d.
func (v vec) plus(s float64, d vec) vec {
	return vec{v.x + s*d.x, v.y + s*d.y, v.z + s*d.z}
}

// pulse is one row of the survey. Its apparent point lies on the straight
// prolongation of the ray, as far behind the water surface as the light's
// travel time would reach in air.
type pulse struct {
	origin, apparent vec
	gpsTime          float64
	intensity        int64
	returnNumber     int64
}

// classification is that of a bathymetric point (LAS 1.4 R15, table 17).
const classification = 40

// survey makes the pulses of one flight line in order. Equal seeds give equal
// surveys.
type survey struct {
	random *rand.Rand
	fired  int64
}

func newSurvey() *survey {
	return &survey{random: rand.New(rand.NewPCG(20, 532))}
}

// next fires a pulse up to 20 degrees off nadir in any direction.
func (s *survey) next() pulse {
	t := float64(s.fired) * pulseS
	s.fired++
	origin := vec{startX + speedMS*t, startY + 2*math.Sin(t/7), levelM + flightM + 3*math.Sin(t/11)}
	off := s.random.Float64() * maxOffNadir
	sin, cos := math.Sincos(off)
	sinAz, cosAz := math.Sincos(s.random.Float64() * 2 * math.Pi)
	apparent, _ := shoot(origin, vec{sin * cosAz, sin * sinAz, -cos})
	return pulse{
		origin: origin, apparent: apparent, gpsTime: startS + t,
		intensity: s.random.Int64N(4096), returnNumber: 1 + s.random.Int64N(3),
	}
}

// shoot sends light from origin along the unit vector dir to the bed and
// returns where a straight-line cloud has the point, and where it is.
func shoot(origin, dir vec) (apparent, bed vec) {
	entry := origin.plus((levelM-origin.z)/dir.z, dir)
	ratio := nAir / nWater
	cosWater := math.Sqrt(1 - ratio*ratio*(1-dir.z*dir.z))
	path := bedDepth(entry.x, entry.y) / cosWater
	bed = entry.plus(path, vec{ratio * dir.x, ratio * dir.y, -cosWater})
	return entry.plus(path*ngWater/ngAir, dir), bed
}

// bedDepth is the depth in metres that light finds when it enters at x, y.
func bedDepth(x, y float64) float64 {
	const mean, swing = (minDepthM + maxDepthM) / 2, (maxDepthM - minDepthM) / 2
	return mean + swing*math.Sin((x-startX)/90)*math.Cos((y-startY)/70)
}
