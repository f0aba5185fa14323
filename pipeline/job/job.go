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

	Vertical = "vertical" // depth times the ratio of indices, plan kept
	Pulse    = "pulse"    // a laser pulse, bent at its entry and shortened
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
	Light   Light   `toml:"light" json:"light"`
	Surface Surface `toml:"surface" json:"surface"`
	Extent  Extent  `toml:"extent" json:"extent,omitzero"`
	Rays    Rays    `toml:"rays" json:"rays"`
	Limits  Limits  `toml:"limits" json:"limits"`

	Path string `toml:"-" json:"-"` // the job file, as given to Load or Parse
	Dir  string `toml:"-" json:"-"` // its folder, which relative paths start from
}

// Input says which clouds are read and how.
type Input struct {
	Files        []string          `toml:"files" json:"-"`                     // patterns, at least one; ** matches zero folders too
	Unit         string            `toml:"unit" json:"unit"`                   // of every length: Metre (default), Foot or SurveyFoot
	VerticalUnit string            `toml:"vertical_unit" json:"vertical_unit"` // of heights; default Unit
	BadRows      string            `toml:"bad_rows" json:"bad_rows"`           // Stop (default) or Divert
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

// Water is the water's state, one for all points.
type Water struct {
	Temperature  float64 `toml:"temperature" json:"temperature"`     // degrees C (ITS-90)
	Salinity     float64 `toml:"salinity" json:"salinity"`           // practical salinity
	Formula      string  `toml:"formula" json:"formula"`             // of the index; default quan-fry
	PressureDbar float64 `toml:"pressure_dbar" json:"pressure_dbar"` // gauge, at the middle of the path; default 0
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
	Wavelength float64 `toml:"wavelength" json:"wavelength"` // nm in vacuum; default 532 for Pulse, 550 for Vertical
}

// Surface is the water surface: exactly one of its fields is set.
type Surface struct {
	Level  *float64 `toml:"level" json:"level,omitempty"`   // one elevation
	Column string   `toml:"column" json:"column,omitempty"` // the cloud's column that holds it
	Plane  *Plane   `toml:"plane" json:"plane,omitempty"`
}

// Plane is a sloping water surface. All of its keys are required.
type Plane struct {
	Level  float64    `toml:"level" json:"level"`     // elevation at At
	At     [2]float64 `toml:"at" json:"at"`           // plan position x, y
	SlopeX float64    `toml:"slope_x" json:"slope_x"` // rise over run along x, both in one unit
	SlopeY float64    `toml:"slope_y" json:"slope_y"` // the same along y
}

// Extent limits the correction to water.
type Extent struct {
	Polygons string `toml:"polygons" json:"polygons"` // a GeoJSON file; empty where there is no limit
}

// Rays says how light went between the ray origin and the points.
type Rays struct {
	Model string `toml:"model" json:"model"` // Vertical or Pulse

	// The rest is for Pulse alone.
	Trajectory string   `toml:"trajectory" json:"trajectory,omitempty"`   // a file of ray origins by time; empty: the cloud's origin columns
	MaxGap     float64  `toml:"max_gap" json:"max_gap,omitempty"`         // s between its records at most; default 1, and 0 without Trajectory
	RangeIndex *float64 `toml:"range_index" json:"range_index,omitempty"` // the index the ranges were made with, 1 to 1.01; nil: group index of the job's air
}

// Limits are the bounds beyond which a ray is not corrected.
type Limits struct {
	MaxIncidence float64 `toml:"max_incidence" json:"max_incidence"` // degrees from the surface normal, above 0 and below 90; default 60
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
	j := newJob(path)
	decode(f, j, doc.values)
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
