package demo

import "math"

// The river: Otterlode reach flows to the east, in the same made-up projected system
// as the cove. At its lower end salt water comes in; north of an island a warm side
// channel stands higher, behind a weir.
const (
	riverX     = 418_000.0 // m, the south-western corner
	riverY     = 6_209_000.0
	reachEndM  = 600.0 // of the area, from west to east
	channelM   = 70.0  // half the width of the river
	channelMax = 3.2   // depth in the middle
	sideM      = 12.0  // half the width of the side channel
	sideHalfM  = 125.0 // and half its length
	sideMax    = 1.4
	sideOffM   = 104.0 // from the river's axis to the side channel's
	sideMidM   = 305.0
	landM      = 3.0  // land rises so far above the water
	sideLevelM = 1.47 // elevation of the side channel when the waterline was surveyed
	saltFromM  = 455.0
)

// riverSurface is the river when its waterline was surveyed.
var riverSurface = plane{at: vec{riverX + 300, riverY + 120, 1.214}, slopeX: -6.2e-4, slopeY: 1.5e-4}

// sideSurface is the side channel at that time.
var sideSurface = plane{at: vec{riverX + sideMidM, riverY + 240, sideLevelM}}

// axisV returns how far north of the corner the river's axis lies, some way from the west.
func axisV(u float64) float64 { return 120 + 25*math.Sin(u/130) }

// riverBedZ returns the elevation of the bed, or of the land, at a plan position (m).
func riverBedZ(x, y float64) float64 {
	u, off := x-riverX, y-riverY-axisV(x-riverX)
	channel := channelMax * (1 - squareSum(off/channelM, 0))
	side := sideMax * (1 - squareSum((off-sideOffM)/sideM, (u-sideMidM)/sideHalfM))
	return min(riverSurface.z(x, y)-max(channel, -landM), sideLevelM-max(side, -landM))
}

// water is one of the river's waters; the job's own comes first, those of zones
// behind it.
type water struct {
	name                   string
	temperatureC, salinity float64
	surface                plane // when the waterline was surveyed
	hasLevel               bool  // of its own
	outline                ring  // nil for the job's own
}

func riverWaters() []water {
	return []water{
		{name: "river", temperatureC: 14.2, salinity: 0.3, surface: riverSurface},
		{name: "side channel", temperatureC: 19.6, salinity: 0.4, surface: sideSurface, hasLevel: true, outline: sideOutline()},
		{name: "brackish reach", temperatureC: 15.1, salinity: 11.5, surface: riverSurface, outline: saltOutline()},
	}
}

// sideOutline returns the polygon of the side channel, with some land around it.
func sideOutline() ring {
	const margin, stepM = 16.0, 15.0
	var south, north ring
	for u := sideMidM - sideHalfM - 20; u <= sideMidM+sideHalfM+20; u += stepM {
		south = append(south, riverCorner(u, axisV(u)+sideOffM-margin))
		north = append(ring{riverCorner(u, axisV(u)+sideOffM+margin)}, north...)
	}
	return append(append(south, north...), south[0])
}

// saltOutline returns the polygon of the reach that salt water comes into.
func saltOutline() ring {
	return ring{riverCorner(saltFromM, -80), riverCorner(800, -80), riverCorner(800, 340), riverCorner(saltFromM, 340), riverCorner(saltFromM, -80)}
}

// riverCorner is a position from the area's corner, in decimetres as a file has it.
func riverCorner(u, v float64) [2]float64 {
	return [2]float64{math.Round((riverX+u)*10) / 10, math.Round((riverY+v)*10) / 10}
}

// waterAt returns which of the waters is at a plan position.
func waterAt(waters []water, x, y float64) int {
	for k := range waters {
		if waters[k].outline.holds(x, y) {
			return k
		}
	}
	return 0
}

// riverLines returns the three lines over the river, the later part of the flight.
func riverLines() []*flightLine {
	at := func(u, v float64) vec { return vec{riverX + u, riverY + v, riverSurface.at.z + heightM} }
	east, west := vec{x: 1}, vec{x: -1}
	return flown([]*flightLine{
		{number: 11, from: at(0, 90), heading: east},
		{number: 12, from: at(reachEndM, 140), heading: west},
		{number: 13, from: at(0, 190), heading: east},
	})
}
