package job

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

// least is the shortest job: all that has no default.
const least = `input.files = ["raw/*.csv"]
output.folder = "true"
water = { temperature = 12, salinity = 0 }
surface.level = 0.42
rays.model = "vertical"
`

func parse(t *testing.T, text string) *Job {
	t.Helper()
	j, err := Parse("jobs/job.toml", []byte(text))
	if err != nil {
		t.Fatalf("job is refused: %v\n%s", err, text)
	}
	return j
}

func ptr[T any](v T) *T { return &v }

func TestParseAppliesDefaults(t *testing.T) {
	want := &Job{
		Input: Input{
			Files: []string{"raw/*.csv"}, Unit: "m", VerticalUnit: "m", BadRows: "stop",
			Time: "gps-adjusted", CSV: CSV{Header: true},
		},
		Output:  Output{Folder: "true", Provenance: "full", Decimals: 4},
		Water:   Water{Temperature: ptr(12.0), Salinity: ptr(0.0), Formula: "quan-fry"},
		Air:     Air{Temperature: 15, Pressure: 1013.25, Humidity: 0, CO2: 450},
		Light:   Light{Wavelength: ptr(550.0)},
		Surface: Surface{Level: ptr(0.42)},
		Sensors: []Sensor{{Rays: Rays{Model: "vertical"}}},
		Limits:  Limits{MaxIncidence: 60},
		Path:    "jobs/job.toml",
		Dir:     "jobs",
	}
	if got := parse(t, least); !reflect.DeepEqual(got, want) {
		t.Errorf("got  %+v\nwant %+v", got, want)
	}
}

func TestParseAppliesDefaultsOfMultiview(t *testing.T) {
	want := Rays{Model: "multiview", Cameras: "c.csv", Solve: "invert", MaxOffNadir: 45, CameraMedium: "air"}
	got := parse(t, strings.Replace(least, "vertical", "multiview", 1)+"rays.cameras = 'c.csv'\n")
	if r := got.Sensors[0].Rays; r != want {
		t.Errorf("got  %+v\nwant %+v", r, want)
	}
	if nm := *got.Light.Wavelength; nm != 550 {
		t.Errorf("wavelength is %v nm, want 550", nm)
	}
}

func TestLoadReadsEveryKey(t *testing.T) {
	want := &Job{
		Title: "Lantern Cove, spring flight",
		Input: Input{
			Files: []string{"raw/**/*.parquet", "raw/*.csv"}, Unit: "us-ft", VerticalUnit: "ft", BadRows: "divert", Coarse: true,
			Time: "gps-week", Week: ptr(2397),
			Columns: map[string]string{"x": "easting", "y": "northing"},
			CSV:     CSV{Header: false, Names: []string{"easting", "northing", "z", "gps_time", "classification"}},
		},
		Output:  Output{Folder: "true", Provenance: "lean", Decimals: 3},
		Select:  Select{Where: map[string][]any{"classification": {2.0, 9.0, "unknown"}, "flight": {"A"}}},
		Water:   Water{Temperature: ptr(17.5), Salinity: ptr(34.9), Formula: "millard-seaver", PressureDbar: 2},
		Air:     Air{Temperature: 18, Pressure: 1009.5, Humidity: 60, CO2: 420},
		Light:   Light{Wavelength: ptr(515.0)},
		Surface: Surface{Plane: &Plane{Level: ptr(1.4), At: &[2]float64{1250000, 640000.5}, SlopeX: ptr(1e-5), SlopeY: ptr(-2e-5)}},
		Extent:  Extent{Polygons: "water.geojson"},
		Sensors: []Sensor{{Rays: Rays{Model: "pulse", Trajectory: "flight.csv", MaxGap: 0.5, RangeIndex: ptr(1.00029)}}},
		Limits:  Limits{MaxIncidence: 40},
		Path:    "testdata/cove.toml",
		Dir:     "testdata",
	}
	got, err := Load("testdata/cove.toml")
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got  %+v\nwant %+v", got, want)
	}
}

func TestLoadReadsLocalWater(t *testing.T) {
	want := &Job{
		Title: "Quillon reach, low water",
		Input: Input{
			Files: []string{"raw/**/*.csv"}, Unit: "m", VerticalUnit: "m", BadRows: "stop",
			Time: "gps-adjusted", CSV: CSV{Header: true},
		},
		Output: Output{Folder: "true", Provenance: "full", Decimals: 4},
		Water:  Water{Formula: "quan-fry", Stations: "sondes.csv", MaxGap: 1800, Zones: "waters.geojson"},
		Air:    Air{Temperature: 15, Pressure: 1013.25, CO2: 450},
		Surface: Surface{
			Profile:    &Profile{Centreline: "thalweg.geojson", Levels: "levels.csv", Reach: 60},
			Gauge:      &Gauge{File: "weir.csv", Zero: -31.25, MaxGap: 900, At: ptr(1934184600.5)}, // date -u -d 2031-04-17T09:30Z +%s
			Separation: &Separation{File: "geoid.csv"},
		},
		Sensors: []Sensor{
			{
				Name: "laser", Where: map[string][]any{"point_source_id": {11.0, 12.0}},
				Rays: Rays{Model: "pulse", Trajectory: "flight.csv", MaxGap: 1, RangeIndex: ptr(1.0003)},
			},
			{Name: "images", Rays: Rays{Model: "multiview", Cameras: "cameras.csv", Solve: "intersect", Residual: "angle", MaxOffNadir: 30, CameraMedium: "water"}},
		},
		Limits: Limits{MaxIncidence: 60},
		Path:   "testdata/reach.toml",
		Dir:    "testdata",
	}
	got, err := Load("testdata/reach.toml")
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got  %+v\nwant %+v", got, want)
	}
	if laser, images := got.Wavelength(got.Sensors[0]), got.Wavelength(got.Sensors[1]); laser != 532 || images != 550 {
		t.Errorf("wavelengths are %v and %v nm, want 532 and 550", laser, images)
	}
}

func TestParseAccepts(t *testing.T) {
	pulse := strings.Replace(least, "vertical", "pulse", 1)
	for _, c := range []struct {
		name, text string
		holds      func(*Job) bool
	}{
		{"pulse wavelength", pulse, func(j *Job) bool { return *j.Light.Wavelength == 532 }},
		{"pulse without trajectory has no gap", pulse, func(j *Job) bool { return j.Sensors[0].Rays.MaxGap == 0 && j.Sensors[0].Rays.RangeIndex == nil }},
		{"trajectory gap", pulse + `rays.trajectory = "t.csv"`, func(j *Job) bool { return j.Sensors[0].Rays.MaxGap == 1 }},
		{"heights follow the unit", least + `input.unit = "ft"`, func(j *Job) bool { return j.Input.VerticalUnit == "ft" }},
		{"air by the key", least + `air.humidity = 80`, func(j *Job) bool { return j.Air == Air{15, 1013.25, 80, 450} }},
		{"integer for a float", least + `limits.max_incidence = 45`, func(j *Job) bool { return j.Limits.MaxIncidence == 45 }},
		{"names without header key", least + `input.csv.names = ["x", "y", "z"]`, func(j *Job) bool { return !j.Input.CSV.Header }},
		{"names with header = false", least + "input.csv = { header = false, names = ['x', 'y', 'z'] }", func(j *Job) bool { return len(j.Input.CSV.Names) == 3 }},
		{"header written out", least + `input.csv.header = true`, func(j *Job) bool { return j.Input.CSV.Header }},
		{"x and y exchanged", least + `input.columns = { x = "y", y = "x" }`, func(j *Job) bool { return j.Input.Columns["x"] == "y" }},
		{"lat is fine for what is no coordinate", least + `input.columns.views = "lat"`, func(j *Job) bool { return j.Input.Columns["views"] == "lat" }},
		{"column surface", strings.Replace(least, "surface.level = 0.42", `surface.column = "tide"`, 1), func(j *Job) bool { return j.Surface.Column == "tide" && j.Surface.Level == nil }},
		{"level zero", strings.Replace(least, "0.42", "0", 1), func(j *Job) bool { return *j.Surface.Level == 0 }},
		{"range index of vacuum", pulse + `rays.range_index = 1`, func(j *Job) bool { return *j.Sensors[0].Rays.RangeIndex == 1 }},
		{"a dotted column", least + `select.where = { "a.b" = [1] }`, func(j *Job) bool { return j.Select.Where["a.b"][0] == 1.0 }},
		{"byte order mark and CR LF", "\ufeff" + strings.ReplaceAll(least, "\n", "\r\n"), func(j *Job) bool { return *j.Surface.Level == 0.42 }},
	} {
		t.Run(c.name, func(t *testing.T) {
			if j := parse(t, c.text); !c.holds(j) {
				t.Errorf("job is read as %+v", j)
			}
		})
	}
}

func TestResolve(t *testing.T) {
	abs, err := filepath.Abs("flight.csv")
	if err != nil {
		t.Fatal(err)
	}
	j := parse(t, least)
	for p, want := range map[string]string{
		"flight.csv":    filepath.Join("jobs", "flight.csv"),
		"../flight.csv": "flight.csv",
		abs:             abs,
	} {
		if got := j.Resolve(p); got != want {
			t.Errorf("Resolve(%q) = %q, want %q", p, got, want)
		}
	}
}

func TestLoadOfNoFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "none.toml")
	_, err := Load(path)
	if !errors.Is(err, fs.ErrNotExist) || !strings.Contains(err.Error(), path) {
		t.Errorf("Load = %v, want that %s does not exist", err, path)
	}
}

func TestLoadNamesTheFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "bad.toml")
	if err := os.WriteFile(path, []byte(least+"sea = 1\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	_, err := Load(path)
	if want := path + `:6: unknown key "sea" at the top of the file, want "title"`; err == nil || err.Error() != want {
		t.Errorf("Load = %v, want %s", err, want)
	}
}
