package pipeline

import (
	"fmt"
	"strconv"
	"strings"

	"bentray/correct"
	"bentray/io/cloud"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// CSV decimals of what is not a length.
const (
	indexDecimals = 9
	slopeDecimals = 9
	angleDecimals = 5
)

// layout is what one file's output gains, and where each column that differs
// from row to row stands among the added ones (-1: it has no column of its own).
// A row's class is its outcome.
type layout struct {
	cloud.Layout
	depth, waterLevel, entryLevel int
	slope                         [2]int
	incidence, refraction         int
	origin                        [3]int
}

// newLayout lays out the output of a file with these columns.
func newLayout(s *survey, columns []cloud.Column, r *reading) (*layout, error) {
	l := &layout{waterLevel: -1, entryLevel: -1, slope: [2]int{-1, -1}, incidence: -1, refraction: -1, origin: [3]int{-1, -1, -1}}
	l.Decimals = s.job.Output.Decimals
	l.Moved = make([]bool, correct.NumOutcomes)
	l.Moved[correct.Corrected] = true
	l.XYZ = r.xyz
	for k, i := range r.xyz {
		l.RawNames[k] = columns[i].Name + "_raw"
	}
	l.depth = l.byRow("depth", l.Decimals)
	if s.job.Output.Provenance == job.Lean {
		l.label("outcome", everyPoint, correct.Outcome.String)
	} else {
		l.addSurface(s)
		l.addOutcome(s)
		l.addOptics(s)
		if r.originByTime() {
			l.addOrigins()
		}
	}
	l.constantLabel("run", everyPoint, s.run[:receipt.ShortLength])
	return l, l.checkNames(columns)
}

func (l *layout) addSurface(s *survey) {
	surface := s.job.Surface
	switch {
	case surface.Level != nil:
		l.constant("water_level", levelKnown, *surface.Level)
		l.constant("entry_level", solved, *surface.Level)
	default:
		l.waterLevel = l.byRow("water_level", l.Decimals)
		l.entryLevel = l.byRow("entry_level", l.Decimals)
	}
	slopeX, slopeY := 0.0, 0.0
	if surface.Plane != nil {
		slopeX, slopeY = surface.Plane.SlopeX, surface.Plane.SlopeY
	}
	l.constant("slope_x", traced, slopeX)
	l.constant("slope_y", traced, slopeY)
}

func (l *layout) addOutcome(s *survey) {
	l.label("outcome", everyPoint, correct.Outcome.String)
	l.constantLabel("model", ruled, s.job.Rays.Model)
	l.Added = append(l.Added, cloud.Added{Name: "ray_count", Type: cloud.Count, ByClass: noValue()})
	if s.job.Rays.Model == job.Pulse {
		l.Added[len(l.Added)-1].ByClass = byOutcome(traced, cloud.Value{Set: true, Number: 1, Text: "1"})
	}
	l.Added = append(l.Added, cloud.Added{Name: "view_source", Type: cloud.Label, ByClass: noValue()})
}

func (l *layout) addOptics(s *survey) {
	pulse := s.job.Rays.Model == job.Pulse
	if pulse {
		l.incidence = l.byRow("incidence_deg", angleDecimals)
		l.refraction = l.byRow("refraction_deg", angleDecimals)
	} else {
		l.Added = append(l.Added, cloud.Added{Name: "incidence_deg", ByClass: noValue()}, cloud.Added{Name: "refraction_deg", ByClass: noValue()})
	}
	l.index("n_air", s.optics.airPhase)
	l.index("n_water", s.optics.waterPhase)
	if pulse {
		l.index("ng_air", s.optics.airGroup)
		l.index("ng_water", s.optics.waterGroup)
	}
	l.constant("temperature", traced, s.job.Water.Temperature)
	l.constant("salinity", traced, s.job.Water.Salinity)
	l.constantLabel("water_source", traced, "job")
}

func (l *layout) addOrigins() {
	for k, name := range []string{"origin_x", "origin_y", "origin_z"} {
		l.origin[k] = l.byRow(name, l.Decimals)
	}
}

// The outcomes that a column has a value for.
type outcomes func(correct.Outcome) bool

func everyPoint(correct.Outcome) bool { return true }

// ruled points have a ray model.
func ruled(o correct.Outcome) bool {
	return o != correct.Invalid && o != correct.NotSelected && o != correct.NoRule
}

// levelKnown points have a water level at their true position.
func levelKnown(o correct.Outcome) bool { return o == correct.Corrected || o == correct.Dry }

// solved points have an entry.
func solved(o correct.Outcome) bool { return o == correct.Corrected }

// traced points had all that it takes to trace their rays.
func traced(o correct.Outcome) bool {
	return o == correct.Corrected || o == correct.Grazing || o == correct.Unsolved
}

func (l *layout) byRow(name string, decimals int) int {
	l.Added = append(l.Added, cloud.Added{Name: name, Decimals: decimals})
	return len(l.Added) - 1
}

// constant adds a number that is given, with the digits that give it back.
func (l *layout) constant(name string, has outcomes, value float64) {
	text := strconv.FormatFloat(value, 'f', -1, 64)
	l.Added = append(l.Added, cloud.Added{Name: name, ByClass: byOutcome(has, cloud.Value{Set: true, Number: value, Text: text})})
}

// index adds a computed refractive index.
func (l *layout) index(name string, value float64) {
	text := strconv.FormatFloat(value, 'f', indexDecimals, 64)
	l.Added = append(l.Added, cloud.Added{Name: name, ByClass: byOutcome(traced, cloud.Value{Set: true, Number: value, Text: text})})
}

func (l *layout) constantLabel(name string, has outcomes, text string) {
	l.label(name, has, func(correct.Outcome) string { return text })
}

func (l *layout) label(name string, has outcomes, text func(correct.Outcome) string) {
	values := noValue()
	for o := range correct.NumOutcomes {
		if has(o) {
			values[o] = cloud.Value{Set: true, Text: text(o)}
		}
	}
	l.Added = append(l.Added, cloud.Added{Name: name, Type: cloud.Label, ByClass: values})
}

func noValue() []cloud.Value { return make([]cloud.Value, correct.NumOutcomes) }

func byOutcome(has outcomes, v cloud.Value) []cloud.Value {
	values := noValue()
	for o := range correct.NumOutcomes {
		if has(o) {
			values[o] = v
		}
	}
	return values
}

// checkNames refuses a file that has a column which its output would gain.
func (l *layout) checkNames(columns []cloud.Column) error {
	names := append([]string{}, l.RawNames[:]...)
	for _, a := range l.Added {
		names = append(names, a.Name)
	}
	for _, name := range names {
		for _, c := range columns {
			if strings.EqualFold(c.Name, name) {
				return fmt.Errorf("the file already has a column %q, which bentray would add; rename it there, or take the raw cloud if this file is an output", c.Name)
			}
		}
	}
	return nil
}
