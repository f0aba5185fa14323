package correct

import (
	"bentray/correct/acoustics"
	"bentray/correct/optics"
)

// Sound is what Sounding must know beside the raw points: the speed of sound in the water,
// and what the raw points were made with.
type Sound struct {
	// Profiles are the true speeds, by depth below the water level over the head. Profile
	// has the one of each point, below 0 where it has none; nil means the first for all.
	Profiles []*acoustics.Profile
	Profile  []int32
	// Assumed is the profile that the raw points were traced with; nil means straight rays at
	// AssumedSpeed, m/s, of each point. With it AssumedSpeed is not read.
	Assumed      *acoustics.Profile
	AssumedSpeed []float64
	// Face is the unit normal of the transducer's face, outward, at each point, where its
	// beams are steered: see FaceNormal. nil where they are not.
	Face *XYZ
}

func (b *Sound) mustHave(n int) {
	if b.Profile != nil && len(b.Profile) != n || b.Assumed == nil && len(b.AssumedSpeed) != n {
		panic(errLengths)
	}
	if b.Face != nil {
		b.Face.mustHave(n)
	}
}

// of returns the true profile of point i, or nil.
func (b *Sound) of(i int) *acoustics.Profile {
	switch {
	case b.Profile == nil:
		return b.Profiles[0]
	case b.Profile[i] < 0:
		return nil
	}
	return b.Profiles[b.Profile[i]]
}

// Passage has what happened to a ray on its way: any of the bits below.
type Passage uint8

// The bits of a Passage.
const (
	Turned Passage = 1 << iota // from down to up or back
	Beyond                     // it began or ended below the last sample of its profile
)

// SoundResult is a Result with the speeds at both ends of each ray. EntryLevel is not
// computed. IncidenceRad is the angle at the head from the downward vertical, 0 to
// pi, RefractionRad that at the true point.
type SoundResult struct {
	Result
	HeadSpeed []float64 // of sound at the head, m/s
	BedSpeed  []float64 // at the true point, m/s
	Passage   []Passage // 0 where the point is not Corrected
}

// NewSoundResult returns a SoundResult for n points.
func NewSoundResult(n int) SoundResult {
	return SoundResult{
		Result: NewResult(n), HeadSpeed: make([]float64, n), BedSpeed: make([]float64, n), Passage: make([]Passage, n),
	}
}

func (r *SoundResult) mustHave(n int) {
	r.Result.mustHave(n)
	mustHave(n, r.HeadSpeed, r.BedSpeed)
	if len(r.Passage) != n {
		panic(errLengths)
	}
}

// beam is a ray where it leaves the head.
type beam struct {
	dir     optics.Vec // unit
	timeS   float64    // one way
	speed   float64    // of sound at the head that was assumed, m/s
	isKnown bool
}

// beam returns how the raw point of i says its ray set out; up is the way from it to the head, which
// is headM below the water level.
func (b *Sound) beam(i int, up optics.Vec, headM float64) beam {
	if b.Assumed == nil {
		r, c := up.Norm(), b.AssumedSpeed[i]
		return beam{up.Scale(-1 / r), r / c, c, r > 0 && isIndex(c)}
	}
	run := optics.Vec{X: -up.X, Y: -up.Y}
	length := run.Norm()
	path, ok := b.Assumed.Between(headM, headM+up.Z, length)
	dir := optics.Vec{Z: -path.Cos}
	if length > 0 {
		dir = dir.Add(run.Scale(path.Sin / length))
	}
	return beam{dir, path.TimeS, b.Assumed.Speed(headM), ok}
}

// steer sets the beam of point i right at the face: an array that was steered to the sine u for the
// assumed speed sent it to u c / assumed, along each of its axes. That is Snell's law
// at the face.
func (b *Sound) steer(m *beam, i int, c float64) {
	face := b.Face.at(i)
	dir, ok := optics.Refract(m.dir, face, c, m.speed)
	m.dir, m.isKnown = dir, m.isKnown && ok && m.dir.Dot(face) > 0
}
