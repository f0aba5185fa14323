package job

import (
	"fmt"
	"os"
	"path/filepath"
)

// Values of the job's keys that take one of a few words.
const (
	Metre      = "m"
	Foot       = "ft"    // international, 0.3048 m
	SurveyFoot = "us-ft" // 1200/3937 m

	Stop   = "stop"   // a row that cannot be read fails its file
	Divert = "divert" // such rows go to a file of their own

	GPSAdjusted = "gps-adjusted" // GPS seconds less 1e9 (LAS adjusted standard GPS time)
	GPSWeek     = "gps-week"     // seconds of Input.Week
	UTC         = "utc"          // seconds since 1970

	Full = "full" // all columns that tell how a point came about
	Lean = "lean" // the few that no one does without

	Vertical  = "vertical"  // depth times the ratio of indices, plan kept
	Pulse     = "pulse"     // a laser pulse, bent at its entry and shortened
	Multiview = "multiview" // a point of images, by the rays of the cameras that saw it

	Invert    = "invert"    // the exact inverse of what the survey software did
	Intersect = "intersect" // straight rays refracted and intersected again
	Average   = "average"   // the mean of the depths by each camera, plan kept

	Image = "image" // the cloud's rays were intersected by least squares in the images
	Angle = "angle" // by the angles between ray and point
	Equal = "equal" // by the distances to the rays

	InAir   = "air"   // cameras above the water look down into it
	InWater = "water" // cameras below the water look up out of it
)

// Job is a checked job file with all defaults applied. Its zero value is not a
// valid job.
type Job struct {
	Title   string  `toml:"title" json:"-"` // for people; takes no part in the result
	Input   Input   `toml:"input" json:"input"`
	Output  Output  `toml:"output" json:"output"`
	Select  Select  `toml:"select" json:"select,omitzero"`
	Water   Water   `toml:"water" json:"water"`
	Air     Air     `toml:"air" json:"air"`
	Light   Light   `toml:"light" json:"light,omitzero"`
	Surface Surface `toml:"surface" json:"surface"`
	Extent  Extent  `toml:"extent" json:"extent,omitzero"`

	// Sensors are at least one. [rays] alone is one without a name or condition.
	Sensors []Sensor `toml:"sensor" json:"sensor"`

	Limits Limits `toml:"limits" json:"limits"`

	Path string `toml:"-" json:"-"` // the job file, as given to Load or Parse
	Dir  string `toml:"-" json:"-"` // its folder, which relative paths start from
}

// Input says which clouds are read and how.
type Input struct {
	Files        []string          `toml:"files" json:"-"`                     // patterns, at least one; ** matches zero folders too
	Unit         string            `toml:"unit" json:"unit"`                   // of every length: Metre (default), Foot or SurveyFoot
	VerticalUnit string            `toml:"vertical_unit" json:"vertical_unit"` // of heights; default Unit
	BadRows      string            `toml:"bad_rows" json:"bad_rows"`           // Stop (default) or Divert
	Coarse       bool              `toml:"coarse" json:"coarse,omitempty"`     // accept Parquet FLOAT coordinates in steps above 1 mm; default false
	Time         string            `toml:"time" json:"time"`                   // scale of gps_time: GPSAdjusted (default), GPSWeek or UTC
	Week         *int              `toml:"week" json:"week,omitempty"`         // since 1980-01-06 without rollover; with GPSWeek always, else nil
	Columns      map[string]string `toml:"columns" json:"columns,omitempty"`   // role -> column, where the names differ
	CSV          CSV               `toml:"csv" json:"csv"`
}

// CSV says how CSV clouds begin. There are names just where there is no header.
type CSV struct {
	Header bool     `toml:"header" json:"header"`         // a header line; default true without Names
	Names  []string `toml:"names" json:"names,omitempty"` // column names from left to right, all different
}

// Output says where corrected clouds go and what is in them.
type Output struct {
	Folder     string `toml:"folder" json:"-"`
	Provenance string `toml:"provenance" json:"provenance"` // Full (default) or Lean
	Decimals   int    `toml:"decimals" json:"decimals"`     // of lengths in CSV, 0 to 9; default 4
}

// Select limits the correction to some points.
type Select struct {
	// Where maps a column to the values that are selected, each a float64 or a
	// string. Each list holds numbers first, ascending, without repeats. A point
	// is selected where all columns hold one of their values.
	Where map[string][]any `toml:"where" json:"where,omitempty"`
}

// Water is the water's state. A point takes that of its zone, else that of the
// stations, else temperature and salinity as given here.
type Water struct {
	Temperature  *float64 `toml:"temperature" json:"temperature,omitempty"` // degrees C (ITS-90); nil: stations or zones alone
	Salinity     *float64 `toml:"salinity" json:"salinity,omitempty"`       // practical salinity; nil just where Temperature is
	Formula      string   `toml:"formula" json:"formula"`                   // of the index; default quan-fry
	PressureDbar float64  `toml:"pressure_dbar" json:"pressure_dbar"`       // gauge, at the middle of the path; default 0
	Stations     string   `toml:"stations" json:"stations,omitempty"`       // a file of temperature and salinity by place; empty: none
	MaxGap       float64  `toml:"max_gap" json:"max_gap,omitempty"`         // s that a station's record holds beyond its ends; default 3600, and 0 without Stations
	Zones        string   `toml:"zones" json:"zones,omitempty"`             // a GeoJSON file of waters with values of their own; empty: none
}

// Air is the air's state at the survey. Each default is that of standard air.
type Air struct {
	Temperature float64 `toml:"temperature" json:"temperature"` // degrees C; default 15
	Pressure    float64 `toml:"pressure" json:"pressure"`       // hPa at the water; default 1013.25
	Humidity    float64 `toml:"humidity" json:"humidity"`       // percent, relative; default 0
	CO2         float64 `toml:"co2" json:"co2"`                 // ppm; default 450
}

// Light is the light that made the raw cloud.
type Light struct {
	Wavelength *float64 `toml:"wavelength" json:"wavelength,omitempty"` // nm in vacuum; nil where sensors differ in their default
}

// Extent limits the correction to water.
type Extent struct {
	Polygons string `toml:"polygons" json:"polygons"` // a GeoJSON file; empty where there is no limit
}

// Limits are the bounds beyond which a ray is not corrected.
type Limits struct {
	MaxIncidence float64 `toml:"max_incidence" json:"max_incidence"` // degrees from the surface normal, above 0 and below 90; default 60
}

// file is what a job file holds: a job whose only sensor may stand in [rays].
type file struct {
	Rays Rays `toml:"rays"`
	*Job
}

// Load reads and checks the job file at path. A fault of its content is an
// *Error or several joined, as from Parse; a file that cannot be read is the
// system's error, wrapped.
func Load(path string) (*Job, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("job file cannot be read: %w", err)
	}
	return Parse(path, data)
}

// Parse is Load for bytes at hand; path serves messages and relative paths. It
// reports all faults at once, as *Error values joined in line order, with
// those that have no line last.
func Parse(path string, data []byte) (*Job, error) {
	doc, err := readDocument(path, data)
	if err != nil {
		return nil, err
	}
	f := newFaults(path, doc.lines)
	content := &file{Job: newJob(path)}
	decode(f, content, doc.values)
	content.settleSensors(f)
	j := content.Job
	j.applyDefaults(f)
	j.check(f)
	if err := f.err(); err != nil {
		return nil, err
	}
	return j, nil
}

// Resolve returns a path of the job as seen from the working folder: relative
// ones start from the job file's folder.
func (j *Job) Resolve(p string) string {
	if filepath.IsAbs(p) {
		return p
	}
	return filepath.Join(j.Dir, p)
}
