package correct

import "bentray/correct/optics"

// PulseRay is the way of one pulse, step by step, for a check by hand. Lengths
// are in metres.
type PulseRay struct {
	Normal        optics.Vec // of the surface, upward, unit
	Entry         optics.Vec // where the pulse enters the water
	Down          optics.Vec // direction in the water, unit
	True          optics.Vec // where it ends
	IncidenceRad  float64    // from the normal, in air
	RefractionRad float64    // from the normal, in the water
	ApparentRange float64    // from the entry to the apparent point
	Range         float64    // from the entry to the true point
	WaterLevel    float64    // of the surface at the true point's plan position
	Depth         float64    // WaterLevel - True.Z
}

// TracePulse follows one pulse as Pulse does, and gives the same outcome. The
// columns of s and l hold one value each. Beside a Corrected ray only a Grazing one has
// something to tell: its Normal and IncidenceRad.
func TracePulse(raw, origin optics.Vec, s Planes, l Light, maxIncidenceRad float64) (PulseRay, Outcome) {
	out := make([]Outcome, 1)
	result := NewResult(1)
	at := XYZ{X: []float64{raw.X}, Y: []float64{raw.Y}, Z: []float64{raw.Z}}
	from := XYZ{X: []float64{origin.X}, Y: []float64{origin.Y}, Z: []float64{origin.Z}}
	MarkInvalid(out, at)
	MarkNoSurface(out, s)
	MarkDry(out, &result, at, s)
	Pulse(&result, out, at, from, s, l, maxIncidenceRad)
	surface := s.around(0, raw.Z)
	ray := PulseRay{Normal: surface.normal(), IncidenceRad: result.IncidenceRad[0]}
	if out[0] != Corrected {
		return ray, out[0]
	}
	p, _ := bend(origin.Sub(raw), surface, &l, 0, maxIncidenceRad)
	way := p.end.Sub(p.entry)
	ray.Entry, ray.True, ray.Down = raw.Add(p.entry), raw.Add(p.end), way.Unit()
	ray.RefractionRad = p.refractionRad
	ray.ApparentRange, ray.Range = p.entry.Norm(), way.Norm()
	ray.WaterLevel, ray.Depth = result.WaterLevel[0], result.Depth[0]
	return ray, Corrected
}
