package pipeline

import (
	"bytes"
	"fmt"
	"maps"
	"math"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// Every outcome that local water brings, in order of precedence. Each row also fails
// as many later tests as it can: the strip has a sensor, the extent is 0 to 200 in x,
// zone Good from 100, zone Hot from 150; rays with y = -5 come across the middle of a hairpin,
// where they meet neither its lower water to the north nor its higher one to the south.
const localCloud = `x,y,z,class,strip,origin_x,origin_y,origin_z
nan,200,-10,9,z,,,
500,200,-10,9,z,,,
500,200,-10,2,z,,,
500,200,-10,2,a,,,
50,200,-10,2,a,,,
50,200,-10,2,b,,,
50,6,1.5,2,a,,,
50,6,-10,2,a,,,
50,-5,-1.6,2,a,50,1195,398.4
50,6,-10,2,b,,,
160,-5,-1.6,2,a,160,1195,398.4
160,6,-10,2,b,,,
110,-5,-1.6,2,a,110,1195,398.4
110,6,-10,2,a,9000,6,400
110,-5,-9.94,2,a,110,195,390.06
110,6,-10,2,a,110,6,400
110,6,-10,2,b,,,
`

var localWant = []string{
	"invalid", "not_selected", "no_rule", "outside", "no_surface", "no_surface", "dry", "no_origin",
	"no_water", "no_water", "out_of_range", "out_of_range", "grazing", "grazing", "unsolved", "corrected", "corrected",
}

// localFiles are the water of localJob with the zones given. The hairpin falls by 2 mm a
// metre, to the east 20 m south of y = 0 and back as far north of it.
func localFiles(zones ...place) files {
	var levels [][]float64
	for k := range 9 {
		x, y := 100*float64(k)-100, -20.0
		if k > 4 {
			x, y = 800-100*float64(k), 20
		}
		levels = append(levels, []float64{x, y, 0.9 - 0.2*float64(k)})
	}
	return files{
		"water.geojson": polygonOf(0, -50, 200, 300), "zones.geojson": zonesFile(zones), "levels.csv": lines("x,y,z", levels...),
		"hairpin.geojson": `{"type":"LineString","coordinates":[[-100,-20],[300,-20],[300,20],[-100,20]]}`,
	}
}

const localJob = `[input]
files = ["raw/*.csv"]
[output]
folder = "true"
[select.where]
class = [2]
[extent]
polygons = "water.geojson"
[surface.profile]
centreline = "hairpin.geojson"
levels = "levels.csv"
reach = 30
[[sensor]]
name = "laser"
where.strip = ["a"]
rays.model = "pulse"
[[sensor]]
name = "images"
where.strip = ["b"]
rays.model = "vertical"
[water]
`

func band(name string, from, temperature float64) place {
	return place{name, [][2]float64{{from, -50}, {from + 50, -50}, {from + 50, 50}, {from, 50}}, temperature, 30, nan}
}

// localColumns are added columns with the outcomes that have a value in them, for a
// pulse by the letters of outcomeLetters and, besides, no_water w, out_of_range x, unsolved n.
var localColumns = map[string]string{
	"depth": "cd", "water_level": "cd", "entry_level": "c", "slope_x": "cg", "model": "cdgnosuwx", "ray_count": "cgn", "incidence_deg": "cg", "refraction_deg": "c",
	"n_air": "cgn", "n_water": "cgn", "ng_air": "cgn", "ng_water": "cgn", "temperature": "cgnx", "salinity": "cgnx", "water_source": "cgnx", "run": "acdgnosuwx",
}

func TestLocalOutcomes(t *testing.T) {
	f := localFiles(band("Good", 100, 12), band("Hot", 150, 36))
	for _, format := range formats {
		folder := t.TempDir()
		f.write(t, folder)
		files{"raw/a." + format: encode(t, format, localCloud), "levels." + format: encode(t, format, f["levels.csv"])}.write(t, folder)
		runJob(t, loadJob(t, folder, inFormat(localJob, format)+"zones = \"zones.geojson\"\n"), Options{})
		got := decode(t, format, readFile(t, folder, "true/a."+format))
		if outcomes := got.column(t, "outcome"); !slices.Equal(outcomes, localWant) {
			t.Fatalf("%s: outcomes are %q, want %q", format, outcomes, localWant)
		}
		checkLocalColumns(t, got)
		checkLocalReceipt(t, filepath.Join(folder, "true/a."+format))
	}
}

func checkLocalColumns(t *testing.T, got table) {
	t.Helper()
	for i, outcome := range localWant {
		letter := outcomeLetters[outcome] + map[string]string{"no_water": "w", "out_of_range": "x", "unsolved": "n"}[outcome]
		if letter == "" || got.text(t, i, "strip") == "b" {
			continue
		}
		for name, has := range localColumns {
			if is := got.text(t, i, name); (is != "") != strings.Contains(has, letter) {
				t.Errorf("row %d (%s): %s is %q", i+1, outcome, name, is)
			}
		}
	}
	last := len(localWant) - 1 // images
	if got.text(t, last, "ng_water") != "" || got.text(t, last, "water_source") != "zone Good" || got.text(t, last, "model") != "vertical" {
		t.Errorf("the last row is %q", got.rows[last])
	}
	if hot := slices.Index(localWant, "out_of_range"); got.text(t, hot, "water_source") != "zone Hot" || got.number(t, hot, "temperature") != 36 {
		t.Errorf("the row in hot water is %q", got.rows[hot])
	}
}

func checkLocalReceipt(t *testing.T, output string) {
	t.Helper()
	r, counts := readReceipt(t, output), map[string]int64{}
	for _, outcome := range localWant {
		counts[outcome]++
	}
	if !maps.Equal(r.Outcomes, counts) {
		t.Errorf("outcomes are %v, want %v", r.Outcomes, counts)
	}
	want := []string{ // around the end of the hairpin the level falls by 5 mm a metre, elsewhere by 2
		"the level changes by 0.200 m between level points at 400.0 and 440.0 m along the centreline, more than the slope beside explains: " +
			"a weir or rapid there has no place, and the level may be wrong by nearly as much; measure levels close to it",
		"1 of 17 points have no finite coordinates",
		"1 of 17 points match no sensor",
		"2 of 17 points have no water surface: it does not reach them in place or time, or its column is empty there",
		"2 of 17 points have no temperature and salinity: no zone or station gives them, in place or time",
		"2 of 17 points are in water outside the range of the index formula",
		"2 of 17 points were seen at more than max_incidence from the surface normal, or by a ray that the surface reflects",
		"1 of 17 points have no solution: their rays fix no point, or meet a curved surface at no one place or more than once",
		"1 of 17 points have no ray origin: an origin column is empty there",
	}
	if !slices.Equal(r.Cautions, want) {
		t.Errorf("cautions are\n%s, want\n%s", strings.Join(r.Cautions, "\n"), strings.Join(want, "\n"))
	}
}

// Water beyond the published range of the formula is used and counted.
func TestLocalWaterBeyondThePublishedRange(t *testing.T) {
	folder := t.TempDir()
	localFiles(band("Good", 100, 34)).write(t, folder)
	files{"raw/a.csv": localCloud}.write(t, folder)
	runJob(t, loadJob(t, folder, localJob+"zones = \"zones.geojson\"\n"), Options{})
	want := "2 of 17 points are in water outside the published range of quan-fry; its index is an extension of the formula"
	if r := readReceipt(t, filepath.Join(folder, "true/a.csv")); !slices.Contains(r.Cautions, want) {
		t.Errorf("cautions are %q, want %q", r.Cautions, want)
	}
}

// With casts the water is looked up again for each try at the depth; a grazing point
// keeps its angle.
func TestGrazingThroughCasts(t *testing.T) {
	f := files{
		"raw/a.csv":    "x,y,z,origin_x,origin_y,origin_z\n0,0,-10,300,0,90\n0,0,-10,0,0,400\n",
		"stations.csv": "x,y,temperature,salinity,depth\n5,6,20,1,0\n5,6,4,9,20\n",
	}
	got := correctFiles(t, f, pulseJob+"[water]\nstations = \"stations.csv\"\n[surface]\nlevel = 0\n")
	if outcomes := got.column(t, "outcome"); !slices.Equal(outcomes, []string{"grazing", "corrected"}) {
		t.Fatalf("outcomes are %q, want grazing and corrected", outcomes)
	}
	near(t, 0, "incidence_deg", got.number(t, 0, "incidence_deg"), math.Atan(3)*180/math.Pi, 0.6e-5)
}

// Each of two sensors has its own depth through one cast, and the mean water down to
// it: what the second does leaves the first alone.
func TestSensorsThroughCasts(t *testing.T) {
	cast := [][3]float64{{0, 24, 2}, {6, 18, 8}, {20, 4, 30}}
	f := files{
		"raw/a.csv":    "x,y,z,class,strip,origin_x,origin_y,origin_z\n0,0,-10,2,a,80,0,400\n0,0,-10,2,b,,,\n0,0,-3,2,a,80,0,400\n",
		"stations.csv": "x,y,temperature,salinity,depth\n5,6,24,2,0\n5,6,18,8,6\n5,6,4,30,20\n",
	}
	job := overLevel(localJob)
	got := correctFiles(t, f, job+"stations = \"stations.csv\"\n")
	for i, shift := range []float64{-1, 1, -1} { // a laser's bed rises, an image's falls
		depth := got.number(t, i, "depth")
		if raw := -got.number(t, i, "z_raw"); (depth-raw)*shift < 0.1 {
			t.Errorf("row %d: depth is %g, apparent %g", i, depth, raw)
		}
		near(t, i, "temperature", got.number(t, i, "temperature"), mean(cast, depth)[0], 0.51e-4)
		near(t, i, "salinity", got.number(t, i, "salinity"), mean(cast, depth)[1], 0.51e-4)
	}
}

// localSurvey is 30 000 points of two sensors among zones, casts over time and a tide.
func localSurvey(t *testing.T) (f files, jobText string) {
	t.Helper()
	r := newRand(16)
	var b bytes.Buffer
	b.WriteString("x,y,z,strip,gps_time,origin_x,origin_y,origin_z\n")
	for i := range 30_000 {
		x, y := 400*r.Float64(), 400*r.Float64()
		row(&b, exact(x), exact(y), exact(2-16*r.Float64()), []string{"a", "b", "c"}[i%3], exact(1.9e9+4000*r.Float64()), exact(x+100*r.Float64()), exact(y), "400")
	}
	f = files{
		"raw/a.csv": b.String(), "zones.geojson": zonesFile(twoZones), "casts.csv": stationFile(probes(), true),
		"gauge.csv": fmt.Sprintf("time,level,x,y\n%[1]d,0,0,0\n%[1]d,1,400,400\n%[2]d,1,0,0\n%[2]d,2,400,400\n", 1_900_000_000, 1_900_003_600),
	}
	jobText = inUTC(strings.Replace(localJob[:strings.Index(localJob, "[select")]+localJob[strings.Index(localJob, "[[sensor"):], "[water]\n", "", 1))
	return f, jobText + "[water]\nzones = \"zones.geojson\"\nstations = \"casts.csv\"\nmax_gap = 1000\n[surface.gauge]\nfile = \"gauge.csv\"\n"
}

// localBases are surfaces below localSurvey's gauges.
var localBases = map[string]string{
	"grid":    "[surface.grid]\npoints = \"swell.csv\"\n",
	"profile": "[surface.profile]\ncentreline = \"river.geojson\"\nlevels = \"levels.csv\"\nreach = 200\n",
}

func TestLocalSameBytesForAnyWorkers(t *testing.T) {
	f, jobText := localSurvey(t)
	cloud, surface := f["raw/a.csv"], swell(0)
	delete(f, "raw/a.csv")
	var points [][]float64
	for i := range 1600 {
		x, y := 10*float64(i%40), 10*float64(i/40)
		z, _, _ := surface(x, y, 0)
		points = append(points, []float64{x, y, z})
	}
	f["swell.csv"], f["levels.csv"] = lines("x,y,z", points...), "x,y,z\n0,0,1\n300,40,0.5\n330,420,0\n"
	f["river.geojson"] = `{"type":"LineString","coordinates":[[0,0],[300,40],[330,420]]}`
	for base, table := range localBases {
		for _, format := range formats {
			folder := t.TempDir()
			f.write(t, folder)
			data := cloud
			if format == "parquet" {
				data = parquetOf(t, cloud, 7000, nil)
			}
			files{"raw/a." + format: data}.write(t, folder)
			var want map[string]string
			for _, workers := range []int{1, 2, 7} {
				output := fmt.Sprintf("true%d", workers)
				text := strings.Replace(strings.Replace(jobText, `"true"`, `"`+output+`"`, 1), "raw/*.csv", "raw/*."+format, 1)
				s := runJob(t, loadJob(t, folder, text+table), Options{Workers: workers})
				got := outputs(t, filepath.Join(folder, output))
				if want == nil {
					want = got
				}
				same(t, fmt.Sprintf("%s, %s, %d workers", base, format, workers), got, want)
				if s.Outcomes["corrected"] < 10_000 || s.Outcomes["no_rule"] != 10_000 || s.Outcomes["dry"] == 0 || s.Outcomes["no_surface"] == 0 {
					t.Errorf("%s, %s: outcomes are %v", base, format, s.Outcomes)
				}
			}
		}
	}
}

// Water from a station may be outside the formula's range, which is known by then
// only: the points that it reaches are counted, and say what they would have.
func TestStationsOutOfRange(t *testing.T) {
	f := files{
		"raw/a.csv":    "x,y,z,origin_x,origin_y,origin_z\n0,0,-10,0,0,400\n900,0,-10,900,0,400\n",
		"stations.csv": "x,y,temperature,salinity\n0,0,35.5,30\n900,0,20,30\n",
	}
	got := correctFiles(t, f, pulseJob+"[water]\nstations = \"stations.csv\"\n[surface]\nlevel = 0\n")
	for name, want := range map[string][]string{
		"outcome": {"out_of_range", "corrected"}, "temperature": {"35.5000", "20.0000"}, "water_source": {"stations", "stations"}, "depth": {"", got.text(t, 1, "depth")},
	} {
		if is := got.column(t, name); !slices.Equal(is, want) {
			t.Errorf("%s is %q, want %q", name, is, want)
		}
	}
}
