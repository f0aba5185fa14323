package page

import (
	"bytes"
	"encoding/json"
	"fmt"
	"maps"
	"slices"
	"strings"

	"bentray/pipeline/job"
	"bentray/pipeline/quality"
	"bentray/pipeline/receipt"
)

// made says how some of the clouds were corrected.
type made struct {
	quality.Setting
	Facts []fact // what a reader wants to know first
	Keys  []fact // all settings, as keys of a job file
}

// ShortRun is the fingerprint as the column run has it.
func (m made) ShortRun() string { return m.Run[:min(len(m.Run), receipt.ShortLength)] }

// fact is a thing and what is said of it.
type fact struct{ Name, Text string }

func newMade(s quality.Setting) made {
	m := made{Setting: s, Keys: keys("", s.Job)}
	var j job.Job
	if err := json.Unmarshal(s.Job, &j); err != nil {
		m.Facts = []fact{{"Settings", "not readable: " + err.Error()}}
		return m
	}
	m.Facts = []fact{{"Rays", rays(&j)}, {"Water", water(&j, s.Ranges)}, {"Water surface", surface(&j)}, {"Air", air(&j)}}
	if j.Extent.Polygons != "" {
		m.Facts = append(m.Facts, fact{"Limited to", "the polygons of " + j.Extent.Polygons})
	}
	if text := reached(&j, s.Ranges); text != "" {
		m.Facts = append(m.Facts, fact{"Reached", text})
	}
	return m
}

// models say what a ray model is for.
var models = map[string]string{
	"vertical": "depths scaled straight down (vertical), plan kept: a quick look, without the course of the rays", "pulse": "airborne laser pulses (pulse)",
	"multiview": "images, by the rays of all cameras that saw a point (multiview)", "port": "underwater images through a flat port (port)", "sounding": "sonar (sounding)",
}

func rays(j *job.Job) string {
	var list []string
	for _, s := range j.Sensors {
		text, known := models[s.Rays.Model]
		if !known {
			text = s.Rays.Model
		}
		if s.Name != "" {
			text = s.Name + ": " + text
		}
		if s.Rays.Trajectory != "" {
			text += ", origins from " + s.Rays.Trajectory
		}
		if s.Rays.Cameras != "" {
			text += ", cameras of " + s.Rays.Cameras
		}
		if s.Rays.Solve != "" {
			text += ", solve = " + s.Rays.Solve
		}
		list = append(list, fmt.Sprintf("%s, light of %s nm", text, plain(j.Wavelength(s))))
	}
	return strings.Join(list, "; ")
}

func water(j *job.Job, ranges map[string][2]float64) string {
	var list []string
	w := j.Water
	if w.Zones != "" {
		list = append(list, "by zone from "+w.Zones)
	}
	if w.Stations != "" {
		list = append(list, "by station from "+w.Stations)
	}
	if w.Temperature != nil && w.Salinity != nil {
		text := fmt.Sprintf("%s °C, salinity %s", plain(*w.Temperature), plain(*w.Salinity))
		if len(list) > 0 {
			text = "elsewhere " + text
		}
		list = append(list, text)
	}
	for _, index := range []struct{ column, name string }{{"n_water", "phase index"}, {"ng_water", "group index"}} {
		if r, known := ranges[index.column]; known {
			list = append(list, index.name+" "+rangeText(r, 6))
		}
	}
	return strings.Join(append(list, "by "+w.Formula), ", ")
}

// reached is how deep and how oblique the corrected points are.
func reached(j *job.Job, ranges map[string][2]float64) string {
	var list []string
	if depth, known := ranges["depth"]; known {
		list = append(list, "depths of "+rangeText(depth, 2)+" "+j.Input.VerticalUnit)
	}
	if angle, known := ranges["incidence_deg"]; known {
		list = append(list, "incidence of "+rangeText(angle, 1)+" degrees")
	}
	return strings.Join(list, ", ")
}

func air(j *job.Job) string {
	return fmt.Sprintf("%s °C, %s hPa, %s %% humidity", plain(j.Air.Temperature), plain(j.Air.Pressure), plain(j.Air.Humidity))
}

func surface(j *job.Job) string {
	var list []string
	s, unit := j.Surface, " "+j.Input.VerticalUnit
	switch {
	case s.Level != nil:
		list = append(list, "one level, "+plain(*s.Level)+unit)
	case s.Column != "":
		list = append(list, "levels in the cloud's column "+s.Column)
	case s.Plane != nil && s.Plane.Waterline != "":
		list = append(list, "plane fitted to "+s.Plane.Waterline)
	case s.Plane != nil:
		list = append(list, plane(s.Plane, unit))
	case s.Profile != nil:
		list = append(list, "levels of "+s.Profile.Levels+" along the line of "+s.Profile.Centreline)
	case s.Grid != nil && s.Grid.Points != "":
		list = append(list, "grid by the surface points of "+s.Grid.Points)
	case s.Grid != nil:
		list = append(list, fmt.Sprintf("grid by the cloud's own points of class %v", s.Grid.Classes))
	}
	if s.Gauge != nil {
		list = append(list, "gauge "+s.Gauge.File)
	}
	if s.Separation != nil {
		list = append(list, "separation "+s.Separation.File)
	}
	if j.Water.Zones != "" {
		list = append(list, "levels of zones that have one")
	}
	return strings.Join(list, "; ")
}

// plane is a given one; the checks of a job see to it that all of it is there.
func plane(p *job.Plane, unit string) string {
	if p.Level == nil || p.SlopeX == nil || p.SlopeY == nil {
		return "plane"
	}
	return fmt.Sprintf("plane of the given level %s%s, slopes %s along x and %s along y", plain(*p.Level), unit, plain(*p.SlopeX), plain(*p.SlopeY))
}

// keys lists the settings below a key in alphabetical order, each with its path.
func keys(path string, data json.RawMessage) (list []fact) {
	var table map[string]json.RawMessage
	if json.Unmarshal(data, &table) == nil && table != nil {
		for _, name := range slices.Sorted(maps.Keys(table)) {
			list = append(list, keys(strings.TrimPrefix(path+"."+name, "."), table[name])...)
		}
		return list
	}
	var tables []map[string]json.RawMessage
	var items []json.RawMessage
	if json.Unmarshal(data, &tables) == nil && len(tables) > 0 && json.Unmarshal(data, &items) == nil {
		for i, item := range items {
			list = append(list, keys(fmt.Sprintf("%s.%d", path, i+1), item)...)
		}
		return list
	}
	var text bytes.Buffer
	if err := json.Compact(&text, data); err != nil {
		return []fact{{path, err.Error()}}
	}
	return []fact{{path, text.String()}}
}
