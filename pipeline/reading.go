package pipeline

import (
	"fmt"
	"maps"
	"slices"
	"strconv"

	"bentray/io/cloud"
	"bentray/pipeline/job"
)

// reading says which of a file's columns are decoded, and where each stands in
// a chunk's numbers or texts; -1 where it is not read.
type reading struct {
	request    cloud.Request
	xyz        [3]int // positions in the file, not in the chunk; x y z are the chunk's first three numbers
	time       int
	timestamps bool // gps_time holds dates and times, not numbers on the job's scale
	origin     [3]int
	level      int // the surface's column
	views      int // the cameras that saw each point
	where      []condition
	sensors    [][]condition // by sensor
}

// condition selects the points whose value is one of a list.
type condition struct {
	column  int // in the chunk's texts where texts is set, else in its numbers
	numbers []float64
	texts   map[string]bool
}

// newReading finds the columns that a job needs in a file.
func newReading(s *survey, columns []cloud.Column) (*reading, error) {
	j := s.job
	r := &reading{time: -1, origin: [3]int{-1, -1, -1}, level: -1, views: -1}
	var err error
	if r.xyz, err = cloud.Coordinates(columns, j.Input.Columns); err != nil {
		return nil, err
	}
	for _, i := range r.xyz {
		r.number(i)
	}
	if err := r.findTime(s, columns); err != nil {
		return nil, err
	}
	if err := r.findOrigins(s, columns); err != nil {
		return nil, err
	}
	if err := r.findViews(s, columns); err != nil {
		return nil, err
	}
	if j.Surface.Column != "" {
		if r.level, err = r.needLength(s, columns, j.Surface.Column, "[surface] column names it", s.height); err != nil {
			return nil, err
		}
	}
	if r.where, err = r.conditions(j, columns, j.Select.Where, "[select] where names it"); err != nil {
		return nil, err
	}
	for _, sn := range s.sensors {
		where, err := r.conditions(j, columns, sn.Where, fmt.Sprintf("where of sensor %q names it", sn.Name))
		if err != nil {
			return nil, err
		}
		r.sensors = append(r.sensors, where)
	}
	return r, nil
}

// findTime finds gps_time where something depends on it; it must be there where
// nothing else tells the time.
func (r *reading) findTime(s *survey, columns []cloud.Column) (err error) {
	why := s.whyTime()
	r.time = -1
	if why == "" && s.job.Surface.Grid == nil && !s.surface.timed {
		return nil
	}
	i, err := cloud.FindRole(columns, "gps_time", s.job.Input.Columns)
	switch {
	case err != nil:
		return err
	case i < 0 && why != "":
		return missing(columns, "gps_time", why)
	case i >= 0:
		r.time, r.timestamps = r.number(i), isTimestamp(columns[i])
		r.request.Steps[r.time] = finestTime
	}
	return nil
}

// whyTime says why a cloud must have times, or nothing.
func (s *survey) whyTime() string {
	for _, sn := range s.sensors {
		if sn.Rays.Trajectory != "" {
			return "the trajectory is looked up by it"
		}
	}
	switch {
	case s.surface.timed && s.surface.at == nil:
		return "the gauge is looked up by it; or give [surface.gauge] at"
	case s.water.stations != nil && s.water.stations.HasTimes() && s.surface.at == nil:
		return "the stations are looked up by it"
	}
	return ""
}

// findOrigins finds what gives a pulse its ray origin, where no trajectory does.
func (r *reading) findOrigins(s *survey, columns []cloud.Column) (err error) {
	if !slices.ContainsFunc(s.sensors, func(sn *sensor) bool { return sn.isPulse() && sn.trajectory == nil }) {
		return nil
	}
	units := [3]float64{s.plan, s.plan, s.height}
	for k, role := range originRoles {
		if r.origin[k], err = r.needLength(s, columns, role, "a pulse needs its ray origin; or give [rays] trajectory", units[k]); err != nil {
			return err
		}
	}
	return nil
}

// findViews finds the column of camera ids, where images made points and the file
// has one. Its texts are checked against every sensor's cameras.
func (r *reading) findViews(s *survey, columns []cloud.Column) error {
	if !s.hasMultiview() {
		return nil
	}
	i, err := cloud.FindRole(columns, "views", s.job.Input.Columns)
	if err != nil {
		return err
	}
	if i < 0 {
		return s.checkImages()
	}
	r.views = r.text(i)
	r.request.Checks[r.views] = s.checkViews
	return nil
}

// conditions turns a table column -> values into conditions.
func (r *reading) conditions(j *job.Job, columns []cloud.Column, where map[string][]any, why string) ([]condition, error) {
	var list []condition
	for _, name := range slices.Sorted(maps.Keys(where)) {
		i, err := cloud.FindRole(columns, name, j.Input.Columns)
		if err != nil {
			return nil, err
		}
		if i < 0 {
			return nil, missing(columns, name, why)
		}
		list = append(list, r.condition(i, where[name]))
	}
	return list, nil
}

// condition compares as numbers where all values are numbers, else as texts.
func (r *reading) condition(column int, values []any) condition {
	var c condition
	for _, v := range values {
		number, ok := v.(float64)
		if !ok {
			return r.textCondition(column, values)
		}
		c.numbers = append(c.numbers, number)
	}
	c.column = r.number(column)
	return c
}

func (r *reading) textCondition(column int, values []any) condition {
	c := condition{column: r.text(column), texts: map[string]bool{}}
	for _, v := range values {
		switch v := v.(type) {
		case string:
			c.texts[v] = true
		case float64:
			c.texts[strconv.FormatFloat(v, 'f', -1, 64)] = true
		}
	}
	return c
}

// number asks for a column as numbers and returns its place in the chunk.
func (r *reading) number(column int) int {
	if i := slices.Index(r.request.Numbers, column); i >= 0 {
		return i
	}
	r.request.Numbers, r.request.Steps = append(r.request.Numbers, column), append(r.request.Steps, 0)
	return len(r.request.Numbers) - 1
}

// text asks for a column as texts and returns its place in the chunk.
func (r *reading) text(column int) int {
	if i := slices.Index(r.request.Texts, column); i >= 0 {
		return i
	}
	r.request.Texts, r.request.Checks = append(r.request.Texts, column), append(r.request.Checks, nil)
	return len(r.request.Texts) - 1
}

// need asks for a column that the job cannot do without, by role or name.
func (r *reading) need(j *job.Job, columns []cloud.Column, name, why string) (int, error) {
	i, err := cloud.FindRole(columns, name, j.Input.Columns)
	if err != nil {
		return -1, err
	}
	if i < 0 {
		return -1, missing(columns, name, why)
	}
	return r.number(i), nil
}

// needLength asks for a column of lengths in a unit of so many metres.
func (r *reading) needLength(s *survey, columns []cloud.Column, name, why string, unit float64) (int, error) {
	n, err := r.need(s.job, columns, name, why)
	if err != nil {
		return -1, err
	}
	r.request.Steps[n] = finestLength / unit
	return n, checkLength(columns[r.request.Numbers[n]])
}

func missing(columns []cloud.Column, name, why string) error {
	return fmt.Errorf("no column %q (%s); the columns are %s", name, why, cloud.Names(columns))
}
