package acoustics

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"
)

// Interpolation says what the speed of sound is between the samples of a profile. The
// zero value is Linear, the default.
type Interpolation uint8

const (
	// Linear changes at a constant gradient from sample to sample.
	Linear Interpolation = iota
	// Steps holds a sample's speed from its depth down to the next sample's.
	Steps
)

var interpolationNames = [...]string{Linear: "linear", Steps: "steps"}

// ParseInterpolation returns the interpolation called s: "linear" or "steps". For any
// other text it returns an error that names the two.
func ParseInterpolation(s string) (Interpolation, error) {
	for i, name := range interpolationNames {
		if s == name {
			return Interpolation(i), nil
		}
	}
	return 0, fmt.Errorf("interpolation is %q, want one of %s", s, strings.Join(interpolationNames[:], ", "))
}

// String returns the name that ParseInterpolation takes.
func (i Interpolation) String() string {
	if int(i) < len(interpolationNames) {
		return interpolationNames[i]
	}
	return fmt.Sprintf("Interpolation(%d)", uint8(i))
}

// Profile is the speed of sound against the depth below the water level, as horizontal
// layers of constant speed or constant gradient. From the surface to the first sample
// it is the first sample's speed, below the last one the last one's. A Profile does not
// change, so any number of goroutines may use one.
type Profile struct {
	kind    Interpolation
	samples []sample
	layers  []layer // from depth 0 to infinity, without gaps
}

type sample struct{ depth, speed float64 } // m below the water level, m/s

// layer has the speed c0 at its top and c1 at its bottom; gradient is (c1 - c0) / (bottom - top), 1/s,
// exactly 0 where the speed is constant.
type layer struct{ top, bottom, c0, c1, gradient float64 }

// NewProfile returns the profile through samples at increasing depths, metres below the
// water level, of speeds in m/s. One sample gives a constant speed. A depth that is not within 0 to
// 12000 m or not deeper than the one before (by a micrometre at least), and a speed that
// is not within 1000 to 2000 m/s, give a *RowError; no samples at all an error. Columns of
// unequal length panic.
func NewProfile(depthM, speed []float64, kind Interpolation) (*Profile, error) {
	if len(depthM) != len(speed) {
		panic(errLengths)
	}
	if len(depthM) == 0 {
		return nil, errNoRows
	}
	samples := make([]sample, len(depthM))
	for i := range samples {
		if err := checkRow(i, depthM[i], speed[i]); err != nil {
			return nil, err
		}
		if i > 0 && !(depthM[i] >= depthM[i-1]+thinnestM) {
			return nil, rowError(i, "depth is %g m, want more than the %g m of the row before", depthM[i], depthM[i-1])
		}
		samples[i] = sample{depthM[i], speed[i]}
	}
	return newProfile(samples, kind), nil
}

func newProfile(samples []sample, kind Interpolation) *Profile {
	first, last := samples[0], samples[len(samples)-1]
	p := &Profile{kind: kind, samples: samples}
	if first.depth > 0 {
		p.add(sample{0, first.speed}, first)
	}
	for i, s := range samples[1:] {
		p.add(samples[i], s)
	}
	p.add(last, sample{math.Inf(1), last.speed})
	p.layers = slices.Clip(p.layers)
	return p
}

// add appends the layer between two samples.
func (p *Profile) add(top, bottom sample) {
	c1 := bottom.speed
	if p.kind == Steps {
		c1 = top.speed
	}
	p.layers = append(p.layers, layer{top.depth, bottom.depth, top.speed, c1, (c1 - top.speed) / (bottom.depth - top.depth)})
}

// Samples returns the number of samples that the profile goes through.
func (p *Profile) Samples() int { return len(p.samples) }

// Interpolation returns what the speed is between samples.
func (p *Profile) Interpolation() Interpolation { return p.kind }

// Sample returns the depth in metres and the speed in m/s of sample i, from the top.
func (p *Profile) Sample(i int) (depthM, speed float64) {
	return p.samples[i].depth, p.samples[i].speed
}

// LastM returns the depth of the last sample, metres. Below it the speed is held.
func (p *Profile) LastM() float64 { return p.samples[len(p.samples)-1].depth }

// Speed returns the speed of sound in m/s at a depth in metres; at a step, that below
// it. It is NaN for a depth that is negative or NaN.
func (p *Profile) Speed(depthM float64) float64 {
	if !(depthM >= 0) {
		return math.NaN()
	}
	return p.layers[p.layerAt(depthM)].speed(depthM)
}

// layerAt returns the layer that a depth of at least 0 is in; at a boundary, the lower one.
func (p *Profile) layerAt(depth float64) int {
	if last := len(p.layers) - 1; depth >= p.layers[last].top {
		return last
	}
	return sort.Search(len(p.layers), func(i int) bool { return p.layers[i].bottom > depth })
}

// layerAbove returns the layer that a depth of at least 0 is in; at a boundary, the upper one.
func (p *Profile) layerAbove(depth float64) int {
	i := p.layerAt(depth)
	if i > 0 && depth == p.layers[i].top {
		return i - 1
	}
	return i
}

// speed returns the speed at a depth inside the layer.
func (l *layer) speed(depth float64) float64 {
	switch {
	case l.gradient == 0:
		return l.c0
	case depth == l.bottom:
		return l.c1
	}
	return l.c0 + l.gradient*(depth-l.top)
}
