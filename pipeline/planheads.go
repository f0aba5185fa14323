package pipeline

import (
	"fmt"
	"math"
	"slices"
	"time"

	"bentray/correct"
)

// Corner is the surface at a corner of the bounds.
type Corner struct{ X, Y, Level float64 }

// finish sums up what the heads of all files showed.
func (p *planner) finish() {
	t, h := p.tally, &p.plan.Heads
	h.Points, h.Outcomes = t.points(), t.counts()
	if !t.times.isEmpty() {
		h.Times = [2]time.Time{p.times.Time(t.times.low), p.times.Time(t.times.high)}
	}
	for k, b := range t.bounds {
		h.Low[k], h.High[k] = b.low, b.high
	}
	for k := range t.sensors {
		p.plan.Sensors[k].Points = t.sensors[k]
	}
	p.corners()
	h.Images = t.images.heads(p.survey)
	p.plan.Cautions = slices.Concat(t.cautions(p.survey), p.idleSensors(), p.imageCautions(), p.whyNoPoints(), p.ofFiles)
}

// idleSensors names the sensors that fit none of the heads' points, where any came as
// far as that.
func (p *planner) idleSensors() (cautions []string) {
	matched := p.tally.points() - p.tally.outcomes[correct.Invalid] - p.tally.outcomes[correct.NotSelected]
	for _, sn := range p.plan.Sensors {
		if sn.Name != "" && sn.Points == 0 && matched > 0 {
			cautions = append(cautions, fmt.Sprintf("sensor %q fits none of the first %d points of the files", sn.Name, p.tally.points()))
		}
	}
	return cautions
}

// whyNoPoints says why there is nothing to look at, where there is nothing.
func (p *planner) whyNoPoints() []string {
	if p.tally.points() > 0 {
		return nil
	}
	for _, f := range p.plan.Files {
		if f.Err != nil {
			return []string{fmt.Sprintf("no point could be read: %v", f.Err)}
		}
	}
	return []string{"the files hold no points"}
}

// corners asks the surface at the corners of the bounds.
func (p *planner) corners() {
	x := []float64{p.tally.bounds[0].low, p.tally.bounds[0].high, p.tally.bounds[0].low, p.tally.bounds[0].high}
	y := []float64{p.tally.bounds[1].low, p.tally.bounds[1].low, p.tally.bounds[1].high, p.tally.bounds[1].high}
	planes := correct.Planes{Level: make([]float64, 4), SlopeX: make([]float64, 4), SlopeY: make([]float64, 4)}
	inMetres := func(v []float64) []float64 {
		v = slices.Clone(v)
		scale(v, p.survey.plan)
		return v
	}
	utc, none, zone := make([]float64, 4), []float64{math.NaN(), math.NaN(), math.NaN(), math.NaN()}, make([]int32, 4)
	if p.surface.timed {
		var at float64
		at, p.plan.At = p.moment(p.tally.utc(p.survey))
		fill(utc, at)
	}
	p.fillZones(zone, x, y)
	p.surface.fill(planes, inMetres(x), inMetres(y), moments{none, utc}, zone, none)
	level := planes.Level
	scale(level, 1/p.height)
	for i := range p.plan.Corners {
		p.plan.Corners[i] = Corner{x[i], y[i], level[i]}
	}
}
