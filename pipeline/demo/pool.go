package demo

import "math"

// The reach: Tansy Pool lies in the same made-up projected system as the cove. Water
// comes in over a riffle in the west, stands 4 m deep in the bend and leaves over another
// riffle; a gravel bar lies dry at each.
const (
	poolX        = 421_000.0 // m, the south-western corner
	poolY        = 6_205_000.0
	poolLengthM  = 120.0 // of the area, from west to east
	poolWidthM   = 64.0
	poolHalfM    = 17.0 // half the width of the water
	poolDeepestM = 3.95 // without what lies on the bed
	riffleM      = 0.35 // depth of the riffles, far from the pool
	poolMidM     = 62.0 // where it is deepest
	poolBellM    = 22.0 // the pool's length, as that of a bell
	gravelM      = 0.03 // height of what lies on the bed
	bankM        = 1.5  // land rises so far above the water
)

// bars are the gravel bars: where they are along and across the axis, how long and wide
// as bells, and how high they rise from the bed. In m.
var bars = []struct{ u, off, length, width, rise float64 }{
	{27, -9, 9, 3.5, 1.9},
	{101, 3, 10, 3, 1.8},
}

// poolSurface falls to the east.
var poolSurface = plane{at: vec{poolX + 60, poolY + 32, 31.86}, slopeX: -4e-4, slopeY: 1e-4}

// The water of the pool.
const (
	poolTemperatureC = 16.8
	poolSalinity     = 0.2
	imageNM          = 550.0 // in vacuum; the job's default for images
)

// poolAxisV returns how far north of the corner the axis lies, some way from the west.
func poolAxisV(u float64) float64 { return 32 + 7*math.Sin(u/24) }

// poolBedZ returns the elevation of the bed, or of the land, at a plan position (m).
func poolBedZ(x, y float64) float64 {
	u, off := x-poolX, y-poolY-poolAxisV(x-poolX)
	middle := riffleM + (poolDeepestM-riffleM)*bell((u-poolMidM)/poolBellM)
	depth := middle*(1-squareSum(off/poolHalfM, 0)) - gravelM*math.Sin(3*u)*math.Sin(2.3*off)
	for _, b := range bars {
		depth -= b.rise * bell(math.Sqrt(squareSum((u-b.u)/b.length, (off-b.off)/b.width)))
	}
	return poolSurface.z(x, y) - max(depth, -bankM)
}
