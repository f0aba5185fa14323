package pipeline

import (
	"fmt"
	"time"

	"bentray/correct"
)

// gaugeTally counts points by what the gauges had for them at their times.
type gaugeTally struct {
	partial  int64 // with a level that only some of several gauges made
	timeless int64 // without surface: they have no time
	outside  int64 // without surface: no record was made yet, or any more
	inGap    int64 // without surface: between records
}

// add counts a point of a survey with gauges.
func (g *gaugeTally) add(s *survey, o correct.Outcome, utc float64) {
	gauges := s.surface.gauges
	if o != correct.NoSurface && (gauges.Len() == 1 || !levelKnown(o)) {
		return
	}
	recording := gauges.Recording(utc)
	switch span := s.surface.source.gaugeTimes; {
	case recording == gauges.Len():
	case recording > 0:
		if levelKnown(o) {
			g.partial++
		}
	case utc != utc:
		g.timeless++
	case utc < span.low || utc > span.high:
		g.outside++
	default:
		g.inGap++
	}
}

func (g *gaugeTally) join(o gaugeTally) {
	g.partial += o.partial
	g.timeless += o.timeless
	g.outside += o.outside
	g.inGap += o.inGap
}

// surfaceless returns how many points have no surface since they have no level of a
// gauge.
func (g *gaugeTally) surfaceless() int64 { return g.timeless + g.outside + g.inGap }

// gaugeCautions says what the gauges left to be wished for.
func (t *tally) gaugeCautions(s *survey) (cautions []string) {
	total, gap := t.points(), 0.0
	if s.job.Surface.Gauge != nil {
		gap = s.job.Surface.Gauge.MaxGap
	}
	say := func(n int64, format string, args ...any) {
		if n > 0 {
			cautions = append(cautions, fmt.Sprintf("%d of %d points "+format, append([]any{n, total}, args...)...))
		}
	}
	say(t.gauge.outside, "have no water surface: the gauge's records are from %s, %s", spanText(s.surface.source.gaugeTimes), t.timesText(s))
	say(t.gauge.inGap, "have no water surface: their times fall into gaps of the gauge's records longer than max_gap (%g s)", gap)
	say(t.gauge.timeless, "have no water surface: they have no time, by which the gauge is looked up")
	say(t.gauge.partial, "have their level from only some of the gauges, the others having none at their times: it makes a step where a gauge's records begin, end or pause for longer than max_gap (%g s)", gap)
	if s.surface.at != nil && !t.times.isEmpty() {
		cautions = append(cautions, atNotUsed)
	}
	return cautions
}

// atNotUsed is said where a job names a time for clouds that have their own.
const atNotUsed = "[surface.gauge] at is not used: the points have times of their own"

// timesText says which times the points have.
func (t *tally) timesText(s *survey) string {
	if t.times.isEmpty() && s.surface.at != nil {
		return "[surface.gauge] at is " + utcText(*s.surface.at)
	}
	return "the cloud's times from " + spanText(t.utc(s))
}

// utc returns the span of the points' times, UTC seconds.
func (t *tally) utc(s *survey) span {
	if t.times.isEmpty() {
		return emptySpan()
	}
	return span{s.times.UTC(t.times.low), s.times.UTC(t.times.high)}
}

func spanText(utc span) string { return utcText(utc.low) + " to " + utcText(utc.high) }

func utcText(seconds float64) string { return utcTime(seconds).Format(time.RFC3339) }
