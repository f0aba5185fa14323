package job

import (
	"fmt"
	"maps"
	"slices"
)

func (j *Job) checkSensors(f *faults) {
	switch {
	case f.isTold(sensorTable):
		return
	case f.has(sensorTable) && f.has("rays"):
		f.addAt(max(f.line(sensorTable), f.line("rays")), fmt.Sprintf(
			"the file has [rays] (line %d) and [[sensor]] (line %d), want one of them; the rays of a sensor stand in [sensor.rays]",
			f.line("rays"), f.line(sensorTable)))
	case f.has(sensorTable) && len(j.Sensors) == 0:
		f.add(sensorTable, "is empty, want at least one table")
	}
	for i := range j.Sensors[:min(len(j.Sensors), maxSensors+1)] { // the one too many is told of
		if f.has(sensorTable) {
			j.checkSensor(f, i)
		}
		j.Sensors[i].Rays.check(f, f.raysKey(i))
	}
}

// checkSensor reports what is wrong with a sensor but for its rays.
func (j *Job) checkSensor(f *faults, i int) {
	s, key := &j.Sensors[i], sensorKey(i)
	if i == maxSensors {
		f.addTable(key, "is there %d times, want at most %d", len(j.Sensors), maxSensors)
	}
	f.requireText(key+".name", s.Name, "a name")
	checkWhere(f, key+".where", s.Where)
	for k, other := range j.Sensors[:i] {
		if s.Name == other.Name {
			f.add(key+".name", "is %q, as is that of line %d, want different names", s.Name, f.line(sensorKey(k)+".name"))
		}
	}
	if first := slices.IndexFunc(j.Sensors[:i], func(s Sensor) bool { return len(s.Where) == 0 }); first >= 0 && !f.isTold(sensorKey(first)+".where") {
		f.addTable(key, "can never match, because that of line %d has no where and takes all points; give it a where, or put it last", f.line(sensorKey(first)))
	}
}

// checkWhere reports conditions without values, and sorts their values.
func checkWhere(f *faults, table string, where map[string][]any) {
	if f.has(table) && len(where) == 0 {
		f.add(table, "has no column, want lists of values by column, such as classification = [2]")
	}
	for _, column := range slices.Sorted(maps.Keys(where)) {
		switch key := table + "." + column; {
		case f.isTold(key):
		case len(where[column]) == 0:
			f.add(key, "is empty, want a list of values, such as [2, 9]")
		default:
			where[column] = normalized(where[column])
		}
	}
}

// keysOf are the keys of rays that one model alone looks at.
var keysOf = []struct {
	model string
	keys  []string
}{
	{Pulse, []string{"trajectory", "max_gap", "range_index"}},
	{Multiview, []string{"cameras", "solve", "residual", "max_off_nadir", "camera_medium"}},
}

// check reports what is wrong with the rays of the table named.
func (r *Rays) check(f *faults, table string) {
	key := func(name string) string { return join(table, name) }
	f.require(key("model"), `"vertical", "pulse" or "multiview"`)
	f.oneOf(key("model"), r.Model, Vertical, Pulse, Multiview)
	if f.isTold(key("model")) {
		return
	}
	for _, own := range keysOf {
		for _, name := range own.keys {
			if own.model != r.Model {
				f.noEffect(key(name), fmt.Sprintf("with model %q", r.Model), fmt.Sprintf("use model = %q", own.model))
			}
		}
	}
	switch r.Model {
	case Pulse:
		r.checkPulse(f, key)
	case Multiview:
		r.checkMultiview(f, key)
	}
}

func (r *Rays) checkPulse(f *faults, key func(string) string) {
	f.notBlank(key("trajectory"), r.Trajectory, "a file")
	if !f.has(key("trajectory")) {
		f.noEffect(key("max_gap"), "without trajectory", "name the trajectory")
	}
	f.above0(key("max_gap"), r.MaxGap, " seconds")
	if n := r.RangeIndex; n != nil && (*n < 1 || *n > 1.01) {
		f.add(key("range_index"), "is %s, want 1 to 1.01, the index of air that the ranges were made with", format(*n))
	}
}

func (r *Rays) checkMultiview(f *faults, key func(string) string) {
	f.requireText(key("cameras"), r.Cameras, "a file of cameras: camera, x, y, z and, where known, their rotations and images")
	f.oneOf(key("solve"), r.Solve, Invert, Intersect, Average)
	f.oneOf(key("residual"), r.Residual, Image, Angle, Equal)
	f.oneOf(key("camera_medium"), r.CameraMedium, InAir, InWater)
	if a := r.MaxOffNadir; f.has(key("max_off_nadir")) && !(a > 0 && a < 90) {
		f.add(key("max_off_nadir"), "is %s, want degrees above 0 and below 90", format(a))
	}
}
