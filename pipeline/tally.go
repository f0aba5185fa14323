package pipeline

import (
	"fmt"
	"math"

	"bentray/correct"
	"bentray/pipeline/job"
)

// tally counts what became of points. Its results do not depend on the order in
// which chunks are added.
type tally struct {
	outcomes         [correct.NumOutcomes]int64
	depth, incidence span
}

// span is the least and the greatest of some numbers.
type span struct{ low, high float64 }

func emptySpan() span { return span{math.Inf(1), math.Inf(-1)} }

func newTally() *tally { return &tally{depth: emptySpan(), incidence: emptySpan()} }

func (s *span) add(v float64) {
	if v < s.low {
		s.low = v
	}
	if v > s.high {
		s.high = v
	}
}

func (s *span) join(o span) {
	s.low, s.high = min(s.low, o.low), max(s.high, o.high)
}

// add counts the points of a corrected chunk, in metres and radians.
func (t *tally) add(w *workspace) {
	for i, o := range w.out {
		t.outcomes[o]++
		if o == correct.Corrected {
			t.depth.add(w.result.Depth[i])
			t.incidence.add(w.result.IncidenceRad[i])
		}
	}
}

func (t *tally) join(o *tally) {
	for i, n := range o.outcomes {
		t.outcomes[i] += n
	}
	t.depth.join(o.depth)
	t.incidence.join(o.incidence)
}

func (t *tally) points() (n int64) {
	for _, c := range t.outcomes {
		n += c
	}
	return n
}

// counts returns the outcomes that occur, by name.
func (t *tally) counts() map[string]int64 {
	counts := map[string]int64{}
	for o, n := range t.outcomes {
		if n > 0 {
			counts[correct.Outcome(o).String()] = n
		}
	}
	return counts
}

// ranges returns the spans over corrected points, in the units of the columns.
func (t *tally) ranges(s *survey) map[string][2]float64 {
	ranges := map[string][2]float64{}
	if t.outcomes[correct.Corrected] == 0 {
		return ranges
	}
	ranges["depth"] = [2]float64{t.depth.low / s.height, t.depth.high / s.height}
	ranges["n_water"] = [2]float64{s.optics.waterPhase, s.optics.waterPhase}
	if s.job.Rays.Model == job.Pulse {
		ranges["ng_water"] = [2]float64{s.optics.waterGroup, s.optics.waterGroup}
		ranges["incidence_deg"] = [2]float64{t.incidence.low / radiansPerDegree, t.incidence.high / radiansPerDegree}
	}
	return ranges
}

// advice says, for outcomes that are more often a fault of the job than of the
// points, what to look at.
var advice = map[correct.Outcome]string{
	correct.Invalid:   "have no finite coordinates",
	correct.NoSurface: "have no water surface: the surface column is empty there",
	correct.NoOrigin:  "have no ray origin above the water: their times are outside the trajectory or in a gap longer than max_gap, or the origins are not in the cloud's heights",
	correct.Grazing:   "were seen at more than max_incidence from the surface normal",
	correct.Unsolved:  "have no finite solution",
}

// cautions says what a person should look at before trusting the output.
func (t *tally) cautions(s *survey) []string {
	cautions := append([]string{}, s.cautions...)
	total := t.points()
	for o, n := range t.outcomes {
		if text := advice[correct.Outcome(o)]; n > 0 && text != "" {
			cautions = append(cautions, fmt.Sprintf("%d of %d points %s", n, total, text))
		}
	}
	switch {
	case total == 0:
		cautions = append(cautions, "the file holds no points")
	case t.outcomes[correct.Corrected] == 0:
		cautions = append(cautions, "no point was corrected")
	}
	return cautions
}
