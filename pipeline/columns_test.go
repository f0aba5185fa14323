package pipeline

import (
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// Every outcome that a pulse can have, in order of precedence. Each row also
// fails as many later tests as it can.
const outcomesCloud = `x,y,z,class,tide,origin_x,origin_y,origin_z
,6,-10,9,,,,
nan,6,-10,2,0,5,6,400
5,inf,-10,2,0,5,6,400
50,6,-10,9,,,,
50,6,-10,2,,,,
15,15,-10,2,,,,
5,6,-10,2,,,,
5,6,-10,2,nan,5,6,400
5,6,0,2,0,,,
5,6,1.5,2,0,5,6,400
5,6,-10,2,0,5,6,
5,6,-10,2,0,5,6,-1
5,6,-10,2,0,5,6,0
5,6,-10,2,0,9000,6,400
5,6,-10,2,0,5,6,400
`

var outcomesWant = []string{
	"invalid", "invalid", "invalid", "not_selected", "outside", "outside", "no_surface", "no_surface",
	"dry", "dry", "no_origin", "no_origin", "no_origin", "grazing", "corrected",
}

// outcomesPolygon is a square with a hole, which holds 15,15.
const outcomesPolygon = `{"type":"Polygon","coordinates":[
	[[0,0],[20,0],[20,20],[0,20],[0,0]],
	[[14,14],[14,16],[16,16],[16,14],[14,14]]]}`

func outcomesJob(surface, provenance string) string {
	return "[input]\nfiles = [\"raw/*.csv\"]\n[input.columns]\nclassification = \"class\"\n[output]\nfolder = \"true\"\nprovenance = \"" + provenance + "\"\n" + media +
		"[select.where]\nclassification = [2]\n[extent]\npolygons = \"water.geojson\"\n[surface]\n" + surface + "\n[rays]\nmodel = \"pulse\"\n"
}

// correctOutcomes returns the raw cloud and its output as tables.
func correctOutcomes(t *testing.T, format, jobText string) (raw, got table) {
	t.Helper()
	folder, data := t.TempDir(), encode(t, format, outcomesCloud)
	files{"raw/a." + format: data, "water.geojson": outcomesPolygon}.write(t, folder)
	runJob(t, loadJob(t, folder, strings.Replace(jobText, "*.csv", "*."+format, 1)), Options{})
	return decode(t, format, data), decode(t, format, readFile(t, folder, "true/a."+format))
}

func TestOutcomesByPrecedence(t *testing.T) {
	for _, format := range formats {
		raw, got := correctOutcomes(t, format, outcomesJob(`column = "tide"`, "full"))
		if outcomes := got.column(t, "outcome"); !slices.Equal(outcomes, outcomesWant) {
			t.Errorf("%s: outcomes are %q, want %q", format, outcomes, outcomesWant)
		}
		for i, outcome := range outcomesWant {
			if was, is := raw.rows[i], got.rows[i][:len(raw.names)]; outcome != "corrected" && !slices.Equal(is, was) {
				t.Errorf("%s: row %d (%s) is %q, want it to repeat %q", format, i+1, outcome, is, was)
			}
		}
	}
}

// fullColumns are the columns of full provenance for a pulse, in order, with
// the outcomes that have a value in them: a for all, and the first letters of
// corrected, dry, grazing, no_Origin, no_Surface (s), outside (u).
var fullColumns = []struct{ name, has string }{
	{"x_raw", "acdgosu"},
	{"y_raw", "acdgosu"},
	{"z_raw", "acdgosu"},
	{"depth", "cd"},
	{"water_level", "cd"},
	{"entry_level", "c"},
	{"slope_x", "cg"},
	{"slope_y", "cg"},
	{"outcome", "acdgosu"},
	{"model", "cdgosu"},
	{"ray_count", "cg"},
	{"view_source", ""},
	{"incidence_deg", "cg"},
	{"refraction_deg", "c"},
	{"n_air", "cg"},
	{"n_water", "cg"},
	{"ng_air", "cg"},
	{"ng_water", "cg"},
	{"temperature", "cg"},
	{"salinity", "cg"},
	{"water_source", "cg"},
	{"run", "acdgosu"},
}

var outcomeLetters = map[string]string{"corrected": "c", "dry": "d", "grazing": "g", "no_origin": "o", "no_surface": "s", "outside": "u", "not_selected": "a"}

// What was not computed is empty, whatever the kind of surface.
func TestFullColumnsHoldWhatWasComputed(t *testing.T) {
	for _, format := range formats {
		for _, surface := range []string{"level = 0", `column = "tide"`, "plane = { level = 0, at = [5, 6], slope_x = 0, slope_y = 0 }"} {
			t.Run(format+", "+surface, func(t *testing.T) {
				raw, got := correctOutcomes(t, format, outcomesJob(surface, "full"))
				checkFullColumns(t, raw, got)
			})
		}
	}
}

func checkFullColumns(t *testing.T, raw, got table) {
	t.Helper()
	want := slices.Clone(raw.names)
	for _, c := range fullColumns {
		want = append(want, c.name)
	}
	if !slices.Equal(got.names, want) {
		t.Fatalf("columns are %q, want %q", got.names, want)
	}
	for i, outcome := range got.column(t, "outcome") {
		letter, ok := outcomeLetters[outcome]
		if !ok {
			continue // invalid: x_raw may be empty itself
		}
		for _, c := range fullColumns {
			if has := got.text(t, i, c.name) != ""; has != strings.Contains(c.has, letter) {
				t.Errorf("row %d (%s): %s is %q", i+1, outcome, c.name, got.text(t, i, c.name))
			}
		}
	}
}

func TestLeanColumns(t *testing.T) {
	for _, format := range formats {
		raw, got := correctOutcomes(t, format, outcomesJob(`column = "tide"`, "lean"))
		want := append(raw.names, "x_raw", "y_raw", "z_raw", "depth", "outcome", "run")
		if !slices.Equal(got.names, want) {
			t.Errorf("%s: columns are %q, want %q", format, got.names, want)
		}
		if outcomes := got.column(t, "outcome"); !slices.Equal(outcomes, outcomesWant) {
			t.Errorf("%s: outcomes are %q, want %q", format, outcomes, outcomesWant)
		}
	}
}

// A pulse straight down: depth is the apparent depth times the group index of
// the ranges by that of the water; every text is as the columns promise.
func TestValuesOfOneRow(t *testing.T) {
	w := standardSea(t)
	folder := t.TempDir()
	files{
		"raw/a.csv":  "northing,easting,z,gps_time\n6.25,5.5,-10,2\n6.25,5.5,1,2\n",
		"flight.csv": "gps_time,x,y,z\n1.5,0,0,399\n2.5,11,12.5,401\n",
	}.write(t, folder)
	runJob(t, loadJob(t, folder, "title = \"Lantern Cove\"\n[input]\nfiles = [\"raw/*.csv\"]\ncolumns = { x = \"easting\", y = \"northing\" }\n[output]\nfolder = \"true\"\n"+
		media+"[surface]\nlevel = 0.50\n[rays]\nmodel = \"pulse\"\ntrajectory = \"flight.csv\"\n"), Options{})
	r := readReceipt(t, folder+"/true/a.csv")
	depth := 10.5 * w.rangeNg / w.waterGroup
	f := func(v float64, decimals int) string { return strconv.FormatFloat(v, 'f', decimals, 64) }
	want := map[string]string{
		"easting": "5.5000", "northing": "6.2500", "z": f(0.5-depth, 4), "gps_time": "2",
		"easting_raw": "5.5", "northing_raw": "6.25", "z_raw": "-10",
		"depth": f(depth, 4), "water_level": "0.5", "entry_level": "0.5", "slope_x": "0", "slope_y": "0",
		"outcome": "corrected", "model": "pulse", "ray_count": "1", "view_source": "",
		"incidence_deg": "0.00000", "refraction_deg": "0.00000",
		"n_air": f(w.air, 9), "n_water": f(w.waterPhase, 9), "ng_air": f(w.rangeNg, 9), "ng_water": f(w.waterGroup, 9),
		"temperature": "17.5", "salinity": "34.9", "water_source": "job",
		"origin_x": "5.5000", "origin_y": "6.2500", "origin_z": "400.0000", "run": r.Run[:12],
	}
	got := readTable(t, readFile(t, folder, "true/a.csv"))
	if len(got.names) != len(want) {
		t.Errorf("columns are %q, want %q", got.names, slices.Sorted(maps.Keys(want)))
	}
	for name, text := range want {
		if is := got.text(t, 0, name); is != text {
			t.Errorf("%s is %q, want %q", name, is, text)
		}
	}
	for name, text := range map[string]string{"easting": "5.5", "z": "1", "depth": "-0.5000", "water_level": "0.5", "entry_level": "", "origin_z": "", "run": r.Run[:12]} {
		if is := got.text(t, 1, name); is != text {
			t.Errorf("dry: %s is %q, want %q", name, is, text)
		}
	}
}

// Vertical: depth times the ratio of the phase indices, plan kept (Tewinkel
// 1963); no ray, no group index.
func TestVerticalColumns(t *testing.T) {
	text, _ := correctText(t, "x,y,z\n5,6,-10\n", "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"true\"\n"+media+
		"[light]\nwavelength = 532\n[surface]\nlevel = 0\n[rays]\nmodel = \"vertical\"\n")
	got, w := readTable(t, text), standardSea(t)
	near(t, 0, "depth", got.number(t, 0, "depth"), 10*w.waterPhase/w.air, 0.5001e-4)
	for _, name := range []string{"ng_air", "ng_water", "origin_x"} {
		if got.has(name) {
			t.Errorf("there is a column %s", name)
		}
	}
	for name, want := range map[string]string{"x": "5.0000", "model": "vertical", "ray_count": "", "incidence_deg": "", "refraction_deg": "", "n_air": fmt.Sprintf("%.9f", w.air)} {
		if is := got.text(t, 0, name); is != want {
			t.Errorf("%s is %q, want %q", name, is, want)
		}
	}
}

func TestSelect(t *testing.T) {
	const cloud = "x,y,z,classification,strip,origin_x,origin_y,origin_z\n" +
		"5,6,-1,2,north,5,6,400\n5,6,-1,2.0,\"north\",5,6,400\n5,6,-1,9,south,5,6,400\n5,6,-1,,north,5,6,400\n5,6,-1,40,7,5,6,400\n5,6,-1,2,North,5,6,400\n"
	for _, c := range []struct{ where, want string }{
		{"classification = [2]", "++---+"},
		{"classification = [2, 9, 2]", "+++--+"},
		{`strip = ["north"]`, "++-+--"},
		{`strip = ["north", 7]`, "++-++-"},
		{"classification = [2]\nstrip = [\"north\"]", "++----"},
		{"Classification = [40]", "----+-"},
	} {
		text, _ := correctText(t, cloud, tinyJob(`"raw/*.csv"`, "true")+"[select.where]\n"+c.where+"\n")
		got := ""
		for _, outcome := range readTable(t, text).column(t, "outcome") {
			got += map[string]string{"corrected": "+", "not_selected": "-"}[outcome]
		}
		if got != c.want {
			t.Errorf("%s selects %s, want %s", c.where, got, c.want)
		}
	}
}

func TestCautionsOfAFile(t *testing.T) {
	rest := tinyJob(`"raw/*.csv"`, "true")
	north := strings.Replace(tiny, "5,6,-10,5,6,400", "500005,6000006,-10,500005,6000006,400", 1)
	degrees := "all x lie within 180 and all y within 90: these look like degrees; coordinates must be projected lengths"
	polygon := "the polygons (x 0.0 to 9.0, y 0.0 to 9.0) do not meet the points (x 500005.0 to 500005.0, y 6000006.0 to 6000006.0); are both in one projected system?"
	for _, c := range []struct {
		name, cloud, job string
		want             []string
	}{
		{"none", north, rest, []string{}},
		{"degrees", tiny, rest, []string{degrees}},
		{"polygons elsewhere", north, rest + "[extent]\npolygons = \"water.geojson\"\n", []string{polygon, "no point was corrected"}},
		{"one level over 3 km", north + "503005,6000006,-10,503005,6000006,400\n", rest, []string{
			"one constant level over 3.0 km: an ellipsoidal level is not level over such a distance; use a plane, or heights above a geoid",
		}},
		{"origin in the water", north + "500005,6000006,-10,500005,6000006,-400\n500005,6000006,-10,,,\n", rest, []string{
			"1 of 3 points have no ray origin: an origin column is empty there",
			"1 of 3 points have a ray origin that is not above the water: are origins and cloud in one system and unit?",
		}},
		{"no rows", "x,y,z,origin_x,origin_y,origin_z\n", rest, []string{"the file holds no points"}},
		{"all dry", strings.Replace(north, "-10", "10", 1), rest, []string{
			"the level 0 lies 10.0 m below the lowest point: no point would be under water; are level and cloud in one vertical reference?",
			"no point was corrected",
		}},
		{"invalid and grazing", north + "500005,,-1,5,6,400\n500005,6000006,-1,505000,6000006,400\n", rest, []string{
			"1 of 3 points have no finite coordinates",
			"1 of 3 points were seen at more than max_incidence from the surface normal, or by a ray that the surface reflects",
		}},
		{"diverted", north + "1\n", strings.Replace(rest, "[output]", "bad_rows = \"divert\"\n[output]", 1), []string{
			"1 of 2 rows could not be read and were diverted to a.csv.rejects.csv",
		}},
		{"beyond the formula's published range", north, strings.Replace(rest, "34.9", "40", 1), []string{
			"the water (17.5 degrees C, salinity 40, 532 nm) is outside the published range of quan-fry; its index is an extension of the formula",
		}},
		{"pressure to no effect", north, strings.Replace(rest, "salinity", "pressure_dbar = 5\nsalinity", 1), []string{
			"pressure_dbar = 5 has no effect: quan-fry has no pressure term",
		}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if _, r := correctText(t, c.cloud, c.job); !slices.Equal(r.Cautions, c.want) {
				t.Errorf("cautions are %q, want %q", r.Cautions, c.want)
			}
		})
	}
}

// A max_incidence above the angle of a ray corrects it, one below does not.
func TestMaxIncidence(t *testing.T) {
	cloud := "x,y,z,origin_x,origin_y,origin_z\n0,0,-1,300,0,299\n" // 45 degrees
	for limit, want := range map[string]string{"45.001": "corrected", "44.999": "grazing"} {
		text, _ := correctText(t, cloud, tinyJob(`"raw/*.csv"`, "true")+"[limits]\nmax_incidence = "+limit+"\n")
		if got := readTable(t, text).text(t, 0, "outcome"); got != want {
			t.Errorf("at %s degrees the point is %s, want %s", limit, got, want)
		}
	}
}

// Polygons are in the cloud's own coordinates, whatever their unit.
func TestExtentInFeet(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": "x,y,z\n19,19,-1\n21,19,-1\n1,1,-1\n", "water.geojson": polygonOf(10, 10, 20, 20)}.write(t, folder)
	runJob(t, loadJob(t, folder, "[input]\nfiles = [\"raw/*.csv\"]\nunit = \"ft\"\n[output]\nfolder = \"true\"\n"+media+
		"[surface]\nlevel = 0\n[extent]\npolygons = \"water.geojson\"\n[rays]\nmodel = \"vertical\"\n"), Options{})
	got := readTable(t, readFile(t, folder, "true/a.csv")).column(t, "outcome")
	if want := []string{"corrected", "outside", "outside"}; !slices.Equal(got, want) {
		t.Errorf("outcomes are %q, want %q", got, want)
	}
}

// With a trajectory the cloud's own origin columns stay as they are, and do not
// decide.
func TestTrajectoryBesideOriginColumns(t *testing.T) {
	folder := t.TempDir()
	cloud := "x,y,z,gps_time,origin_x,origin_y,origin_z\n500000,6000000,-10,0.5,1,2,3\n"
	files{"raw/a.csv": cloud, "flight.csv": "gps_time,x,y,z\n0,500000,6000000,400\n1,500000,6000000,400\n"}.write(t, folder)
	runJob(t, loadJob(t, folder, tinyJob(`"raw/*.csv"`, "true")+"trajectory = \"flight.csv\"\n"), Options{})
	got := readTable(t, readFile(t, folder, "true/a.csv"))
	if o := got.text(t, 0, "outcome"); o != "corrected" {
		t.Errorf("the point is %s, want it corrected from the trajectory", o)
	}
	for name, want := range map[string]string{"origin_x": "1", "origin_y": "2", "origin_z": "3"} {
		if v := got.text(t, 0, name); v != want {
			t.Errorf("%s is %s, want %s as in the file", name, v, want)
		}
	}
}
