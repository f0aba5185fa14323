package pipeline

import (
	"math"

	"bentray/correct"
)

// throughWater gives each point its indices and runs the model; with casts it
// does so again with the water down to the depth found, until that stays.
func (s *survey) throughWater(p *part, sn *sensor, w *workspace, model func()) {
	w.light.Air, w.light.RangeIndex = sn.airPhase, sn.ranges
	if s.isConstantWater() {
		s.fillConstantIndex(w, p.out, sn)
		model()
		return
	}
	if s.hasCasts() {
		s.throughCasts(p, sn, w, model)
	} else {
		s.fillWater(w, p.out, nil)
		s.markWater(w, p.out, sn)
		model()
	}
	s.markOutOfRange(p, w, sn)
}

func (s *survey) hasCasts() bool { return s.water.stations != nil && s.water.stations.HasDepths() }

// throughCasts begins with the water down to the apparent depth and goes on with the
// depth that the model found. A depth that has come to rest stays, and every try begins
// anew with the outcomes from before any water.
func (s *survey) throughCasts(p *part, sn *sensor, w *workspace, model func()) {
	m := &w.meet
	copy(m.before, p.out)
	for i := range m.depth {
		m.depth[i] = p.planes.Level[i] - w.raw.Z[i]
	}
	for try := range meetTries {
		copy(p.out, m.before)
		s.fillWater(w, p.out, m.depth)
		s.markWater(w, p.out, sn)
		model()
		if !m.deepen(p, try == meetTries-1) {
			return
		}
	}
}

// deepen takes the depths that moved, and tells whether any did. Those that move at the
// last try are unsolved.
func (m *meeting) deepen(p *part, isLast bool) (moved bool) {
	for i, o := range p.out {
		if o != correct.Corrected || math.Abs(p.result.Depth[i]-m.depth[i]) < meetM {
			continue
		}
		moved = true
		m.depth[i] = p.result.Depth[i]
		if isLast {
			p.fail(i, correct.Unsolved)
		}
	}
	return moved
}
