package pipeline

import (
	"cmp"
	"fmt"
	"slices"
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
	waterDecimals = 4 // temperature and salinity that are interpolated
)

// layout is what one file's output gains, and where each column that differs
// from row to row stands among the added ones (-1: it has no column of its own).
// A row's class tells its sensor and its outcome.
type layout struct {
	cloud.Layout
	sensors                       []*sensor
	viewSource                    string // where the views of a camera's points come from: a column of the file, or ""
	rayCount                      int
	depth, waterLevel, entryLevel int
	slope                         [2]int
	incidence, refraction         int
	water, waterGroup             int
	temperature, salinity, source int
	origin                        [3]int
	tracedOnly                    []int // columns by row that only traced points have
	wateredOnly                   []int // the same for points whose water was looked up
	rayedOnly                     []int // the same for points whose rays were looked for
}

// newLayout lays out the output of a file with these columns.
func newLayout(s *survey, columns []cloud.Column, r *reading) (*layout, error) {
	l := &layout{
		sensors: s.sensors, rayCount: -1, depth: -1, waterLevel: -1, entryLevel: -1, slope: [2]int{-1, -1}, incidence: -1, refraction: -1,
		water: -1, waterGroup: -1, temperature: -1, salinity: -1, source: -1, origin: [3]int{-1, -1, -1},
	}
	if r.views >= 0 {
		l.viewSource = "column"
	}
	l.Decimals = s.job.Output.Decimals
	for range s.sensors {
		for o := range correct.NumOutcomes {
			l.Moved = append(l.Moved, o == correct.Corrected)
		}
	}
	l.XYZ = r.xyz
	for k, i := range r.xyz {
		l.RawNames[k] = columns[i].Name + "_raw"
	}
	l.depth = l.byRow("depth", l.Decimals)
	if s.job.Output.Provenance == job.Lean {
		l.addOutcome()
	} else {
		l.addSurface(s)
		l.addOutcome()
		l.addModel()
		l.addAngles()
		l.addIndices(s)
		l.addWater(s)
		l.addOrigins(s, columns)
	}
	l.label("run", everyPoint, func(*sensor, correct.Outcome) string { return s.run[:receipt.ShortLength] })
	return l, l.checkNames(columns)
}

func (l *layout) addSurface(s *survey) {
	f := &s.surface
	if f.isConstant() {
		l.constant("water_level", levelKnown, *s.job.Surface.Level)
		l.constant("entry_level", solved, *s.job.Surface.Level)
	} else {
		l.waterLevel = l.byRow("water_level", l.Decimals)
		l.entryLevel = l.byRow("entry_level", l.Decimals)
	}
	if f.curved || f.zoneLevel != nil {
		l.slope[0] = l.tracedByRow("slope_x", slopeDecimals)
		l.slope[1] = l.tracedByRow("slope_y", slopeDecimals)
		return
	}
	slopeX, slopeY := 0.0, 0.0
	if f.plane != nil {
		slopeX, slopeY = f.plane.SlopeX, f.plane.SlopeY
	}
	l.constant("slope_x", traced, slopeX)
	l.constant("slope_y", traced, slopeY)
}

func (l *layout) addOutcome() {
	l.label("outcome", everyPoint, func(sn *sensor, o correct.Outcome) string { return sn.nameOf(o) })
}

func (l *layout) addModel() {
	l.label("model", ruled, func(sn *sensor, _ correct.Outcome) string { return sn.Rays.Model })
	if slices.ContainsFunc(l.sensors, (*sensor).isMultiview) {
		l.rayCount = len(l.Added)
		l.rayedOnly = append(l.rayedOnly, l.rayCount)
		l.Added = append(l.Added, cloud.Added{Name: "ray_count", Type: cloud.Count})
	} else {
		l.byClass("ray_count", cloud.Count, func(sn *sensor, o correct.Outcome) cloud.Value {
			return cloud.Value{Set: sn.isPulse() && traced(o), Number: 1, Text: "1"}
		})
	}
	l.byClass("view_source", cloud.Label, func(sn *sensor, o correct.Outcome) cloud.Value {
		return cloud.Value{Set: sn.isMultiview() && rayed(o), Text: cmp.Or(l.viewSource, sn.viewRule())}
	})
}

func (l *layout) addAngles() {
	if slices.ContainsFunc(l.sensors, (*sensor).hasRays) {
		l.incidence = l.byRow("incidence_deg", angleDecimals)
		l.refraction = l.byRow("refraction_deg", angleDecimals)
		return
	}
	none := func(*sensor, correct.Outcome) cloud.Value { return cloud.Value{} }
	l.byClass("incidence_deg", cloud.Float, none)
	l.byClass("refraction_deg", cloud.Float, none)
}

func (l *layout) hasPulse() bool { return slices.ContainsFunc(l.sensors, (*sensor).isPulse) }

func (l *layout) addIndices(s *survey) {
	l.index("n_air", (*sensor).isAny, func(sn *sensor) float64 { return sn.airPhase })
	if s.isConstantWater() {
		l.index("n_water", (*sensor).isAny, func(sn *sensor) float64 { phase, _ := s.constantIndex(sn); return phase })
	} else {
		l.water = l.tracedByRow("n_water", indexDecimals)
	}
	if !l.hasPulse() {
		return
	}
	l.index("ng_air", (*sensor).isPulse, func(sn *sensor) float64 { return sn.airGroup })
	if s.isConstantWater() {
		l.index("ng_water", (*sensor).isPulse, func(sn *sensor) float64 { _, group := s.constantIndex(sn); return group })
	} else {
		l.waterGroup = l.tracedByRow("ng_water", indexDecimals)
	}
}

func (l *layout) addWater(s *survey) {
	if s.isConstantWater() {
		l.constant("temperature", traced, s.water.job.TemperatureC)
		l.constant("salinity", traced, s.water.job.Salinity)
		l.label("water_source", traced, func(*sensor, correct.Outcome) string { return s.water.sources[fromJob] })
		return
	}
	l.temperature = l.byRow("temperature", waterDecimals)
	l.salinity = l.byRow("salinity", waterDecimals)
	l.source = len(l.Added)
	l.Added = append(l.Added, cloud.Added{Name: "water_source", Type: cloud.Label, Names: s.water.sources})
	l.wateredOnly = append(l.wateredOnly, l.temperature, l.salinity, l.source)
}

// addOrigins adds the origins that come from a trajectory, unless the file has
// columns of origins: those stay as they are, used or not.
func (l *layout) addOrigins(s *survey, columns []cloud.Column) {
	if hasOriginColumns(s.job, columns) || !slices.ContainsFunc(l.sensors, func(sn *sensor) bool { return sn.trajectory != nil }) {
		return
	}
	for k, name := range originRoles {
		l.origin[k] = l.tracedByRow(name, l.Decimals)
	}
}

var originRoles = [3]string{"origin_x", "origin_y", "origin_z"}

func hasOriginColumns(j *job.Job, columns []cloud.Column) bool {
	for _, role := range originRoles {
		if i, err := cloud.FindRole(columns, role, j.Input.Columns); err != nil || i < 0 {
			return false
		}
	}
	return true
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

// rayed points had their rays looked for.
func rayed(o correct.Outcome) bool {
	return traced(o) || o == correct.NoOrigin || o == correct.NoWater || o == correct.OutOfRange || o == correct.FewRays
}

// watered points had their water looked up.
func watered(o correct.Outcome) bool { return traced(o) || o == correct.OutOfRange }

func (l *layout) byRow(name string, decimals int) int {
	l.Added = append(l.Added, cloud.Added{Name: name, Decimals: decimals})
	return len(l.Added) - 1
}

func (l *layout) tracedByRow(name string, decimals int) int {
	column := l.byRow(name, decimals)
	l.tracedOnly = append(l.tracedOnly, column)
	return column
}

// byClass adds a column with one value for each sensor and outcome.
func (l *layout) byClass(name string, t cloud.Type, value func(*sensor, correct.Outcome) cloud.Value) {
	var values []cloud.Value
	for _, sn := range l.sensors {
		for o := range correct.NumOutcomes {
			values = append(values, value(sn, o))
		}
	}
	l.Added = append(l.Added, cloud.Added{Name: name, Type: t, ByClass: values})
}

// constant adds a number that is given, with the digits that give it back.
func (l *layout) constant(name string, has outcomes, number float64) {
	v := cloud.Value{Set: true, Number: number, Text: strconv.FormatFloat(number, 'f', -1, 64)}
	l.byClass(name, cloud.Float, func(_ *sensor, o correct.Outcome) cloud.Value {
		if !has(o) {
			return cloud.Value{}
		}
		return v
	})
}

// index adds a computed refractive index of the sensors that have one.
func (l *layout) index(name string, has func(*sensor) bool, index func(*sensor) float64) {
	l.byClass(name, cloud.Float, func(sn *sensor, o correct.Outcome) cloud.Value {
		if !traced(o) || !has(sn) {
			return cloud.Value{}
		}
		n := index(sn)
		return cloud.Value{Set: true, Number: n, Text: strconv.FormatFloat(n, 'f', indexDecimals, 64)}
	})
}

func (l *layout) label(name string, has outcomes, text func(*sensor, correct.Outcome) string) {
	l.byClass(name, cloud.Label, func(sn *sensor, o correct.Outcome) cloud.Value {
		if !has(o) {
			return cloud.Value{}
		}
		return cloud.Value{Set: true, Text: text(sn, o)}
	})
}

// names lists the columns that the output gains.
func (l *layout) names() []string {
	names := slices.Clone(l.RawNames[:])
	for _, a := range l.Added {
		names = append(names, a.Name)
	}
	return names
}

// checkNames refuses a file that has a column which its output would gain.
func (l *layout) checkNames(columns []cloud.Column) error {
	for _, name := range l.names() {
		for _, c := range columns {
			if strings.EqualFold(c.Name, name) {
				return fmt.Errorf("the file already has a column %q, which bentray would add; rename it there, or take the raw cloud if this file is an output", c.Name)
			}
		}
	}
	return nil
}
