package correct

import (
	"math"

	"bentray/correct/acoustics"
	"bentray/correct/optics"
)

// Sounding corrects the points of a sonar. The raw point says how long the sound ran one way and
// in which direction it left the head, origin: straight at the assumed speed c, for the
// time r / c, or along the path to it through the assumed profile. From there the ray is
// traced for that time through the true profile of its point, whose depths count from the water
// level over the head: the point's plane, continued to the head. Layers are level, so the
// ray keeps its vertical plane.
//
// With a face, the beams were steered: the array sent what it took for a beam at the sine u
// from an axis of the face, at the speed of sound it assumed at the head, to the sine u
// times true speed / assumed speed. All axes of the face change alike, so only its
// normal counts. Without, the direction is kept.
//
// It writes all columns of dst. A point that is not Corrected keeps its raw position. New
// outcomes:
//   - NoOrigin: see MarkNoHead.
//   - NoWater: no profile.
//   - Grazing: the ray meets the water surface before its time is spent, or ends above the
//     point's plane. IncidenceRad and HeadSpeed are written all the same.
//   - Unsolved: no travel time (assumed speed not positive and finite, raw point at the
//     head, or no path to it through the assumed profile), a steered beam that would leave
//     along the face or behind it, or a result that is not finite.
//
// A ray that turns is traced through its turn; Passage tells.
func Sounding(dst *SoundResult, out []Outcome, raw, origin XYZ, s Planes, b *Sound) {
	dst.mustHave(len(out))
	raw.mustHave(len(out))
	origin.mustHave(len(out))
	s.mustHave(len(out))
	b.mustHave(len(out))
	for i := range out {
		dst.HeadSpeed[i], dst.BedSpeed[i], dst.Passage[i] = math.NaN(), math.NaN(), 0
		if out[i] == Dry {
			continue
		}
		point := raw.at(i)
		dst.keep(i, point)
		if out[i] == Corrected {
			out[i] = dst.sound(i, point, origin.at(i), s.around(i, point.Z), b)
		}
	}
}

// sound corrects point i.
func (r *SoundResult) sound(i int, point, origin optics.Vec, surface plane, b *Sound) Outcome {
	up := origin.Sub(point)
	headM := surface.headM(up)
	if !isFiniteVec(origin) || headM < 0 {
		return NoOrigin
	}
	profile := b.of(i)
	if profile == nil {
		return NoWater
	}
	c, m := profile.Speed(headM), b.beam(i, up, headM)
	if b.Face != nil {
		b.steer(&m, i, c)
	}
	sin := math.Hypot(m.dir.X, m.dir.Y)
	arrival := profile.Trace(headM, sin, -m.dir.Z, m.timeS)
	if !m.isKnown || arrival.Fate == acoustics.NoRay {
		return Unsolved
	}
	r.IncidenceRad[i], r.HeadSpeed[i] = math.Atan2(sin, -m.dir.Z), c
	if arrival.Fate == acoustics.Surfaced {
		return Grazing
	}
	way := optics.Vec{Z: headM - arrival.DepthM}
	if sin > 0 {
		way.X, way.Y = m.dir.X*(arrival.RunM/sin), m.dir.Y*(arrival.RunM/sin)
	}
	return r.putSound(i, point, way.Add(up), surface, &arrival)
}

// headM returns how deep the head is below the water level over it; up leads there from the
// raw point.
func (p plane) headM(up optics.Vec) float64 { return p.rise + p.climb(up) - up.Z }

// putSound writes entry i, moved by shift, and returns its final outcome.
func (r *SoundResult) putSound(i int, point, shift optics.Vec, surface plane, a *acoustics.Arrival) Outcome {
	end, level := point.Add(shift), surface.levelAt(shift)
	depth := level - end.Z
	switch {
	case !isFiniteVec(end) || !isFinite(depth):
		r.IncidenceRad[i], r.HeadSpeed[i] = math.NaN(), math.NaN()
		return Unsolved
	case depth < 0:
		return Grazing
	}
	r.X[i], r.Y[i], r.Z[i] = end.X, end.Y, end.Z
	r.Depth[i], r.WaterLevel[i] = depth, level
	r.RefractionRad[i], r.BedSpeed[i] = math.Atan2(a.Sin, a.Cos), a.Speed
	if a.Turned {
		r.Passage[i] |= Turned
	}
	if a.Beyond {
		r.Passage[i] |= Beyond
	}
	return Corrected
}

// MarkNoHead sets NoOrigin where a coordinate of the head, origin, is not finite, or where it
// is above the point's plane of the water surface, continued to the head; on it is well.
// Sounding does the same; call this before the outcomes that come between NoOrigin and Grazing
// are set.
func MarkNoHead(out []Outcome, raw, origin XYZ, s Planes) {
	raw.mustHave(len(out))
	origin.mustHave(len(out))
	s.mustHave(len(out))
	for i := range out {
		if out[i] != Corrected {
			continue
		}
		point, head := raw.at(i), origin.at(i)
		if !isFiniteVec(head) || s.around(i, point.Z).headM(head.Sub(point)) < 0 {
			out[i] = NoOrigin
		}
	}
}
