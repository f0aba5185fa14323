package pipeline

import (
	"math"

	"bentray/correct"
)

// Where a flat ray is looked at for an earlier crossing: at heights above its entry
// that begin with the first (m), each so many times the one before, to 8.5 m.
const (
	firstCheckM = 0.05
	checkRatio  = 1.25
	checks      = 24
)

// findEarlierCrossings sets unmet for rays that meet the surface on their way from the
// origin to the entry. That takes a surface steeper than the ray: a wave breaks before
// it is as steep as 30 degrees (Stokes 1880), so rays within 45 degrees of the vertical
// are not looked at unless a profile has a step that is steeper than they are. On the others a crest between two places that are looked at shows
// by the slopes there: where the tangents of the clear height meet below 0, the ray may
// be in the crest. So none is missed that is convex between such places, and a ray
// that just clears one may be unmet too.
func (s *survey) findEarlierCrossings(p *part, w *workspace) {
	m := &w.meet
	m.steepRun = s.surface.steepRun()
	if !p.hasFlat(w) {
		return
	}
	clear(m.clear)
	clear(m.gain)
	for k, above := 0, firstCheckM; k < checks; k, above = k+1, above*checkRatio {
		p.alongFlat(w, above)
		s.surface.fill(m.there, m.x, m.y, w.moments, w.zone, w.column)
		p.checkClear(w, above)
	}
}

// isFlat tells a ray that met the surface and may have met it before.
func (p *part) isFlat(w *workspace, i int) bool {
	runX, runY := p.run(w, i)
	return p.out[i] == correct.Corrected && !w.meet.unmet[i] && math.Hypot(runX, runY) > w.meet.steepRun
}

// steepRun is the run for each metre of rise beyond which a ray may be flatter than the
// surface.
func (f *waterSurface) steepRun() float64 {
	if f.profile == nil {
		return 1
	}
	return min(1, 1/f.profile.Steepest())
}

// run is how far a ray goes in the plan for each metre that it rises.
func (p *part) run(w *workspace, i int) (x, y float64) {
	rise := p.origin.Z[i] - w.raw.Z[i]
	return (p.origin.X[i] - w.raw.X[i]) / rise, (p.origin.Y[i] - w.raw.Y[i]) / rise
}

func (p *part) hasFlat(w *workspace) bool {
	for i := range p.out {
		if p.isFlat(w, i) {
			return true
		}
	}
	return false
}

// alongFlat fills the meeting's x, y with the places where flat rays are so high
// above their entries; NaN for the others, and above the origin.
func (p *part) alongFlat(w *workspace, above float64) {
	m := &w.meet
	for i := range p.out {
		m.x[i], m.y[i] = math.NaN(), math.NaN()
		if p.isFlat(w, i) && p.entryLevel(w, i)+above < p.origin.Z[i] {
			runX, runY := p.run(w, i)
			m.x[i], m.y[i] = m.lastX[i]+above*runX, m.lastY[i]+above*runY
		}
	}
}

// checkClear holds how much the rays clear the surface by, and the gain of that with
// height, against the place before, which is 1/checkRatio as high.
func (p *part) checkClear(w *workspace, above float64) {
	m, step := &w.meet, above*(1-1/checkRatio)
	for i, level := range m.there.Level {
		runX, runY := p.run(w, i)
		high, gain := p.entryLevel(w, i)+above-level, 1-m.there.SlopeX[i]*runX-m.there.SlopeY[i]*runY
		low, loss := m.clear[i], -m.gain[i]
		isDip := loss > 0 && gain > 0 && low*gain+(high-gain*step)*loss < 0
		m.unmet[i] = m.unmet[i] || high < 0 || isDip
		m.clear[i], m.gain[i] = high, gain
	}
}
