package pipeline

import (
	"context"
	"fmt"
	"math"
	"time"

	"bentray/io/cloud"
)

// Moment is a time (UTC) for which a surface is shown that depends on time, and why
// it is that one.
type Moment struct {
	time.Time
	Why string
}

// moment returns the time at which to show a surface with gauges, in UTC seconds too:
// the middle of the clouds' times where a gauge has a level then; else that of the job
// for clouds without times; else the record nearest to the middle of all.
func (s *survey) moment(clouds span) (utc float64, m *Moment) {
	const ofClouds = "the middle of the clouds' first times"
	middle := math.Round((clouds.low + clouds.high) / 2)
	if !clouds.isEmpty() && s.surface.gauges.Recording(middle) > 0 {
		return middle, &Moment{utcTime(middle), ofClouds}
	}
	utc, why := s.middleRecord(), "the gauge's record nearest to the middle of all"
	if at := s.surface.at; at != nil {
		utc, why = *at, "the time that [surface.gauge] at names"
	}
	if !clouds.isEmpty() {
		why += fmt.Sprintf("; no gauge has a level at %s, %s", ofClouds, utcText(middle))
	}
	return utc, &Moment{utcTime(utc), why}
}

// middleRecord returns the time of the record nearest to the middle of all records.
func (s *survey) middleRecord() float64 {
	times := s.surface.source.gaugeTimes
	middle, best := (times.low+times.high)/2, math.NaN()
	for _, utc := range s.surface.source.gauges.UTC {
		if !(math.Abs(utc-middle) >= math.Abs(best-middle)) {
			best = utc
		}
	}
	return best
}

// cloudTimes returns the span of the times (UTC seconds) with which the clouds begin.
// Clouds that cannot be read are left to a run, or a plan, to name.
func (s *survey) cloudTimes(ctx context.Context, clouds []input) (span, error) {
	times := emptySpan()
	for _, in := range clouds {
		if err := ctx.Err(); err != nil {
			return times, err
		}
		if head, err := s.headTimes(in); err == nil {
			times.join(head)
		}
	}
	return times, nil
}

// headTimes returns the span of the times of a cloud's first rows.
func (s *survey) headTimes(in input) (times span, err error) {
	times = emptySpan()
	file, err := s.openCloud(in, "")
	if err != nil {
		return times, err
	}
	defer file.Close()
	r := &reading{}
	if err := r.findTime(s, file.Columns()); err != nil || r.time < 0 {
		return times, err
	}
	if err := file.Begin(r.request, cloud.Layout{}, nil); err != nil {
		return times, err
	}
	var c cloud.Chunk
	if err := file.Next(&c); err != nil {
		return times, err
	}
	if err := file.Decode(&c); err != nil {
		return times, err
	}
	s.toScale(&c, r)
	for _, t := range c.Numbers[r.time] {
		times.add(s.times.UTC(t)) // NaN widens nothing
	}
	return times, nil
}
