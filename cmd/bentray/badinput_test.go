package main

import (
	"bytes"
	"context"
	"io/fs"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// goodJob corrects goodCloud; line numbers of messages count from its first line.
const goodJob = `[input]
files = ["raw/*.csv"]
[output]
folder = "true"
[water]
temperature = 17.5
salinity = 34.9
[surface]
level = 0
[rays]
model = "pulse"
`

const goodCloud = "x,y,z,origin_x,origin_y,origin_z,gps_time\n5,6,-10,5,6,400,1\n"

// badInput is a job that cannot be done, or not wholly. It differs from the good
// one by the files given and by one edit of its job file.
type badInput struct {
	name     string
	files    map[string]string // more files, or others; a name that ends in / is a folder, a text "-> path" a link
	old, new string            // the edit of the job
	want     string            // what stderr says
}

// wrongCalls are jobs that are refused before anything is written.
var wrongCalls = []badInput{
	{name: "unknown key", old: "salinity", new: "salinty", want: `job.toml:7: unknown key "salinty" in [water]; did you mean "salinity"?`},
	{name: "wrong type", old: "34.9", new: `"34.9"`, want: `job.toml:7: [water] salinity is a string, want a number`},
	{name: "not TOML", old: "level = 0", new: "level =", want: `job.toml:9: not valid TOML: unexpected character U+000A at start of value`},
	{name: "pattern matches nothing", old: "raw/*.csv", new: "raw/*.xyz", want: `job.toml: [input] files: "raw/*.xyz" matches no file`},
	{name: "missing file", old: "raw/*.csv", new: "raw/b.csv", want: `job.toml: [input] files: "raw/b.csv" is not there`},
	{name: "a folder for a file", old: "raw/*.csv", new: "raw", want: `job.toml: [input] files: "raw" is a folder, want a file, or a pattern of files in it`},
	{name: "a folder named like a cloud", files: map[string]string{"raw/b.csv/": ""}, old: "raw/*.csv", new: "raw/b.csv", want: `job.toml: [input] files: "raw/b.csv" is a folder, want a file, or a pattern of files in it`},
	{name: "broken pattern", old: "raw/*.csv", new: "raw/[.csv", want: `job.toml:2: [input] files item 1 is "raw/[.csv", want a pattern whose brackets and braces are closed`},
	{name: "two inputs, one output", files: map[string]string{"new/a.csv": goodCloud}, old: `"raw/*.csv"`, new: `"raw/*.csv", "new/*.csv"`, want: `job.toml: raw/a.csv and new/a.csv would both be written to true/a.csv; give them different names, or run them as two jobs`},
	{name: "output over input", old: `"true"`, new: `"raw"`, want: `job.toml: the output raw/a.csv would overwrite an input; set [output] folder to another folder`},
	{name: "the output folder is a file", files: map[string]string{"true": "x"}, want: `job.toml: [output] folder "true" is a file, want a folder`},
	{name: "longitude as x", old: `"raw/*.csv"]`, new: `"raw/*.csv"]` + "\ncolumns = { x = \"Lon\" }", want: `job.toml:3: [input.columns] x is "Lon", which holds degrees, want a column of projected coordinates; project the cloud first`},
	{name: "two columns for one role", old: `"raw/*.csv"]`, new: `"raw/*.csv"]` + "\ncolumns = { x = \"easting\", y = \"easting\" }", want: `job.toml:3: [input.columns] y is "easting", which line 3 has as x, want one role for a column`},
	{name: "water missing", old: "[water]\ntemperature = 17.5\nsalinity = 34.9\n", new: "", want: `job.toml: [water] temperature is missing, want a number in degrees C
job.toml: [water] salinity is missing, want a number (practical salinity; 0 for fresh water)`},
	{name: "surface missing", old: "[surface]\nlevel = 0\n", new: "", want: `job.toml: [surface] has no water surface, want level, column, [surface.plane], [surface.profile], [surface.grid] or [surface.gauge], or [water] zones with levels`},
	{name: "temperature out of range", old: "17.5", new: "35.1", want: `job.toml:6: [water] temperature is 35.1, want -2 to 35 degrees C for quan-fry`},
	{name: "salinity out of range", old: "34.9", new: "45.5", want: `job.toml:7: [water] salinity is 45.5, want 0 to 45 for quan-fry`},
	{name: "salt for the formula of fresh water", old: "34.9", new: "34.9\nformula = \"iapws\"", want: `job.toml:7: [water] salinity is 34.9, want 0 to 0.5 for iapws`},
	{name: "trajectory missing", old: `"pulse"`, new: `"pulse"` + "\ntrajectory = \"flight.csv\"", want: `job.toml: [rays] trajectory: flight.csv: no such file or directory`},
	{name: "trajectory out of order", files: map[string]string{"flight.csv": "gps_time,x,y,z\n1,0,0,400\n3,0,0,400\n2.5,0,0,400\n"}, old: `"pulse"`, new: `"pulse"` + "\ntrajectory = \"flight.csv\"", want: `flight.csv: line 4: time 2.5 comes after 3, want records sorted by time`},
	{name: "trajectory with repeats", files: map[string]string{"flight.csv": "gps_time,x,y,z\n1,0,0,400\n1,0,0,400\n"}, old: `"pulse"`, new: `"pulse"` + "\ntrajectory = \"flight.csv\"", want: `flight.csv: line 3: time 1 repeats the one above it, want each time once`},
	{name: "trajectory without a column", files: map[string]string{"flight.csv": "gps_time,x,y\n1,0,0\n"}, old: `"pulse"`, new: `"pulse"` + "\ntrajectory = \"flight.csv\"", want: `flight.csv: no column "z"; the columns are gps_time, x, y`},
	{name: "trajectory with a gap in a row", files: map[string]string{"flight.csv": "gps_time,x,y,z\n1,0,0,400\n2,0,,400\n"}, old: `"pulse"`, new: `"pulse"` + "\ntrajectory = \"flight.csv\"", want: `flight.csv: line 3: a value is not finite, want a time and a position`},
	{name: "trajectory with a text", files: map[string]string{"flight.csv": "gps_time,x,y,z\n1,0,0,400\n2,0,high,400\n"}, old: `"pulse"`, new: `"pulse"` + "\ntrajectory = \"flight.csv\"", want: `flight.csv: line 3: y is "high", want a number`},
	{name: "polygons missing", old: "[rays]", new: "[extent]\npolygons = \"water.geojson\"\n[rays]", want: `job.toml: [extent] polygons: water.geojson: no such file or directory`},
	{name: "polygons are none", files: map[string]string{"water.geojson": "{}"}, old: "[rays]", new: "[extent]\npolygons = \"water.geojson\"\n[rays]", want: `water.geojson: not GeoJSON: no "type", want a FeatureCollection, a Feature or a geometry`},
}

// badClouds fail alone: raw/a.csv is done beside them.
var badClouds = []badInput{
	{name: "no x", files: map[string]string{"raw/b.csv": "east,y,z\n1,2,3\n"}, want: `raw/b.csv: no column for x; the columns are east, y, z; name it in [input.columns]`},
	{name: "degrees", files: map[string]string{"raw/b.csv": "lon,lat,z\n1,2,3\n"}, want: `raw/b.csv: no column for x, and "lon" holds degrees; project the cloud first, its coordinates must be lengths`},
	{name: "two columns for one role", files: map[string]string{"raw/b.csv": "x,X,x,y,z\n1,2,3,4,5\n"}, want: `raw/b.csv: columns 1 and 3 are both called "x", want one`},
	{name: "two columns that differ in case", files: map[string]string{"raw/b.csv": "x,y,z,Origin_X,ORIGIN_X\n1,2,3,4,5\n"}, want: `raw/b.csv: columns "Origin_X" and "ORIGIN_X" both answer to "origin_x", want one; name it in [input.columns]`},
	{name: "added column there", files: map[string]string{"raw/b.csv": "x,y,z,origin_x,origin_y,origin_z,Depth\n5,6,-10,5,6,400,1\n"}, want: `raw/b.csv: the file already has a column "Depth", which bentray would add; rename it there, or take the raw cloud if this file is an output`},
	{name: "no origin column", files: map[string]string{"raw/b.csv": "x,y,z\n5,6,-10\n"}, want: `raw/b.csv: no column "origin_x" (a pulse needs its ray origin; or give [rays] trajectory); the columns are x, y, z`},
	{name: "empty file", files: map[string]string{"raw/b.csv": ""}, want: `raw/b.csv is empty, want a header line`},
	{name: "only comments", files: map[string]string{"raw/b.csv": "# dawn\n"}, want: `raw/b.csv has only comments and empty lines, want a header line`},
	{name: "only numbers", files: map[string]string{"raw/b.csv": "5,6,-10,5,6,400,1\n"}, want: `raw/b.csv: line 1 has only numbers, want a header line; name the columns in [input.csv] names`},
	{name: "one column", files: map[string]string{"raw/b.csv": "x\n1\n"}, want: `raw/b.csv: line 1 has one field, want at least two, separated by commas, semicolons, tabs or blanks`},
	{name: "ragged row", files: map[string]string{"raw/b.csv": goodCloud + "5,6,-10\n"}, want: `raw/b.csv: line 3 has 3 fields, want 7`},
	{name: "unclosed quote", files: map[string]string{"raw/b.csv": goodCloud + "5,6,-10,5,6,400,\"1\n"}, want: `raw/b.csv: line 3 has a quote that is not closed, want a closing quote before the end of the file`},
	{name: "text for a number", files: map[string]string{"raw/b.csv": goodCloud + "5,6,-9999m,5,6,400,1\n"}, want: `raw/b.csv: line 3: z is "-9999m", want a number`},
	{name: "decimal comma", files: map[string]string{"raw/b.csv": goodCloud + "5,6,\"-10,5\",5,6,400,1\n"}, want: `raw/b.csv: line 3: z is "-10,5", want a number with a decimal point, not a comma`},
	{name: "text in a selected column", files: map[string]string{"raw/b.csv": goodCloud + "5,6,-10,5,6,400,noon\n"}, old: "[rays]", new: "[select.where]\ngps_time = [1]\n[rays]", want: `raw/b.csv: line 3: gps_time is "noon", want a number`},
	{name: "dangling link", files: map[string]string{"raw/b.csv": "-> gone.csv"}, want: `raw/b.csv: no such file or directory`},
	{name: "UTF-16", files: map[string]string{"raw/b.csv": "\xff\xfex\x00"}, want: `raw/b.csv is UTF-16 text, want UTF-8; convert it first`},
	{name: "no gzip", files: map[string]string{"raw/b.csv.gz": "x,y,z\n"}, old: "*.csv", new: "*.csv*", want: `raw/b.csv.gz: gzip data are damaged or cut short (unexpected EOF); fetch the file again`},
	{name: "unknown format", files: map[string]string{"raw/b.dat": "x,y,z\n"}, old: "*.csv", new: "*", want: `raw/b.dat: unknown kind of file ".dat", want .parquet, or .csv .tsv .txt .xyz or .asc (these also with .gz or .zst)`},
}

// lay writes the files of a case into a new folder and goes there.
func (c badInput) lay(t *testing.T) {
	t.Helper()
	t.Chdir(t.TempDir())
	put(t, "raw/a.csv", goodCloud)
	put(t, "job.toml", strings.Replace(goodJob, c.old, c.new, 1))
	for name, text := range c.files {
		put(t, name, text)
	}
}

func put(t *testing.T, name, text string) {
	t.Helper()
	path := filepath.FromSlash(name)
	err := os.MkdirAll(filepath.Dir(path), 0o777)
	switch target, link := strings.CutPrefix(text, "-> "); {
	case err != nil || strings.HasSuffix(name, "/"):
	case link:
		err = os.Symlink(target, path)
	default:
		err = os.WriteFile(path, []byte(text), 0o666)
	}
	if err != nil {
		t.Fatal(err)
	}
}

// call is the whole program.
func call(t *testing.T, args ...string) (code int, stdout, stderr string) {
	t.Helper()
	var out, errs bytes.Buffer
	code = run(t.Context(), args, &out, &errs)
	return code, out.String(), errs.String()
}

// listing is every file below the working folder with its text.
func listing(t *testing.T) map[string]string {
	t.Helper()
	texts := map[string]string{}
	err := filepath.WalkDir(".", func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		texts[filepath.ToSlash(path)] = ""
		if d.Type().IsRegular() {
			var data []byte
			data, err = os.ReadFile(path)
			texts[filepath.ToSlash(path)] = string(data)
		}
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return texts
}

// want fails the test unless the program ended so.
func want(t *testing.T, what string, gotCode, wantCode int, got, wantText string) {
	t.Helper()
	if gotCode != wantCode {
		t.Errorf("%s: exit code is %d, want %d", what, gotCode, wantCode)
	}
	if got != wantText {
		t.Errorf("%s: got\n%swant\n%s", what, got, wantText)
	}
}

func TestWrongCallsWriteNothing(t *testing.T) {
	for _, c := range slices.Concat(wrongCalls, wrongLocalCalls, wrongImageCalls) {
		t.Run(c.name, func(t *testing.T) {
			c.lay(t)
			before := listing(t)
			for _, command := range []string{"run", "plan"} {
				code, out, errs := call(t, command, "job.toml")
				want(t, command, code, exitCall, errs, "bentray: "+c.want+"\n")
				if out != "" {
					t.Errorf("%s: on stdout stands %q, want nothing", command, out)
				}
			}
			if after := listing(t); !maps.Equal(before, after) {
				t.Errorf("the folder holds %q, want it unchanged", slices.Sorted(maps.Keys(after)))
			}
		})
	}
}

func TestBadCloudsFailAlone(t *testing.T) {
	for _, c := range badClouds {
		t.Run(c.name, func(t *testing.T) {
			c.lay(t)
			before := listing(t)
			code, _, errs := call(t, "plan", "job.toml")
			want(t, "plan", code, exitPartly, errs, "would fail: "+c.want+"\n")
			code, out, errs := call(t, "run", "job.toml")
			want(t, "run", code, exitPartly, errs, "failed: "+c.want+"\n")
			if !strings.HasPrefix(out, "job.toml: 2 files: 1 done, 1 failed\n") {
				t.Errorf("the report is %q", out)
			}
			after := listing(t)
			for _, name := range []string{"true", "true/a.csv", "true/a.csv.receipt.json", "true/bentray.lock", "true/run-summary.json"} {
				if _, there := after[name]; !there {
					t.Errorf("there is no %s", name)
				}
				delete(after, name)
			}
			if !maps.Equal(before, after) {
				t.Errorf("beside the outputs there is %q, want %q unchanged", slices.Sorted(maps.Keys(after)), slices.Sorted(maps.Keys(before)))
			}
		})
	}
}

func TestAllFailed(t *testing.T) {
	badInput{old: `"raw/*.csv"]`, new: `"raw/*.csv"]` + "\ncolumns = { z = \"up\" }"}.lay(t)
	message := `raw/a.csv: no column "up", which [input.columns] names for z; the columns are x, y, z, origin_x, origin_y, origin_z, gps_time` + "\n"
	code, _, errs := call(t, "plan", "job.toml")
	want(t, "plan", code, exitNothing, errs, "would fail: "+message)
	code, _, errs = call(t, "run", "job.toml")
	want(t, "run", code, exitNothing, errs, "failed: "+message)
}

// A file of no rows is done: its output has a header, and a caution says so.
func TestHeaderOnly(t *testing.T) {
	badInput{files: map[string]string{"raw/a.csv": "x,y,z,origin_x,origin_y,origin_z\r\n"}}.lay(t)
	code, out, errs := call(t, "run", "job.toml")
	want(t, "run", code, exitDone, errs, "")
	if !strings.Contains(out, "caution: a.csv: the file holds no points\n") {
		t.Errorf("the report is %q", out)
	}
	text := listing(t)["true/a.csv"]
	if !strings.HasPrefix(text, "x,y,z,origin_x,origin_y,origin_z,x_raw,y_raw,z_raw,depth,") || strings.Index(text, "\r\n") != len(text)-2 {
		t.Errorf("the output is %q", text)
	}
}

// An interrupted run says so.
func TestInterrupted(t *testing.T) {
	badInput{}.lay(t)
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	var out, errs bytes.Buffer
	code := run(ctx, []string{"run", "job.toml"}, &out, &errs)
	want(t, "before the first file", code, exitInterrupted, errs.String(), "bentray: interrupted; done files stay done, run again for the rest\n")
}

func TestFullStandardOutput(t *testing.T) {
	badInput{}.lay(t)
	full, err := os.OpenFile("/dev/full", os.O_WRONLY, 0)
	if err != nil {
		t.Skip("no /dev/full here")
	}
	defer full.Close()
	for _, args := range [][]string{
		{"index", "--temperature", "17.5", "--salinity", "34.9"},
		{"index", "--temperature", "17.5", "--salinity", "34.9", "--json"},
		{"plan", "job.toml"},
		{"plan", "raw/a.csv"},
	} {
		var errs bytes.Buffer
		code := run(t.Context(), args, full, &errs)
		if code != exitNothing || !strings.Contains(errs.String(), "no space left on device") {
			t.Errorf("%q: exit code is %d with %q, want 1 and no space left", args, code, &errs)
		}
	}
}
