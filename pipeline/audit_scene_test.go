package pipeline

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"bentray/pipeline/receipt"
)

// auditKind is a survey of two clouds, a and b, whose outputs are audited: one file of
// auxiliary data of each kind lies beside it.
type auditKind struct {
	name   string
	tables string            // of the job, behind those that all have
	input  string            // keys of [input]
	output string            // keys of [output]
	rename map[string]string // columns of the clouds
	only   string            // the format, where it is one
}

const (
	auditWater = "[water]\ntemperature = 17.5\nsalinity = 34.9\n"
	auditLevel = "[surface]\nlevel = 0.1234567\n"
	pulseRays  = "[rays]\nmodel = \"pulse\"\n"
	imageRays  = "[rays]\nmodel = \"multiview\"\ncameras = \"cameras.csv\"\n"
)

// auditKinds are every model, every surface and every water, and what changes how
// columns are read and written.
var auditKinds = []auditKind{
	{name: "vertical", tables: auditWater + auditLevel + "[rays]\nmodel = \"vertical\"\n"},
	{name: "vertical lean, column, feet", tables: auditWater + "[surface]\ncolumn = \"wl\"\n[rays]\nmodel = \"vertical\"\n", input: "unit = \"ft\"\nvertical_unit = \"us-ft\"\n", output: "provenance = \"lean\"\ndecimals = 2\n"},
	{name: "pulse", tables: auditWater + auditLevel + pulseRays + "range_index = 1.0002\n[extent]\npolygons = \"part.geojson\"\n[select.where]\nclassification = [2, 40]\n"},
	{name: "pulse, trajectory, gauge", tables: auditWater + "[surface.gauge]\nfile = \"gauge.csv\"\n" + pulseRays + "trajectory = \"flight.csv\"\n", rename: noOrigins},
	{name: "pulse lean, trajectory", tables: auditWater + "[surface.plane]\nwaterline = \"waterline.csv\"\n" + pulseRays + "trajectory = \"flight.csv\"\n", rename: noOrigins, output: "provenance = \"lean\"\n"},
	{name: "pulse, plane, separation", tables: auditWater + "[surface.plane]\nlevel = 0.2\nat = [10, 20]\nslope_x = 0.001\n[surface.separation]\nfile = \"separation.csv\"\n" + pulseRays},
	{name: "pulse, profile, stations", tables: "[water]\nstations = \"stations.csv\"\n[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = 70\n" + pulseRays},
	{name: "pulse, grid, zones", tables: "[water]\nzones = \"zones.geojson\"\n[surface.grid]\npoints = \"surface.csv\"\n" + pulseRays},
	{name: "pulse, classes", tables: auditWater + "[surface.grid]\nclasses = [41]\n" + pulseRays},
	{name: "multiview", tables: auditWater + auditLevel + imageRays},
	{name: "multiview by angle, grid, times", tables: auditWater + "[surface.grid]\npoints = \"surface.csv\"\n[surface.gauge]\nfile = \"gauge.csv\"\n" + strings.Replace(imageRays, "cameras.csv", "timed.csv", 1) + "residual = \"equal\"\n", rename: map[string]string{"views": "seen"}},
	{name: "multiview, intersect, stations", tables: "[water]\nstations = \"stations.csv\"\n" + auditLevel + imageRays + "solve = \"intersect\"\n"},
	{name: "multiview from water", tables: auditWater + "[surface]\nlevel = -9\n" + strings.Replace(imageRays, "cameras.csv", "deep.csv", 1) + "camera_medium = \"water\"\n"},
	{name: "mixed", tables: "[water]\nstations = \"stations.csv\"\nzones = \"zones.geojson\"\ntemperature = 15\nsalinity = 10\n" + auditLevel +
		"[[sensor]]\nname = \"laser\"\nwhere = { classification = [40] }\nrays = { model = \"pulse\" }\n" +
		"[[sensor]]\nname = \"images\"\nwhere = { classification = [2, 41] }\nrays = { model = \"multiview\", cameras = \"cameras.csv\" }\n" +
		"[[sensor]]\nname = \"rest\"\nwhere = { classification = [9] }\nrays = { model = \"vertical\" }\n"},
	{name: "mapped columns", tables: auditWater + auditLevel + pulseRays + "[input.columns]\nx = \"easting\"\ny = \"Northing (m)\"\n[select.where]\n\"Northing (m)\" = [50]\n", rename: map[string]string{"x": "easting", "y": "Northing (m)"}},
	{name: "a coordinate selected as text", only: "csv", tables: auditWater + auditLevel + pulseRays + "[select.where]\ny = [\"50.000\"]\n"},
	{name: "no header", only: "csv", tables: auditWater + auditLevel + pulseRays + "[input.csv]\nnames = [" + `"x","y","z","gps_time","classification","origin_x","origin_y","origin_z","views","wl","note"` + "]\n"},
	{name: "diverted rows", only: "csv", input: "bad_rows = \"divert\"\n", tables: auditWater + auditLevel + pulseRays},
}

// noOrigins takes the cloud's own origins away.
var noOrigins = map[string]string{"origin_x": "ox", "origin_y": "oy", "origin_z": "oz"}

// job is the job's text for clouds of a format.
func (k *auditKind) job(format string) string {
	return "[input]\nfiles = [\"raw/*." + format + "\"]\ntime = \"utc\"\n" + k.input + "[output]\nfolder = \"true\"\n" + k.output + k.tables
}

// auditClouds are n points, at random, with all columns that a kind may want: some are
// dry, some have no position, some were seen by one camera alone.
func auditClouds(n int, stream uint64) string {
	var b bytes.Buffer
	b.WriteString("x,y,z,gps_time,classification,origin_x,origin_y,origin_z,views,wl,note\n")
	r := newRand(stream)
	for i := range n {
		x, y, z := 100*r.Float64(), 100*r.Float64(), 0.5-8*r.Float64()
		class := []int{2, 9, 40, 41}[i%4]
		if class == 41 {
			z = 0.1 + 0.05*math.Sin(x/9) + 0.01*r.NormFloat64()
		}
		text := fmt.Sprintf("%.3f", z)
		if i%97 == 13 {
			text = ""
		}
		if i%3 == 1 {
			y = 50
		}
		views := []string{"c1 c2 c3", "c4;c5;c2;c1", "c3", "c2 c5"}[r.IntN(4)]
		row(&b, fmt.Sprintf("%.3f", x), fmt.Sprintf("%.3f", y), text, fmt.Sprintf("%.3f", 1.9e9+float64(i)/4), fmt.Sprint(class),
			fmt.Sprintf("%.3f", x+60*r.Float64()-30), fmt.Sprintf("%.3f", y+60*r.Float64()-30), fmt.Sprintf("%.3f", 200+r.Float64()),
			views, fmt.Sprintf("%.2f", 0.1*r.Float64()), []string{"\"calm, clear\"", "", "x"}[i%3])
	}
	return b.String()
}

// auditFiles are the auxiliary files of all kinds.
func auditFiles() files {
	var surface, levels, flight, waterline [][]float64
	r := newRand(5)
	for i := range 1500 {
		x, y := 120*r.Float64()-10, 120*r.Float64()-10
		surface = append(surface, []float64{x, y, 0.1 * math.Sin(x/9)})
		if i%20 == 0 {
			levels = append(levels, []float64{50 + 2*r.Float64(), y, 0.3 - 0.001*y})
			waterline = append(waterline, []float64{x, y, 0.2 + 0.002*x})
		}
	}
	for i := range 200 {
		flight = append(flight, []float64{1.9e9 + float64(i), float64(i), 50, 200})
	}
	cameras := "c1,10,10,90,0,0,0\nc2,90,10,92,0.01,0,0\nc3,90,90,90,0,0.02,0\nc4,10,90,88,0,0,0.1\nc5,50,50,91,0,0,0\n"
	timed := "camera,x,y,z,time\n"
	for i, at := range [][2]int{{10, 10}, {90, 10}, {90, 90}, {10, 90}, {50, 50}} {
		timed += fmt.Sprintf("c%d,%d,%d,120,%d\n", i+1, at[0], at[1], 1900000060+10*i)
	}
	return files{
		"part.geojson":   polygonOf(0, 0, 80, 90),
		"gauge.csv":      "time,level\n1899990000,0.1\n1900000050,0.15\n1900000100,0.11\n1900003000,0.3\n",
		"flight.csv":     lines("gps_time,x,y,z", flight...),
		"waterline.csv":  lines("x,y,z", waterline...),
		"separation.csv": "x,y,z\n-10,-10,0.1\n60,-10,0.2\n130,-10,0.1\n-10,130,0\n60,130,0.05\n130,130,-0.1\n",
		"line.geojson":   `{"type":"LineString","coordinates":[[50,120],[52,60],[50,-20]]}`,
		"levels.csv":     lines("x,y,z", levels...),
		"stations.csv":   "x,y,temperature,salinity,depth\n20,20,16,30,0\n20,20,14,33,10\n80,70,17,31,0\n80,70,13,34,8\n",
		"zones.geojson":  collection(feature(`"name":"Mill Bight","temperature":12,"salinity":20`, [2]float64{0, 0}, [2]float64{60, 0}, [2]float64{60, 100}, [2]float64{0, 100})),
		"surface.csv":    lines("x,y,z", surface...),
		"cameras.csv":    "camera,x,y,z,omega,phi,kappa\n" + cameras,
		"timed.csv":      timed,
		"deep.csv":       "camera,x,y,z\nc1,10,10,-40\nc2,90,10,-40\nc3,90,90,-42\nc4,10,90,-40\nc5,50,50,-41\n",
	}
}

// run writes the kind's survey into a new folder, runs it and returns the folder.
func (k *auditKind) run(t *testing.T, format string) string {
	t.Helper()
	folder := t.TempDir()
	f := auditFiles()
	for i, name := range []string{"a", "b"} {
		f["raw/"+name+"."+format] = encode(t, format, k.cloud(400, uint64(30+i)))
	}
	f.write(t, folder)
	runJob(t, loadJob(t, folder, k.job(format)), Options{Workers: 2})
	return folder
}

// cloud has the kind's names for the columns.
func (k *auditKind) cloud(n int, stream uint64) string {
	header, rows, _ := strings.Cut(auditClouds(n, stream), "\n")
	names := strings.Split(header, ",")
	for i, name := range names {
		if other := k.rename[name]; other != "" {
			names[i] = other
		}
	}
	switch k.name {
	case "no header":
		return rows
	case "diverted rows":
		rows = "a,b,c\n" + strings.Replace(rows, ",200.", ",2oo.", 1) + "# the end\n"
	}
	return strings.Join(names, ",") + "\n" + rows
}

// audit audits below a folder, with two workers.
func audit(t *testing.T, path string, base ...string) *AuditReport {
	t.Helper()
	r, err := Audit(t.Context(), path, AuditOptions{Workers: 2, Base: strings.Join(base, "")})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// faultsOf are the faults of an output.
func (r *AuditReport) faultsOf(name string) string {
	for _, f := range r.Files {
		if f.Name == name {
			return strings.Join(f.Faults, "\n")
		}
	}
	return "not audited"
}

// edit changes an output as a table of texts, and gives its receipt the new hash where
// it is signed again.
func edit(t *testing.T, format, output string, sign bool, change func(tb *table)) {
	t.Helper()
	data, err := os.ReadFile(output)
	if err != nil {
		t.Fatal(err)
	}
	tb := decode(t, format, string(data))
	change(&tb)
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	if err := w.WriteAll(append([][]string{tb.names}, tb.rows...)); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	if format == "parquet" {
		text = parquetOf(t, text, 0, map[string]string{"outcome": "text", "model": "text", "view_source": "text", "water_source": "text", "run": "text", "views": "text", "note": "text"})
	}
	files{filepath.Base(output): text}.write(t, filepath.Dir(output))
	if sign {
		editReceipt(t, output, func(r *receipt.Receipt) {
			if r.Output.Bytes, r.Output.SHA256, err = receipt.Hash(t.Context(), output); err != nil {
				t.Fatal(err)
			}
		})
	}
}

// editReceipt changes an output's receipt.
func editReceipt(t *testing.T, output string, change func(r *receipt.Receipt)) {
	t.Helper()
	r := readReceipt(t, output)
	change(r)
	data, err := json.Marshal(r)
	if err != nil {
		t.Fatal(err)
	}
	files{filepath.Base(output) + receipt.Suffix: string(data)}.write(t, filepath.Dir(output))
}

// eachKind runs a test for every kind and format.
func eachKind(t *testing.T, test func(t *testing.T, k *auditKind, format string)) {
	for i := range auditKinds {
		k := &auditKinds[i]
		for _, format := range formats {
			if k.only == "" || k.only == format {
				t.Run(k.name+"/"+format, func(t *testing.T) {
					t.Parallel()
					test(t, k, format)
				})
			}
		}
	}
}

// set writes a field of the first row with an outcome.
func (tb *table) set(t *testing.T, outcome, name string, value func(old string) string) (row int) {
	t.Helper()
	column := slices.Index(tb.names, name)
	if column < 0 {
		t.Fatalf("no column %q among %q", name, tb.names)
	}
	for i := range tb.rows {
		if tb.text(t, i, "outcome") == outcome {
			tb.rows[i][column] = value(tb.rows[i][column])
			return i + 1
		}
	}
	t.Fatalf("no row is %s", outcome)
	return 0
}

func outcomesOf(r *receipt.Receipt) []string { return slices.Sorted(maps.Keys(r.Outcomes)) }
