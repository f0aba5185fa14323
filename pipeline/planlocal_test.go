package pipeline

import (
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"
)

// A plan sums up what the job names beside the clouds.
func TestPlanListsLocalWater(t *testing.T) {
	f := files{
		"raw/a.csv":     "x,y,z,gps_time\n500,6,-10,1777629600\n",
		"gauge.csv":     "time,level,x,y\n2026-05-01T10:00:00Z,1,0,0\n2026-05-01T12:00:00Z,2,0,0\n2026-05-01T09:00:00Z,0.5,3,4\n2026-05-01T10:30:00Z,1.5,3,4\n",
		"stations.csv":  "x,y,temperature,salinity,time,depth\n0,0,9,30,2026-05-01T08:00:00Z,0\n0,0,8,31,2026-05-01T08:00:00Z,20\n5,5,10,29,2026-05-01T11:00:00Z,1\n",
		"zones.geojson": zonesFile([]place{{"Pond", [][2]float64{{0, 0}, {1, 0}, {1, 1}}, 5, 1, nan}, {"Weir", [][2]float64{{8, 8}, {9, 8}, {9, 9}}, nan, nan, 3}}),
	}
	job := "[input]\nfiles = [\"raw/*.csv\"]\nunit = \"ft\"\ntime = \"utc\"\n[output]\nfolder = \"true\"\n[rays]\nmodel = \"vertical\"\n" +
		"[water]\nstations = \"stations.csv\"\nzones = \"zones.geojson\"\nmax_gap = 7200\n[surface.gauge]\nfile = \"gauge.csv\"\nzero = -4\nmax_gap = 6000\n"
	p := planOf(t, f, job)
	if z := p.Zones; z == nil || z.Count != 2 || z.WithLevel != 1 || z.Level != (Range{3, 3}) {
		t.Errorf("zones are %+v", z)
	}
	hour := func(h, m int) time.Time { return time.Date(2026, 5, 1, h, m, 0, 0, time.UTC) }
	st := p.Stations
	if st == nil || st.Stations != 2 || st.Records != 3 || !st.Timed || !st.From.Equal(hour(8, 0)) || !st.To.Equal(hour(11, 0)) || st.MaxGap != 7200 || !st.Casts ||
		st.Temperature != (Range{8, 10}) || st.Salinity != (Range{29, 31}) {
		t.Fatalf("stations are %+v", st)
	}
	near(t, 0, "the deepest record in feet", st.Depth.High, 20, 1e-12)
	near(t, 0, "the shallowest record", st.Depth.Low, 0, 0)
	g := p.Gauge
	if g == nil || g.Records != 4 || len(g.Series) != 2 || !g.From.Equal(hour(9, 0)) || !g.To.Equal(hour(12, 0)) || g.Gaps != 1 || g.LongestGap != 7200 {
		t.Fatalf("gauge is %+v", g)
	}
	near(t, 0, "the least level", g.Level.Low, -3.5, 1e-12)
	near(t, 0, "the greatest level", g.Level.High, -2, 1e-12)
	second := &g.Series[1]
	near(t, 1, "y of the second gauge in feet", second.Y, 4, 1e-12)
	if from, to := second.Times(); !from.Equal(hour(9, 0)) || !to.Equal(hour(10, 30)) || second.X < 2.9 {
		t.Errorf("the second gauge is at x %g from %v to %v", second.X, from, to)
	}
	if plain := planOf(t, spread(500, 600, 2500, 2600), tinyJob(`"raw/*.csv"`, "true")); plain.Zones != nil || plain.Stations != nil || plain.Gauge != nil {
		t.Errorf("without them there are %v, %v and %v", plain.Zones, plain.Stations, plain.Gauge)
	}
}

// Points are counted by sensor in the plan, the receipts and the summary; a sensor that
// made none is named, in a run when it made none in any file.
func TestSensorCounts(t *testing.T) {
	folder := t.TempDir()
	const head = "x,y,z,strip\n"
	files{
		"raw/a.csv": head + "500,6,-10,north\n500,6,-10,north\n500,6,5,north\n,6,-10,north\n500,6,-10,east\n",
		"raw/b.csv": head + "500,6,-10,south\n",
	}.write(t, folder)
	sensor := func(name string) string {
		return "[[sensor]]\nname = \"" + name + "\"\nwhere.strip = [\"" + name + "\"]\nrays.model = \"vertical\"\n"
	}
	j := loadJob(t, folder, "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"true\"\n"+seaWater+"[surface]\nlevel = 0\n"+sensor("north")+sensor("south")+sensor("west"))
	p, err := MakePlan(t.Context(), j, nil)
	if err != nil {
		t.Fatal(err)
	}
	counts := map[string]int64{}
	for _, sn := range p.Sensors {
		counts[sn.Name] = sn.Points
	}
	all := map[string]int64{"north": 3, "south": 1, "west": 0}
	if !maps.Equal(counts, all) {
		t.Errorf("the plan counts %v, want %v", counts, all)
	}
	if want := `sensor "west" fits none of the first 6 points of the files`; !slices.Contains(p.Cautions, want) {
		t.Errorf("the plan cautions %q, want %q", p.Cautions, want)
	}
	for range 2 { // the second time all is done already
		s := runJob(t, j, Options{})
		if want := []string{`sensor "west" fits no point of these files`}; !maps.Equal(s.Sensors, all) || !slices.Equal(s.Cautions, want) {
			t.Errorf("the summary counts %v and cautions %q, want %v and %q", s.Sensors, s.Cautions, all, want)
		}
	}
	for name, want := range map[string]map[string]int64{"a": {"north": 3, "south": 0, "west": 0}, "b": {"north": 0, "south": 1, "west": 0}} {
		if got := readReceipt(t, filepath.Join(folder, "true", name+".csv")).Sensors; !maps.Equal(got, want) {
			t.Errorf("the receipt of %s counts %v, want %v", name, got, want)
		}
	}
	none, err := MakePlan(t.Context(), loadJob(t, folder, "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"other\"\n[select]\nwhere.strip = [\"up\"]\n"+seaWater+"[surface]\nlevel = 0\n"+sensor("north")), nil)
	if err != nil || slices.ContainsFunc(none.Cautions, func(text string) bool { return strings.Contains(text, "sensor") }) {
		t.Errorf("where no point is selected the plan cautions %q (%v), want nothing on sensors", none.Cautions, err)
	}
	if _, r := correctText(t, tiny, tinyJob(`"raw/*.csv"`, "true")); r.Sensors != nil {
		t.Errorf("a job without named sensors counts %v", r.Sensors)
	}
}

// A plan of files that cannot be read says why, and of empty ones that they are.
func TestPlanWithoutPoints(t *testing.T) {
	broken := planOf(t, files{"raw/a.csv": "x,y,z\n", "raw/b.csv": "x,y,height\n1,2,3\n"}, strings.Replace(quickTiny, "pulse", "vertical", 1))
	if len(broken.Cautions) != 1 || !strings.HasPrefix(broken.Cautions[0], "no point could be read: ") ||
		!strings.HasSuffix(broken.Cautions[0], "raw/b.csv: no column for z; the columns are x, y, height; name it in [input.columns]") {
		t.Errorf("cautions are %q", broken.Cautions)
	}
	empty := planOf(t, files{"raw/a.csv": "x,y,z\n", "raw/b.csv": "x,y,z\n"}, strings.Replace(quickTiny, "pulse", "vertical", 1))
	if want := []string{"the files hold no points"}; !slices.Equal(empty.Cautions, want) {
		t.Errorf("cautions are %q, want %q", empty.Cautions, want)
	}
}

var quickTiny = tinyJob(`"raw/*.csv"`, "true")

// Stations and gauges in another place, system or unit than the cloud.
func TestPlacesFarFromTheCloud(t *testing.T) {
	stations := func(places string) files {
		f := spread(500000, 6000000, 500900, 6000900)
		f["stations.csv"] = "x,y,temperature,salinity\n"
		for _, place := range strings.Fields(places) {
			f["stations.csv"] += place + ",10,30\n"
		}
		return f
	}
	gauges := func(places string) files {
		f := files{"raw/a.csv": "x,y,z,gps_time\n500000,6000000,-5,50\n500900,6000900,-5,50\n", "gauge.csv": "time,level,x,y\n"}
		for _, place := range strings.Fields(places) {
			f["gauge.csv"] += "0,1," + place + "\n100,1," + place + "\n"
		}
		return f
	}
	const (
		end     = "; are both in one projected system and unit?"
		degrees = "the stations (x 10.1 to 10.3, y 54.1 to 54.2) look like degrees beside the points (x 500000.0 to 500900.0, y 6000000.0 to 6000900.0)" + end
	)
	byStations := strings.Replace(strings.Replace(pulseJob, "pulse", "vertical", 1)+"[surface]\nlevel = 0\n", "[air]", "[water]\nstations = \"stations.csv\"\n[air]", 1)
	inFeet := strings.Replace(byStations, "[output]", "unit = \"ft\"\n[output]", 1)
	for _, c := range []struct {
		name, job string
		files     files
		want      []string
	}{
		{"stations within", byStations, stations("500100,6000100"), nil},
		{"one of them near", byStations, stations("10.1,54.1 549000,6000000"), nil},
		{"49 km off on both axes is too far", byStations, stations("451000,5951000 900000,9000000"), []string{"the stations all lie far from the points, the nearest 69 km" + end}},
		{"49 km off", byStations, stations("549900,6000900"), nil},
		{"51 km off", byStations, stations("500500,6051900"), []string{"the stations all lie far from the points, the nearest 51 km" + end}},
		{"160 000 feet off", inFeet, stations("500500,6160000"), nil},
		{"170 000 feet off", inFeet, stations("500500,6170900"), []string{"the stations all lie far from the points, the nearest 52 km" + end}},
		{"degrees", byStations, stations("10.1,54.1 10.3,54.2"), []string{degrees}},
		{"gauges", quickJob, gauges("100000,6000000 500000,5000000"), []string{"the gauges all lie far from the points, the nearest 400 km" + end}},
		{"gauges near", quickJob, gauges("480000,6000000 500000,5000000"), nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			if p := planOf(t, c.files, c.job); !slices.Equal(p.Cautions, c.want) {
				t.Errorf("cautions are %q, want %q", p.Cautions, c.want)
			}
		})
	}
}

// In a local system small numbers are no degrees: the cloud has them too, or is near.
func TestSmallCoordinatesAreNoDegrees(t *testing.T) {
	f := spread(0, 0, 900, 900)
	f["stations.csv"] = "x,y,temperature,salinity\n50,60,10,30\n"
	job := strings.Replace(strings.Replace(pulseJob, "pulse", "vertical", 1)+"[surface]\nlevel = 0\n", "[air]", "[water]\nstations = \"stations.csv\"\n[air]", 1)
	if p := planOf(t, f, job); len(p.Cautions) > 0 {
		t.Errorf("cautions are %q, want none", p.Cautions)
	}
}
