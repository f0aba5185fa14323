package job

import (
	"errors"
	"strings"
	"testing"
)

// pulseJob is a job with its tables on known lines, for faults added to it.
const pulseJob = `[input]
files = ["raw/*.csv"]
[output]
folder = "true"
[water]
temperature = 12
salinity = 34
[surface]
level = 0.42
[rays]
model = "pulse"
`

// edit replaces text of a job, or adds to it where old is "".
func edit(t *testing.T, job, old, text string) string {
	t.Helper()
	if old == "" {
		return job + text
	}
	if strings.Count(job, old) != 1 {
		t.Fatalf("job has %q %d times, want once", old, strings.Count(job, old))
	}
	return strings.Replace(job, old, text, 1)
}

// Each row is one mistake in pulseJob and the whole message it must give.
func TestParseFaults(t *testing.T) {
	const level = "[surface]\nlevel = 0.42\n"
	for _, c := range []struct{ name, old, text, want string }{
		{"syntax", "level = 0.42", "level = ", `job.toml:9: not valid TOML: unexpected character U+000A at start of value`},
		{"key twice", "level = 0.42", "level = 1\nlevel = 2", `job.toml:10: not valid TOML: key level is already defined`},
		{"table twice", "", "[air]\n[air]", `job.toml:13: not valid TOML: table air already exists`},

		{"unknown key", "salinity", "salinty", `job.toml:7: unknown key "salinty" in [water]; did you mean "salinity"?`},
		{"letter case", "salinity", "Salinity", `job.toml:7: unknown key "Salinity" in [water]; did you mean "salinity"?`},
		{"key of other tables", "level", "temperature = 3\nlevel", `job.toml:9: unknown key "temperature" in [surface]; it belongs to [water] or [air]`},
		{"key of a sub-table", "level", "slope_x = 0\nlevel", `job.toml:9: unknown key "slope_x" in [surface]; it belongs to [surface.plane]`},
		{"key near one of another table", "", "humidty = 50", `job.toml:12: unknown key "humidty" in [rays]; did you mean "humidity" in [air]?`},
		{"key near none", "", "mounting = 'c.csv'", `job.toml:12: unknown key "mounting" in [rays], want "model", "trajectory", "max_gap", "range_index", "cameras", "solve", "residual", "max_off_nadir" or "camera_medium"`},
		{"title in a table", "", "title = 'Cove'", `job.toml:12: unknown key "title" in [rays]; it belongs to the top of the file`},
		{"key at the top", "[input]", "titel = 'Cove'\n[input]", `job.toml:1: unknown key "titel" at the top of the file; did you mean "title"?`},
		{"key of the top in a table", "", "titel = 'Cove'", `job.toml:12: unknown key "titel" in [rays]; did you mean "title" at the top of the file?`},
		{"unknown table", "[water]", "[watr]", `job.toml:5: unknown table [watr]; did you mean [water]?`},
		{"unknown inline table", "", "[input.cvs]", `job.toml:12: unknown table [input.cvs]; did you mean [input.csv]?`},
		{"table at the wrong place", "[surface]\nlevel = 0.42", "[plane]\nlevel = 0.42", `job.toml:8: unknown table [plane]; did you mean [surface.plane]?`},
		{"list of tables", "", "[[cameras]]\nname = 'a'", `job.toml:12: unknown table [cameras], want [rays], [input], [input.columns], [input.csv], [output], [select], [select.where], [water], [air], [light], [surface], [surface.plane], [surface.profile], [surface.grid], [surface.gauge], [surface.separation], [extent], [[sensor]], [sensor.where], [sensor.rays] or [limits]`},

		{"string for a number", "temperature = 12", "temperature = '12'", `job.toml:6: [water] temperature is a string, want a number`},
		{"boolean for a number", "temperature = 12", "temperature = true", `job.toml:6: [water] temperature is a boolean, want a number`},
		{"date for a number", "temperature = 12", "temperature = 2024-05-01", `job.toml:6: [water] temperature is a date or time, want a number`},
		{"table for a number", "level = 0.42", "level.at = [0, 0]", `job.toml:9: [surface] level is a table, want a number`},
		{"number for a string", `"pulse"`, "1", `job.toml:11: [rays] model is a number, want a string`},
		{"number for the title", "[input]", "title = 1\n[input]", `job.toml:1: title is a number, want a string`},
		{"number for a boolean", "", "[input.csv]\nheader = 1", `job.toml:13: [input.csv] header is a number, want true or false`},
		{"table of a table", "", "[output.x]", `job.toml:12: unknown table [output.x]; did you mean [output]?`},
		{"fraction of a decimal", "folder", "decimals = 2.5\nfolder", `job.toml:4: [output] decimals is a number, want a whole number`},
		{"string for a list", `["raw/*.csv"]`, `"raw/*.csv"`, `job.toml:2: [input] files is a string, want a list, each item a string`},
		{"number in a list", `"raw/*.csv"`, `"raw/*.csv", 7`, `job.toml:2: [input] files item 2 is a number, want a string`},
		{"key for a table", "[input]", "air = 15\n[input]", `job.toml:1: [air] is a number, want a table`},
		{"list of a table", "[rays]", "[[rays]]", `job.toml:10: [rays] is a list, want a table`},
		{"nan", "0.42", "nan", `job.toml:9: [surface] level is nan, want a finite number`},
		{"inf", "0.42", "-inf", `job.toml:9: [surface] level is -inf, want a finite number`},
		{"number too long", "", "[select]\nwhere = { id = [9007199254740993] }", `job.toml:13: [select.where] id item 1 is 9007199254740993, want a whole number of at most 9007199254740992`},

		{"no files", `files = ["raw/*.csv"]`, "", `job.toml:1: [input] files is missing, want a list of patterns such as ["raw/**/*.csv"]`},
		{"no table", "[output]\nfolder = \"true\"\n", "", `job.toml: [output] folder is missing, want a folder`},
		{"no temperature", "temperature = 12\n", "", `job.toml:5: [water] temperature is missing, want a number in degrees C`},
		{"no salinity", "salinity = 34\n", "", `job.toml:5: [water] salinity is missing, want a number (practical salinity; 0 for fresh water)`},
		{"no model", "model = \"pulse\"\n", "", `job.toml:10: [rays] model is missing, want "vertical", "pulse" or "multiview"`},
		{"no surface", level, "", `job.toml: [surface] has no water surface, want level, column, [surface.plane], [surface.profile], [surface.grid] or [surface.gauge], or [water] zones with levels`},
		{"empty surface", "level = 0.42", "", `job.toml:8: [surface] has no water surface, want level, column, [surface.plane], [surface.profile], [surface.grid] or [surface.gauge], or [water] zones with levels`},
		{"extent of nothing", "", "[extent]", `job.toml:12: [extent] polygons is missing, want a GeoJSON file`},
		{"plane without place", level, "[surface.plane]\nlevel = 1\nslope_x = 0\nslope_y = 0\n", `job.toml:8: [surface.plane] at is missing, want a place [x, y]`},

		{"no patterns", `["raw/*.csv"]`, "[]", `job.toml:2: [input] files is empty, want at least one pattern`},
		{"blank pattern", `["raw/*.csv"]`, `["raw/*.csv", " "]`, `job.toml:2: [input] files item 2 is empty, want a pattern`},
		{"broken pattern", `["raw/*.csv"]`, `["raw/[a.csv"]`, `job.toml:2: [input] files item 1 is "raw/[a.csv", want a pattern whose brackets and braces are closed`},
		{"unit", "files", "unit = 'yd'\nfiles", `job.toml:2: [input] unit is "yd", want "m", "ft" or "us-ft"`},
		{"vertical unit", "files", "vertical_unit = ''\nfiles", `job.toml:2: [input] vertical_unit is "", want "m", "ft" or "us-ft"`},
		{"coarse", "files", "coarse = 1\nfiles", `job.toml:2: [input] coarse is a number, want true or false`},
		{"bad rows", "files", "bad_rows = 'skip'\nfiles", `job.toml:2: [input] bad_rows is "skip", want "stop" or "divert"`},
		{"time", "files", "time = 'gps'\nfiles", `job.toml:2: [input] time is "gps", want "gps-adjusted", "gps-week" or "utc"`},
		{"no week", "files", "time = 'gps-week'\nfiles", `job.toml:1: [input] week is missing, want a whole number from 1, because of time = "gps-week"`},
		{"week for nothing", "files", "week = 2300\nfiles", `job.toml:2: [input] week has no effect with time = "gps-adjusted"; remove it, or use time = "gps-week"`},
		{"week below 0", "files", "time = 'gps-week'\nweek = -1\nfiles", `job.toml:3: [input] week is -1, want 1 or above, counted from 1980-01-06 without rollover`},

		{"unknown role", "", "[input.columns]\nclasification = 'c'", `job.toml:13: unknown role "clasification" in [input.columns]; did you mean "classification"?`},
		{"role and column exchanged", "", "[input.columns]\neasting = 'x'", `job.toml:13: unknown role "easting" in [input.columns]; the role stands first: x = "easting"`},
		{"role near none", "", "[input.columns]\nnir = 'n'", `job.toml:13: unknown role "nir" in [input.columns], want x, y, z, gps_time, intensity, return_number, number_of_returns, classification, scan_angle, point_source_id, red, green, blue, origin_x, origin_y, origin_z or views`},
		{"role without column", "", "[input.columns]\nx = ''", `job.toml:13: [input.columns] x is empty, want a column's name`},
		{"two roles", "", "[input.columns]\ny = 'e'\nx = 'e'", `job.toml:13: [input.columns] y is "e", which line 14 has as x, want one role for a column`},
		{"two roles, one unsaid", "", "[input.columns]\nx = 'y'", `job.toml:13: [input.columns] x is "y", which is also the column of y, want one role for a column; name the column of y too`},
		{"degrees", "", "[input.columns]\nx = 'Longitude'", `job.toml:13: [input.columns] x is "Longitude", which holds degrees, want a column of projected coordinates; project the cloud first`},
		{"column is no name", "", "[input.columns]\nx = 1", `job.toml:13: [input.columns] x is a number, want a string`},

		{"names and header", "", "[input.csv]\nheader = true\nnames = ['x', 'y', 'z']", `job.toml:14: [input.csv] names is for files without a header line, but line 13 has header = true; remove one of them`},
		{"no names and no header", "", "[input.csv]\nheader = false", `job.toml:13: [input.csv] header is false, which needs names, such as names = ["x", "y", "z"]`},
		{"names of nothing", "", "[input.csv]\nnames = []", `job.toml:13: [input.csv] names is empty, want the columns' names from left to right`},
		{"blank name", "", "[input.csv]\nnames = ['x', '']", `job.toml:13: [input.csv] names item 2 is empty, want a column's name`},
		{"name twice", "", "[input.csv]\nnames = ['x', 'y', 'x']", `job.toml:13: [input.csv] names item 3 is "x", as is item 1, want different names`},

		{"blank folder", `"true"`, `""`, `job.toml:4: [output] folder is empty, want a folder`},
		{"provenance", "folder", "provenance = 'some'\nfolder", `job.toml:4: [output] provenance is "some", want "full" or "lean"`},
		{"decimals", "folder", "decimals = 10\nfolder", `job.toml:4: [output] decimals is 10, want 0 to 9`},
		{"decimals below 0", "folder", "decimals = -1\nfolder", `job.toml:4: [output] decimals is -1, want 0 to 9`},

		{"select nothing", "", "[select]", `job.toml:12: [select.where] has no column, want lists of values by column, such as classification = [2]`},
		{"single value", "", "[select.where]\nkind = 2", `job.toml:13: [select.where] kind is a number, want a list, each item a number or a string`},
		{"no value", "", "[select.where]\nkind = []", `job.toml:13: [select.where] kind is empty, want a list of values, such as [2, 9]`},
		{"boolean value", "", "[select.where]\nkind = [2, 'a', true]", `job.toml:13: [select.where] kind item 3 is a boolean, want a number or a string`},
		{"dotted column", "", "[select.where]\n'a.b' = []", `job.toml:13: [select.where] a.b is empty, want a list of values, such as [2, 9]`},

		{"temperature", "temperature = 12", "temperature = 52", `job.toml:6: [water] temperature is 52, want -2 to 35 degrees C for quan-fry`},
		{"salinity", "salinity = 34", "salinity = -0.1", `job.toml:7: [water] salinity is -0.1, want 0 to 45 for quan-fry`},
		{"salt in fresh water", "salinity = 34", "salinity = 34\nformula = 'iapws'", `job.toml:7: [water] salinity is 34, want 0 to 0.5 for iapws`},
		{"formula", "salinity = 34", "salinity = 34\nformula = 'quan'", `job.toml:8: [water] formula is "quan", want "quan-fry", "millard-seaver" or "iapws"`},
		{"water pressure", "salinity = 34", "salinity = 34\npressure_dbar = -1", `job.toml:8: [water] pressure_dbar is -1, want 0 to 100 dbar for quan-fry`},
		{"air temperature", "", "[air]\ntemperature = 291", `job.toml:13: [air] temperature is 291, want -40 to 60 degrees C for ciddor`},
		{"air pressure", "", "[air]\npressure = 101325", `job.toml:13: [air] pressure is 101325, want 500 to 1200 hPa for ciddor`},
		{"humidity", "", "[air]\nhumidity = 101", `job.toml:13: [air] humidity is 101, want 0 to 100 % for ciddor`},
		{"co2", "", "[air]\nco2 = -1", `job.toml:13: [air] co2 is -1, want 0 to 2000 ppm for ciddor`},
		{"wavelength", "", "[light]\nwavelength = 0.532", `job.toml:13: [light] wavelength is 0.532, want 400 to 700 nm for quan-fry`},

		{"two surfaces", "level = 0.42", "column = 'tide'\nlevel = 0.42", `job.toml:10: [surface] has column (line 9) and level (line 10), want one of level, column, [surface.plane], [surface.profile] and [surface.grid]`},
		{"blank column", "level = 0.42", "column = ''", `job.toml:9: [surface] column is empty, want a column's name`},
		{"place of three", level, "[surface.plane]\nlevel = 1\nat = [0, 0, 0]\nslope_x = 0\nslope_y = 0\n", `job.toml:10: [surface.plane] at has 3 items, want a list of 2, each item a number`},
		{"blank extent", "", "[extent]\npolygons = ''", `job.toml:13: [extent] polygons is empty, want a GeoJSON file`},

		{"model", `"pulse"`, `"bundle"`, `job.toml:11: [rays] model is "bundle", want "vertical", "pulse" or "multiview"`},
		{"no cameras", `"pulse"`, `"multiview"`, `job.toml:10: [rays] cameras is missing, want a file of cameras: camera, x, y, z and, where known, their rotations and images`},
		{"cameras of a pulse job", "", "cameras = 'c.csv'", `job.toml:12: [rays] cameras has no effect with model "pulse"; remove it, or use model = "multiview"`},
		{"trajectory of a multiview job", `"pulse"`, "'multiview'\ncameras = 'c.csv'\ntrajectory = 't.csv'", `job.toml:13: [rays] trajectory has no effect with model "multiview"; remove it, or use model = "pulse"`},
		{"solve", `"pulse"`, "'multiview'\ncameras = 'c.csv'\nsolve = 'exact'", `job.toml:13: [rays] solve is "exact", want "invert", "intersect" or "average"`},
		{"residual", `"pulse"`, "'multiview'\ncameras = 'c.csv'\nresidual = 'pixel'", `job.toml:13: [rays] residual is "pixel", want "image", "angle" or "equal"`},
		{"max off nadir", `"pulse"`, "'multiview'\ncameras = 'c.csv'\nmax_off_nadir = 90", `job.toml:13: [rays] max_off_nadir is 90, want degrees above 0 and below 90`},
		{"camera medium", `"pulse"`, "'multiview'\ncameras = 'c.csv'\ncamera_medium = 'sea'", `job.toml:13: [rays] camera_medium is "sea", want "air" or "water"`},
		{"trajectory of a vertical job", `"pulse"`, "'vertical'\ntrajectory = 't.csv'", `job.toml:12: [rays] trajectory has no effect with model "vertical"; remove it, or use model = "pulse"`},
		{"range index of a vertical job", `"pulse"`, "'vertical'\nrange_index = 1.0003", `job.toml:12: [rays] range_index has no effect with model "vertical"; remove it, or use model = "pulse"`},
		{"gap of a vertical job", `"pulse"`, "'vertical'\nmax_gap = 1", `job.toml:12: [rays] max_gap has no effect with model "vertical"; remove it, or use model = "pulse"`},
		{"gap without trajectory", "", "max_gap = 1", `job.toml:12: [rays] max_gap has no effect without trajectory; remove it, or name the trajectory`},
		{"gap of 0", "", "trajectory = 't.csv'\nmax_gap = 0", `job.toml:13: [rays] max_gap is 0, want above 0 seconds`},
		{"blank trajectory", "", "trajectory = ''", `job.toml:12: [rays] trajectory is empty, want a file`},
		{"range index of water", "", "range_index = 1.33", `job.toml:12: [rays] range_index is 1.33, want 1 to 1.01, the index of air that the ranges were made with`},
		{"range index below vacuum", "", "range_index = 0.999", `job.toml:12: [rays] range_index is 0.999, want 1 to 1.01, the index of air that the ranges were made with`},
		{"incidence", "", "[limits]\nmax_incidence = 90", `job.toml:13: [limits] max_incidence is 90, want above 0 and below 90 degrees`},
		{"no incidence", "", "[limits]\nmax_incidence = 0", `job.toml:13: [limits] max_incidence is 0, want above 0 and below 90 degrees`},
	} {
		t.Run(c.name, func(t *testing.T) { wantFault(t, edit(t, pulseJob, c.old, c.text), c.want) })
	}
}

// wantFault checks that a job is refused with the whole message given.
func wantFault(t *testing.T, text, want string) {
	t.Helper()
	_, err := Parse("job.toml", []byte(text))
	if err == nil {
		t.Fatalf("job is accepted:\n%s", text)
	}
	if err.Error() != want {
		t.Errorf("got  %v\nwant %s", err, want)
	}
	var e *Error
	if !errors.As(err, &e) || e.Path != "job.toml" {
		t.Errorf("%#v holds no *Error of job.toml", err)
	}
}
