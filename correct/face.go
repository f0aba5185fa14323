package correct

import (
	"math"

	"bentray/correct/optics"
)

// FaceNormal returns the outward unit normal of a transducer's face, in the cloud's axes. At
// roll and pitch 0 the face looks straight down. rollRad is positive with the
// vessel's starboard side down (the face turns to port), pitchRad with its bow up
// (the face turns forward), pitch over roll; headingRad is where the bow points, clockwise
// from +y. All in radians. The heading does not matter where roll and pitch are 0.
func FaceNormal(rollRad, pitchRad, headingRad float64) optics.Vec {
	sinRoll, cosRoll := math.Sincos(rollRad)
	sinPitch, cosPitch := math.Sincos(pitchRad)
	sin, cos := math.Sincos(headingRad)
	forward, starboard := sinPitch*cosRoll, -sinRoll
	return optics.Vec{
		X: forward*sin + starboard*cos,
		Y: forward*cos - starboard*sin,
		Z: -cosPitch * cosRoll,
	}
}
