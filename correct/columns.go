package correct

import (
	"math"

	"bentray/correct/optics"
)

// XYZ is a column of positions in metres, z up.
type XYZ struct{ X, Y, Z []float64 }

// Planes is the water surface at each point's RAW plan position: its elevation
// there in metres and its slopes dz/dx and dz/dy. A value that is not finite
// (NaN by custom) means no surface there.
type Planes struct{ Level, SlopeX, SlopeY []float64 }

// Light is what the kernels must know of air and water, all referred to vacuum.
type Light struct {
	Air        float64   // phase index of the air
	RangeIndex float64   // index that the file's ranges were computed with; only Pulse reads it
	Water      []float64 // phase index of the water at each point
	WaterGroup []float64 // group index of the water at each point; only Pulse reads it
}

// Result holds what is computed of each point. XYZ is the true point, or the raw
// one where the point is not Corrected. The rest is NaN where it was not
// computed. Of a point with several rays the last three are means.
type Result struct {
	XYZ
	Depth         []float64 // WaterLevel - Z, m, positive down
	WaterLevel    []float64 // elevation of the surface at the true point's plan position, m
	EntryLevel    []float64 // elevation of the surface where the ray crosses it, m
	IncidenceRad  []float64 // angle between ray and surface normal (of the glass, behind a Port) on the origin's side, 0 to pi/2
	RefractionRad []float64 // the same angle on the point's side
}

// NewResult returns a Result for n points.
func NewResult(n int) Result {
	column := func() []float64 { return make([]float64, n) }
	return Result{
		XYZ:   XYZ{X: column(), Y: column(), Z: column()},
		Depth: column(), WaterLevel: column(), EntryLevel: column(),
		IncidenceRad: column(), RefractionRad: column(),
	}
}

const errLengths = "correct: columns of unequal length"

// mustHave panics unless each column holds n values.
func mustHave(n int, columns ...[]float64) {
	for _, c := range columns {
		if len(c) != n {
			panic(errLengths)
		}
	}
}

func (p XYZ) mustHave(n int) { mustHave(n, p.X, p.Y, p.Z) }

func (s Planes) mustHave(n int) { mustHave(n, s.Level, s.SlopeX, s.SlopeY) }

func (r *Result) mustHave(n int) {
	mustHave(n, r.X, r.Y, r.Z, r.Depth, r.WaterLevel, r.EntryLevel, r.IncidenceRad, r.RefractionRad)
}

// at returns position i.
func (p XYZ) at(i int) optics.Vec { return optics.Vec{X: p.X[i], Y: p.Y[i], Z: p.Z[i]} }

// keep sets entry i to the raw point with nothing computed.
func (r *Result) keep(i int, raw optics.Vec) {
	nan := math.NaN()
	r.X[i], r.Y[i], r.Z[i] = raw.X, raw.Y, raw.Z
	r.Depth[i], r.WaterLevel[i], r.EntryLevel[i] = nan, nan, nan
	r.IncidenceRad[i], r.RefractionRad[i] = nan, nan
}

// keepDry is keep for a point on the ray origin's side of the surface.
func (r *Result) keepDry(i int, raw optics.Vec, level float64) {
	r.keep(i, raw)
	r.WaterLevel[i], r.Depth[i] = level, level-raw.Z
}

// isFinite reports whether x is neither NaN nor infinite.
func isFinite(x float64) bool { return math.Abs(x) <= math.MaxFloat64 }

func isFiniteVec(v optics.Vec) bool { return isFinite(v.X) && isFinite(v.Y) && isFinite(v.Z) }

// isIndex reports whether x can be a refractive index: positive and finite.
func isIndex(x float64) bool { return x > 0 && x <= math.MaxFloat64 }

// hasPhase reports whether the phase indices of point i are usable.
func (l *Light) hasPhase(i int) bool { return isIndex(l.Air) && isIndex(l.Water[i]) }

// hasGroup reports whether the indices that scale the range of point i are usable.
func (l *Light) hasGroup(i int) bool { return isIndex(l.RangeIndex) && isIndex(l.WaterGroup[i]) }
