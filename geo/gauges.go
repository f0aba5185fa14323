package geo

import (
	"errors"
	"fmt"
	"math"
)

// GaugeRecords are the records of one or several gauges, as the rows of a file have
// them; the columns have one length or, where optional, are nil.
type GaugeRecords struct {
	UTC   []float64 // s since 1970, POSIX
	Level []float64 // m above the gauge's zero

	Name []string  // which gauge, optional; without it one at each position
	X, Y []float64 // m, where it is, optional for a single gauge
}

// Gauges gives the level of the water over time from one or several tide or river
// gauges. It does not change once made, so goroutines may share it.
type Gauges struct {
	gauges       []gauge
	zero, maxGap float64
}

// gauge is one place with its levels (m above its zero) over time.
type gauge struct {
	x, y  float64
	level []float64
	timeline
}

// NewGauges returns the gauges with the records given, whose zero is at the height
// zero (m) in the cloud's heights. A gauge has no level between records more than
// maxGap (s) apart; +Inf joins all. The columns are copied. It panics if their
// lengths differ.
//
// Errors: no records; a gauge with fewer than 2; several gauges without positions;
// zero not finite; maxGap not above 0; and, as *RecordError, a value that is not
// finite, a time that repeats or comes before another of its gauge, an empty name, a
// name at two places, a place with two names.
func NewGauges(r GaugeRecords, zero, maxGap float64) (*Gauges, error) {
	r.checkLengths()
	if err := checkMaxGap(maxGap); err != nil {
		return nil, err
	}
	if !isFinite(zero) {
		return nil, fmt.Errorf("zero of the gauge is %v, want its height in m", zero)
	}
	sites, err := groupSites("gauge", len(r.UTC), r.Name, r.X, r.Y)
	if err != nil {
		return nil, err
	}
	if len(sites) == 0 {
		return nil, errors.New("there are no gauge records, want at least 2")
	}
	if len(sites) > 1 && r.X == nil {
		return nil, fmt.Errorf("there are %d gauges without positions, want x and y with every record", len(sites))
	}
	g := &Gauges{gauges: make([]gauge, len(sites)), zero: zero, maxGap: maxGap}
	for k := range sites {
		if g.gauges[k], err = r.gauge(&sites[k]); err != nil {
			return nil, err
		}
	}
	return g, nil
}

// checkLengths panics unless the columns have one length or, where optional, are nil.
func (r *GaugeRecords) checkLengths() {
	n := len(r.UTC)
	if len(r.Level) != n || r.Name != nil && len(r.Name) != n || (r.X == nil) != (r.Y == nil) ||
		r.X != nil && (len(r.X) != n || len(r.Y) != n) {
		panic(errLengths)
	}
}

// checkRow returns what is wrong with the values of a row.
func (r *GaugeRecords) checkRow(row int) error {
	switch {
	case !isFinite(r.UTC[row]):
		return errors.New("time is empty or not finite, want a time in every record")
	case !isFinite(r.Level[row]):
		return errors.New("level is empty or not finite, want a level in every record")
	}
	return nil
}

// gauge returns the gauge at a site.
func (r *GaugeRecords) gauge(s *site) (gauge, error) {
	g := gauge{x: s.x, y: s.y}
	var utc []float64
	for _, row := range s.rows {
		if err := r.checkRow(row); err != nil {
			return gauge{}, &RecordError{Index: row, Err: err}
		}
		if n := len(utc); n > 0 {
			if err := checkRise(utc[n-1], r.UTC[row]); err != nil {
				return gauge{}, &RecordError{Index: row, Err: fmt.Errorf("%s: %w", s.label("gauge"), err)}
			}
		}
		utc, g.level = append(utc, r.UTC[row]), append(g.level, r.Level[row])
	}
	if len(utc) < 2 {
		return gauge{}, fmt.Errorf("%s has 1 record, want at least 2", s.label("gauge"))
	}
	g.timeline = newTimeline(utc)
	return g, nil
}

// Add adds the level of the water (m, in the cloud's heights) at each plan position
// x, y (m) and time utc (s since 1970, POSIX) to level (m), which holds the surface
// that the gauges lie over, or 0. level becomes NaN where there is none.
//
// A gauge's level is linear between its records and exact at them. It has none
// before the first and after the last record, in a gap and where utc is NaN. Several
// gauges are weighted by inverse distance (power 1, so linear on the line between
// two); within 1 mm of a gauge that has a level, it is that gauge's alone. Those
// without a level at the time take no part, which makes a step in the level at the
// ends of their records and gaps (Recording counts them). The slope between gauges, their difference over
// their distance and rarely above 1e-5, is left out.
//
// The slices have one length (otherwise it panics); with a single gauge, x and y
// are not looked at and may be nil. For a cloud without times, fill utc with one.
// The cost is that of a look per gauge, for times in any order.
func (g *Gauges) Add(level, x, y, utc []float64) {
	if len(utc) != len(level) {
		panic(errLengths)
	}
	if len(g.gauges) == 1 {
		for i := range level {
			level[i] += g.zero + g.gauges[0].at(utc[i], g.maxGap)
		}
		return
	}
	if len(x) != len(level) || len(y) != len(level) {
		panic(errLengths)
	}
	for i := range level {
		level[i] += g.zero + g.mean(x[i], y[i], utc[i])
	}
}

// Len returns how many gauges there are.
func (g *Gauges) Len() int { return len(g.gauges) }

// Recording returns how many of the gauges have a level at a time (s since 1970, POSIX).
func (g *Gauges) Recording(utc float64) int {
	n := 0
	for k := range g.gauges {
		if level := g.gauges[k].at(utc, g.maxGap); level == level {
			n++
		}
	}
	return n
}

// mean returns the weighted mean of the gauges' levels, NaN where none has one.
func (g *Gauges) mean(x, y, utc float64) float64 {
	at := math.NaN() // of the gauge that the point is at
	sum, weights := 0.0, 0.0
	for k := range g.gauges {
		one := g.gauges[k].at(utc, g.maxGap)
		if math.IsNaN(one) {
			continue
		}
		dx, dy := x-g.gauges[k].x, y-g.gauges[k].y
		distance := math.Sqrt(dx*dx + dy*dy)
		if distance < atPlace {
			at = one
			continue
		}
		sum += one / distance
		weights += 1 / distance
	}
	if !math.IsNaN(at) {
		return at
	}
	return sum / weights
}

// at returns the gauge's level at a time. The weight is taken from differences, so a
// time near 1.7e9 s loses nothing more.
func (g *gauge) at(utc, maxGap float64) float64 {
	if !g.holds(utc) {
		return math.NaN()
	}
	k := g.before(utc)
	step := utc - g.utc[k]
	if step == 0 {
		return g.level[k]
	}
	gap := g.utc[k+1] - g.utc[k]
	if gap > maxGap {
		return math.NaN()
	}
	return g.level[k] + step/gap*(g.level[k+1]-g.level[k])
}
