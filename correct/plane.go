package correct

import "bentray/correct/optics"

// plane is the water surface as one point sees it. Slopes act on differences from the
// raw point, which keep the digits that coordinates of millions of metres would
// lose.
type plane struct {
	level          float64 // elevation at the raw plan position, m
	rise           float64 // level above the raw point, m
	slopeX, slopeY float64
}

// around returns the surface around raw point i of elevation z.
func (s Planes) around(i int, z float64) plane {
	return plane{s.Level[i], s.Level[i] - z, s.SlopeX[i], s.SlopeY[i]}
}

// isFinite reports whether there is a surface.
func (p plane) isFinite() bool { return isFinite(p.level) && isFinite(p.slopeX) && isFinite(p.slopeY) }

// climb returns how much the surface rises from the raw plan position to that
// position moved by v.
func (p plane) climb(v optics.Vec) float64 { return p.slopeX*v.X + p.slopeY*v.Y }

// levelAt returns the surface's elevation at the raw plan position moved by v. On a
// level surface it is the level to the bit.
func (p plane) levelAt(v optics.Vec) float64 { return p.level + p.climb(v) }

// normal returns the upward unit normal.
func (p plane) normal() optics.Vec {
	return optics.Vec{X: -p.slopeX, Y: -p.slopeY, Z: 1}.Unit()
}
