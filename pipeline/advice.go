package pipeline

import (
	"fmt"

	"bentray/correct"
)

// advice says, for outcomes that are more often a fault of the job than of the
// points, what to look at.
var advice = map[correct.Outcome]string{
	correct.Invalid:    "have no finite coordinates",
	correct.NoSurface:  "have no water surface: it does not reach them in place or time, or its column is empty there",
	correct.NoRule:     "match no sensor",
	correct.NoWater:    "have no temperature and salinity: no zone or station gives them, in place or time",
	correct.OutOfRange: "are in water outside the range of the index formula",
	correct.FewRays:    "were seen by fewer than two cameras",
	correct.Grazing:    "were seen at more than max_incidence from the surface normal, or by a ray that the surface reflects",
	correct.Unsolved:   "have no solution: their rays fix no point, or meet a curved surface at no one place or more than once",
}

// cautions says what a person should look at before trusting the output.
func (t *tally) cautions(s *survey) []string {
	total := t.points()
	cautions := append(t.geometryCautions(s), s.cautions...)
	cautions = append(cautions, t.images.cautions(s)...)
	cautions = append(cautions, t.gaugeCautions(s)...)
	for o, n := range t.outcomes {
		if correct.Outcome(o) == correct.NoSurface {
			n -= t.gauge.surfaceless()
		}
		if text := t.adviceOn(correct.Outcome(o), s); n > 0 && text != "" {
			cautions = append(cautions, fmt.Sprintf("%d of %d points %s", n, total, text))
		}
	}
	if n := t.extended; n > 0 {
		cautions = append(cautions, fmt.Sprintf("%d of %d points are in water outside the published range of %s; its index is an extension of the formula", n, total, s.water.formula))
	}
	if n := t.noPosition; n > 0 {
		cautions = append(cautions, fmt.Sprintf("%d of %d points have no ray origin: %s", n, total, s.whyNoPosition()))
	}
	if n := t.outcomes[correct.NoOrigin] - t.noPosition - t.images.offside; n > 0 {
		cautions = append(cautions, fmt.Sprintf("%d of %d points have a ray origin that is not above the water: are origins and cloud in one system and unit?", n, total))
	}
	if total > 0 && t.outcomes[correct.Corrected] == 0 {
		cautions = append(cautions, "no point was corrected")
	}
	return cautions
}

// adviceOn says what to look at for an outcome, or nothing.
func (t *tally) adviceOn(o correct.Outcome, s *survey) string {
	text := advice[o]
	if times := s.cameraTimes(); !times.isEmpty() {
		switch o {
		case correct.Unsolved:
			text += ", or were dry at the time of one of their cameras"
		case correct.NoSurface:
			text += fmt.Sprintf("; the cameras' times are from %s", spanText(times))
			if s.surface.gauges != nil {
				text += fmt.Sprintf(", the gauge's records from %s", spanText(s.surface.source.gaugeTimes))
			}
		}
	}
	if o == correct.NoWater && s.water.stations != nil && s.water.stations.HasTimes() {
		records := rangeOf(s.water.records.UTC)
		text += fmt.Sprintf("; the stations' records are from %s and hold max_gap (%g s) beyond, %s",
			spanText(span{records.Low, records.High}), s.job.Water.MaxGap, t.timesText(s))
	}
	return text
}

// cameraTimes returns the span of the times (UTC seconds) of cameras whose rays take their
// own surface by them.
func (s *survey) cameraTimes() span {
	times := emptySpan()
	for _, sn := range s.sensors {
		if sn.isMultiview() && s.hasOwnTimes(sn) {
			times.addFinite(sn.cameras.UTC())
		}
	}
	return times
}

// whyNoPosition says what leaves a point without ray origin.
func (s *survey) whyNoPosition() string {
	for _, sn := range s.sensors {
		if sn.trajectory != nil {
			return fmt.Sprintf("their times are outside the trajectory, or in a gap of it longer than max_gap (%g s)", sn.Rays.MaxGap)
		}
	}
	return "an origin column is empty there"
}
