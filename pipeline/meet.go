package pipeline

import (
	"math"

	"bentray/correct"
)

// How a ray meets a curved surface, and how casts are averaged to the true depth:
// tries at most, and metres that the last one may still move.
const (
	meetTries = 20
	meetM     = 1e-6
)

// meeting is what it takes to meet a curved surface and to average casts.
type meeting struct {
	x, y, lastX, lastY []float64
	unmet              []bool         // rays that came to no rest, or not to rest at their first crossing
	there              correct.Planes // surface at places that are asked about
	clear, gain        []float64      // see findEarlierCrossings
	steepRun           float64        // run for each metre of rise beyond which a ray may cross the surface twice

	depth  []float64         // that casts are averaged to
	before []correct.Outcome // as they were before any water
}

// meetSurface takes the plane of each point anew at its ray's entry, until the
// entries no longer move, beginning with a level plane: over a curved surface a slope
// says nothing of places as far away as the ray's origin. The planes end up
// at the raw positions. An entry that has come to rest stays, so a point's result does
// not depend on its neighbours. Where a try finds no surface, the point has none.
func (s *survey) meetSurface(p *part, w *workspace) {
	m := &w.meet
	clear(p.planes.SlopeX)
	clear(p.planes.SlopeY)
	correct.MarkNoOrigin(p.out, w.raw, p.origin, p.planes)
	clear(m.unmet)
	fill(m.lastX, math.NaN())
	fill(m.lastY, math.NaN())
	for try := range meetTries {
		correct.EntryPlan(m.x, m.y, p.out, w.raw, p.origin, p.planes)
		if !m.follow(p, try == meetTries-1) {
			break
		}
		s.surface.fill(p.planes, m.lastX, m.lastY, w.moments, w.zone, w.column)
		p.planes.CarryToRaw(w.raw, m.lastX, m.lastY)
		correct.MarkNoSurface(p.out, p.planes)
	}
	s.findEarlierCrossings(p, w)
	p.levelUnmet(w)
}

// follow takes the entries that moved, and tells whether any did. Those that move at
// the last try are unmet.
func (m *meeting) follow(p *part, isLast bool) (moved bool) {
	for i, o := range p.out {
		if o != correct.Corrected || math.Hypot(m.x[i]-m.lastX[i], m.y[i]-m.lastY[i]) < meetM {
			continue
		}
		moved = true
		m.lastX[i], m.lastY[i], m.unmet[i] = m.x[i], m.y[i], isLast
	}
	return moved
}

// entryLevel is the level of a point's plane at its entry.
func (p *part) entryLevel(w *workspace, i int) float64 {
	return p.levelAt(w, i, w.meet.lastX[i], w.meet.lastY[i])
}

// levelAt is the level of a point's plane anywhere.
func (p *part) levelAt(w *workspace, i int, x, y float64) float64 {
	return p.planes.Level[i] + p.planes.SlopeX[i]*(x-w.raw.X[i]) + p.planes.SlopeY[i]*(y-w.raw.Y[i])
}

// levelUnmet leaves unmet rays a level plane: their incidence is the angle from
// the vertical. A ray is unmet too if its plane stands between it and the origin.
func (p *part) levelUnmet(w *workspace) {
	unmet := w.meet.unmet
	for i := range unmet {
		unmet[i] = unmet[i] || p.origin.Z[i] <= p.levelAt(w, i, p.origin.X[i], p.origin.Y[i])
		if unmet[i] {
			p.planes.Level[i], p.planes.SlopeX[i], p.planes.SlopeY[i] = p.entryLevel(w, i), 0, 0
		}
	}
}

// markUnmet sets Unsolved for points of unmet rays for which nothing else applies; no
// slope is known where they would enter.
func (p *part) markUnmet(w *workspace) {
	for i, unmet := range w.meet.unmet {
		if unmet && p.out[i] == correct.Corrected {
			p.fail(i, correct.Unsolved)
			p.planes.SlopeX[i], p.planes.SlopeY[i] = math.NaN(), math.NaN()
		}
	}
}

// takeTrueLevels asks a curved surface for its level over each true point.
func (s *survey) takeTrueLevels(p *part, w *workspace) {
	r, there := &p.result, w.meet.there
	s.surface.fill(there, r.X, r.Y, w.moments, w.zone, w.column)
	for i, o := range p.out {
		switch {
		case o != correct.Corrected:
		case there.Level[i] != there.Level[i]:
			p.fail(i, correct.NoSurface)
		default:
			r.WaterLevel[i] = there.Level[i]
			r.Depth[i] = there.Level[i] - r.Z[i]
		}
	}
}
