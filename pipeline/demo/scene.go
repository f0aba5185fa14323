package demo

import "math"

// The place: Lantern Cove opens to the south of a made-up projected system.
const (
	cornerX = 412_000.0   // m, the south-western corner
	cornerY = 6_213_000.0 // m
	widthM  = 600.0       // of the area, from west to east
	levelM  = 0.42        // elevation of the water surface
)

var coveSurface = plane{at: vec{cornerX, cornerY, levelM}}

// The shape of the bed, in metres from the corner.
const (
	mouthX, mouthY         = 300.0, 0.0   // the deepest place, in the middle of the mouth
	halfWidthM, reachM     = 340.0, 520.0 // of the cove, as half axes of an ellipse
	deepestM               = 11.9
	barY, barWidthM        = 170.0, 35.0 // the sand bar
	barShare               = 0.55        // of the depth that the bar takes away
	rockX, rockY           = 410.0, 300.0
	rockWidthM, rockRiseM  = 16.0, 13.0
	rippleM, rippleLengthM = 0.05, 9.0 // of the sand, height and wave length
)

// bedZ returns the elevation of the bed, or of the land, at a plan position (m).
func bedZ(x, y float64) float64 {
	u, v := x-cornerX, y-cornerY
	inside := 1 - squareSum((u-mouthX)/halfWidthM, (v-mouthY)/reachM) // 1 at the mouth, 0 at the waterline
	depth := deepestM * inside * (1 - barShare*bell((v-barCrest(u))/barWidthM))
	if inside > 0 {
		depth += inside * rippleM * math.Sin(2*math.Pi*(v+0.3*u)/rippleLengthM)
	}
	return levelM - depth + rockRiseM*bell(math.Sqrt(squareSum(u-rockX, v-rockY))/rockWidthM)
}

// barCrest returns how far north the crest of the sand bar runs.
func barCrest(u float64) float64 { return barY + 25*math.Sin(u/90) }

func bell(x float64) float64 { return math.Exp(-x * x / 2) }

func squareSum(a, b float64) float64 { return a*a + b*b }

// remark is what the operator noted at a plan position.
func remark(x, y float64) string {
	u, v := x-cornerX, y-cornerY
	switch {
	case squareSum(u-rockX, v-rockY) < 40*40:
		return "rock, weed"
	case math.Abs(v-barCrest(u)) < barWidthM && bedZ(x, y) < levelM:
		return "sand bar"
	}
	return ""
}

// ring is a closed line in plan: the last position is the first.
type ring [][2]float64

// waterPolygon returns the outline of the water and the hole around the rock.
// The outline keeps some metres of shore, so that some points are dry, and ends at
// the mouth.
func waterPolygon() (outline, hole ring) {
	const margin, corners = 1.06, 48
	for i := range corners + 1 {
		sin, cos := math.Sincos(math.Pi * float64(i) / corners)
		outline = append(outline, corner(mouthX+margin*halfWidthM*cos, mouthY+margin*reachM*sin))
	}
	outline = append(outline, outline[0])
	const holeM, holeCorners = 24.0, 16
	for i := range holeCorners { // clockwise, as RFC 7946 wants holes
		sin, cos := math.Sincos(-2 * math.Pi * float64(i) / holeCorners)
		hole = append(hole, corner(rockX+holeM*cos, rockY+holeM*sin))
	}
	return outline, append(hole, hole[0])
}

// corner is a position from the area's corner, in decimetres as a file has it.
func corner(u, v float64) [2]float64 {
	return [2]float64{math.Round((cornerX+u)*10) / 10, math.Round((cornerY+v)*10) / 10}
}

// holds tells whether a position lies inside: a line from there to the east
// crosses the ring an odd number of times.
func (r ring) holds(x, y float64) bool {
	inside := false
	for i := 1; i < len(r); i++ {
		a, b := r[i-1], r[i]
		if (a[1] > y) != (b[1] > y) && x < a[0]+(y-a[1])/(b[1]-a[1])*(b[0]-a[0]) {
			inside = !inside
		}
	}
	return inside
}
