package pipeline

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
	"time"

	"bentray/pipeline/job"
)

// describeText describes the surface of a job with these tables and files.
func describeText(t *testing.T, tables string, f files) (*SurfaceReport, error) {
	t.Helper()
	folder := t.TempDir()
	f.write(t, folder)
	j := loadJob(t, folder, "[output]\nfolder = \"true\"\n[rays]\nmodel = \"vertical\"\n"+tables)
	return DescribeSurface(context.Background(), j, nil)
}

func described(t *testing.T, tables string, f files) *SurfaceReport {
	t.Helper()
	r, err := describeText(t, tables, f)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

const metres = "[input]\nfiles = [\"raw/*.csv\"]\n[water]\ntemperature = 10\nsalinity = 0\n"

func closeTo(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s is %.9g, want %.9g within %g", what, got, want, tolerance)
	}
}

// waterlineOf writes points on both banks of a river, and tells which are wrong.
func waterlineOf(n int, surface func(x, y float64) float64, noise float64) (text string, wrong []bool) {
	r := rand.New(rand.NewPCG(seed, 4))
	var b strings.Builder
	b.WriteString("x,y,z\n")
	wrong = make([]bool, n)
	for i := range n {
		x, y := 600*r.Float64(), 40*float64(i%2)
		z := surface(x, y) + noise*r.NormFloat64()
		if wrong[i] = r.Float64() < 0.12; wrong[i] {
			z += 0.1 + 1.9*r.Float64()
		}
		fmt.Fprintf(&b, "%s,%s,%s\n", exact(x), exact(y), exact(z))
	}
	return b.String(), wrong
}

// A plane through 400 points with 4 mm of noise: the standard errors of least squares
// over the right ones by hand (Gauss 1823: sigma over the root of n, and over the
// root of the sums of squared distances), the blunders those that were made.
func TestDescribeFittedPlane(t *testing.T) {
	const noise = 0.004
	text, wrong := waterlineOf(400, func(x, y float64) float64 { return 1.2 - 6e-4*x + 2e-4*y }, noise)
	r := described(t, metres+"[surface.plane]\nwaterline = \"line.csv\"\n", files{"line.csv": text})
	p := r.Plane
	if p == nil || p.Fit == nil || r.Level != nil || r.Profile != nil || r.Grid != nil || r.Gauge != nil || r.Zones != nil {
		t.Fatalf("report is %+v, want a fitted plane alone", r)
	}
	n, bad, square, largest := 0.0, 0, 0.0, 0.0
	var sumX, sumXX, sumY, sumYY float64
	for i, at := range p.Fit.Points {
		if at.Aside != wrong[i] {
			t.Errorf("point %d: set aside is %v, want %v", i, at.Aside, wrong[i])
		}
		own := at.Z - (p.Level + p.SlopeX*(at.X-p.AtX) + p.SlopeY*(at.Y-p.AtY))
		closeTo(t, "residual", at.Residual, own, 1e-9)
		if wrong[i] {
			bad++
			continue
		}
		n++
		square += own * own
		largest = max(largest, math.Abs(own))
		sumX, sumXX, sumY, sumYY = sumX+at.X, sumXX+at.X*at.X, sumY+at.Y, sumYY+at.Y*at.Y
	}
	if p.Fit.Used != int(n) || p.Fit.SetAside != bad {
		t.Errorf("%d used and %d set aside, want %g and %d", p.Fit.Used, p.Fit.SetAside, n, bad)
	}
	closeTo(t, "rms", p.Fit.RMS, math.Sqrt(square/n), 1e-9)
	closeTo(t, "largest", p.Fit.Largest, largest, 1e-9)
	closeTo(t, "level", p.Level, 1.2-6e-4*p.AtX+2e-4*p.AtY, 0.001)
	closeTo(t, "sigma of the level", p.LevelSigma, noise/math.Sqrt(n), 0.15*noise/math.Sqrt(n))
	sigmaX, sigmaY := noise/math.Sqrt(sumXX-sumX*sumX/n), noise/math.Sqrt(sumYY-sumY*sumY/n)
	closeTo(t, "sigma of slope_x", p.SlopeXSigma, sigmaX, 0.15*sigmaX)
	closeTo(t, "sigma of slope_y", p.SlopeYSigma, sigmaY, 0.15*sigmaY)
	slope, bearing := p.Fall()
	closeTo(t, "fall", slope, math.Sqrt(36e-8+4e-8), 3e-5)
	closeTo(t, "bearing", bearing, 90+math.Atan2(2, 6)*180/math.Pi, 3) // to the east and somewhat south
	for i, level := range r.Map.Levels {
		x, y := r.Map.X[i%len(r.Map.X)], r.Map.Y[i/len(r.Map.X)]
		closeTo(t, "map", level, p.Level+p.SlopeX*(x-p.AtX)+p.SlopeY*(y-p.AtY), 1e-12)
	}
	if len(r.Map.X) != 200 || len(r.Map.Y) > 14 || r.Map.X[0] < 0 || r.Map.X[199] > 600 {
		t.Errorf("the map has %d by %d places from %g to %g", len(r.Map.X), len(r.Map.Y), r.Map.X[0], r.Map.X[199])
	}
}

// The same water in feet is the same water: lengths are divided, slopes stay.
func TestDescribeInFeet(t *testing.T) {
	metric, feet := "x,y,z\n", "x,y,z\n"
	for i, at := range [][3]float64{{0, 0, 1}, {100, 0, 0.9}, {0, 50, 1.1}, {100, 50, 1.004}, {50, 25, 1.002}, {20, 40, 1.05}} {
		at[2] += 0.001 * float64(i%2)
		metric += fmt.Sprintf("%s,%s,%s\n", exact(at[0]), exact(at[1]), exact(at[2]))
		feet += fmt.Sprintf("%s,%s,%s\n", exact(at[0]/foot), exact(at[1]/foot), exact(at[2]/foot))
	}
	const tables = "[surface.plane]\nwaterline = \"line.csv\"\n"
	a := described(t, metres+tables, files{"line.csv": metric})
	b := described(t, strings.Replace(metres, "[input]", "[input]\nunit = \"ft\"", 1)+tables, files{"line.csv": feet})
	if b.Unit != "ft" || b.VerticalUnit != "ft" {
		t.Errorf("units are %q and %q, want ft", b.Unit, b.VerticalUnit)
	}
	closeTo(t, "level", b.Plane.Level*foot, a.Plane.Level, 1e-9)
	closeTo(t, "place", b.Plane.AtX*foot, a.Plane.AtX, 1e-9)
	closeTo(t, "slope", b.Plane.SlopeX, a.Plane.SlopeX, 1e-12)
	closeTo(t, "sigma of the level", b.Plane.LevelSigma*foot, a.Plane.LevelSigma, 1e-9)
	closeTo(t, "sigma of the slope", b.Plane.SlopeXSigma, a.Plane.SlopeXSigma, 1e-12)
	closeTo(t, "rms", b.Plane.Fit.RMS*foot, a.Plane.Fit.RMS, 1e-9)
	closeTo(t, "map", b.Map.Level.High*foot, a.Map.Level.High, 1e-9)
	closeTo(t, "map's edge", b.Map.X[0]*foot, a.Map.X[0], 1e-9)
}

// A river of two straight legs of 300 m and 400 m at a right angle, falling by 1 mm in
// a metre of its way: chainages and levels by hand.
func TestDescribeProfile(t *testing.T) {
	const line = `{"type":"LineString","coordinates":[[0,0],[300,0],[300,400]]}`
	r := rand.New(rand.NewPCG(seed, 5))
	text, far := "x,y,z\n", 0
	for i := range 200 {
		along := 700 * (float64(i) + r.Float64()) / 200
		x, y, off := along, 8.0, 0.0
		if along > 300 {
			x, y = 308, along-300
		}
		if along > 280 && along < 320 { // near the bend the nearest point is another
			x, y = 150, 8
			along = 150
		}
		switch i % 20 {
		case 7:
			off = 0.5
		case 13:
			x, y = -500, -500
			far++
		}
		text += fmt.Sprintf("%s,%s,%s\n", exact(x), exact(y), exact(2-along/1000+off))
	}
	p := described(t, metres+"[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = 50\n", files{"line.geojson": line, "levels.csv": text}).Profile
	if p == nil || !p.Falling || p.Beyond != far || p.Fit.SetAside != 10 || p.Fit.Used != 200-far-10 {
		t.Fatalf("profile is falling %v, %d beyond, %d aside, %d used, want falling, %d, 10 and the rest", p.Falling, p.Beyond, p.Fit.SetAside, p.Fit.Used, far)
	}
	closeTo(t, "length", p.Length, 700, 1e-9)
	for _, at := range p.Fit.Points {
		if math.IsNaN(at.Chainage) {
			continue
		}
		want := at.X
		if at.X > 300 {
			want = 300 + at.Y
		}
		closeTo(t, "chainage", at.Chainage, want, 1e-9)
		if !at.Aside {
			closeTo(t, "residual", at.Residual, 0, 0.004)
		}
	}
	for _, at := range p.Curve {
		closeTo(t, "level along the line", at.Level, 2-at.Chainage/1000, 0.004)
	}
	if p.First != p.Curve[0] || p.Last != p.Curve[len(p.Curve)-1] || p.First.Chainage > 4 || p.Last.Chainage < 696 {
		t.Errorf("ends are %+v and %+v, want those of the curve", p.First, p.Last)
	}
}

// levelsIn returns a file of levels along the x axis, each 5 from 0 to 1000.
func levelsIn(level func(x float64) float64) string {
	text := "x,y,z\n"
	for x := 0.0; x <= 1000; x += 5 {
		text += fmt.Sprintf("%s,%s,%s\n", exact(x), exact(3), exact(level(x)))
	}
	return text
}

// A weir in feet between two pools, and a wrong level at either end: the curve runs from
// the first to the last that counts, level but for the weir, and nothing is cautioned.
// Where levels rise and fall instead, a caution says by how much, in feet.
func TestDescribeWeir(t *testing.T) {
	const tables = "[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = 50\n"
	feet := strings.Replace(metres, "[input]", "[input]\nunit = \"ft\"", 1)
	const line = `{"type":"LineString","coordinates":[[0,0],[1000,0]]}`
	weir := func(x float64) float64 {
		switch {
		case x == 0:
			return 3
		case x == 1000:
			return 30
		case x <= 500:
			return 20
		}
		return 12
	}
	r := described(t, feet+tables, files{"line.geojson": line, "levels.csv": levelsIn(weir)})
	p := r.Profile
	if p.Fit.SetAside != 2 || len(r.Cautions) != 0 {
		t.Errorf("%d set aside, cautions %q, want 2 and none", p.Fit.SetAside, r.Cautions)
	}
	if len(p.Steps) != 1 || p.Steps[0].From != 500 || p.Steps[0].To != 505 {
		t.Fatalf("steps are %v, want one from 500 to 505 ft", p.Steps)
	}
	closeTo(t, "height of the weir", p.Steps[0].Fall, 8, 2e-3)
	closeTo(t, "longest gap", p.Gap.To-p.Gap.From, 5, 1e-9)
	closeTo(t, "first", p.First.Chainage, 5, 1e-9)
	closeTo(t, "last", p.Last.Chainage, 995, 1e-9)
	for _, at := range p.Curve {
		switch {
		case at.Chainage <= 500:
			closeTo(t, "upper pool", at.Level, 20, 1e-3)
		case at.Chainage >= 505:
			closeTo(t, "lower pool", at.Level, 12, 1e-3)
		}
	}
	r = described(t, feet+tables, files{"line.geojson": line, "levels.csv": levelsIn(func(x float64) float64 { return 20 + math.Sin(x/60) })})
	if len(r.Cautions) != 1 || !strings.Contains(r.Cautions[0], "ft (rms) off the profile") {
		t.Errorf("cautions are %q, want one of levels that rise and fall", r.Cautions)
	}
}

// Two levels of a river in feet tell nothing of their errors, which a caution says. A weir
// of 4 ft in a gap of 100 ft has no place, which another one says.
func TestDescribeTooFewLevels(t *testing.T) {
	const tables = "[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = 50\n"
	feet := strings.Replace(metres, "[input]", "[input]\nunit = \"ft\"", 1)
	const line = `{"type":"LineString","coordinates":[[0,0],[1000,0]]}`
	r := described(t, feet+tables, files{"line.geojson": line, "levels.csv": "x,y,z\n0,0,10\n800,0,9\n"})
	if f := r.Profile.Fit; !math.IsNaN(f.Sigma) || !math.IsNaN(r.Profile.First.Sigma) || f.Used != 2 {
		t.Errorf("sigma is %v, at the start %v, want none from 2 points", f.Sigma, r.Profile.First.Sigma)
	}
	closeTo(t, "start of the gap", r.Profile.Gap.From, 0, 1e-9)
	closeTo(t, "end of the gap", r.Profile.Gap.To, 800, 1e-9)
	closeTo(t, "fall in the gap", r.Profile.Gap.Fall, 1, 1e-9)
	if want := "2 level points only: a blunder among them would not show"; len(r.Cautions) != 1 || r.Cautions[0] != want {
		t.Errorf("cautions are %q, want %q", r.Cautions, want)
	}
	text := "x,y,z\n"
	for x := 0.0; x <= 1000; x += 20 {
		switch {
		case x <= 400:
			text += fmt.Sprintf("%g,0,20\n", x)
		case x >= 500:
			text += fmt.Sprintf("%g,0,16\n", x)
		}
	}
	r = described(t, feet+tables, files{"line.geojson": line, "levels.csv": text})
	if want := "the level changes by 4.000 ft between level points at 400.0 and 500.0 ft along"; len(r.Cautions) != 1 || !strings.HasPrefix(r.Cautions[0], want) {
		t.Errorf("cautions are %q, want %q", r.Cautions, want)
	}
	if len(r.Profile.Steps) != 0 {
		t.Errorf("steps are %v, want none", r.Profile.Steps)
	}
}

// Zones, two gauges and a separation over a level: each figure by hand, and the map
// at the record in the middle of the time, where one of the gauges is in a gap.
func TestDescribeWhatLiesOverALevel(t *testing.T) {
	f := files{
		"zones.geojson": `{"type":"FeatureCollection","features":[
			{"type":"Feature","properties":{"name":"lock","level":3.5},"geometry":{"type":"Polygon","coordinates":[[[0,0],[40,0],[40,40],[0,40],[0,0]]]}},
			{"type":"Feature","properties":{"name":"brook","temperature":8,"salinity":0},"geometry":{"type":"Polygon","coordinates":[[[60,0],[90,0],[90,40],[60,40],[60,0]]]}}]}`,
		"gauge.csv": "time,level,name,x,y\n" +
			"2026-05-01T10:00:00Z,1.0,weir,0,0\n2026-05-01T10:10:00Z,1.2,weir,0,0\n2026-05-01T10:40:00Z,1.4,weir,0,0\n" +
			"2026-05-01T10:00:00Z,2.0,mouth,100,0\n2026-05-01T10:20:00Z,2.4,mouth,100,0\n2026-05-01T10:40:00Z,2.0,mouth,100,0\n",
		"geoid.csv": "x,y,z\n0,-10,40\n100,-10,40.5\n0,50,40\n100,50,40.5\n",
	}
	r := described(t, strings.Replace(metres, "[water]", "[water]\nzones = \"zones.geojson\"", 1)+`
[surface]
level = 0.25
[surface.gauge]
file = "gauge.csv"
zero = -1
max_gap = 1500
[surface.separation]
file = "geoid.csv"
`, f)
	if z := r.Zones; z == nil || z.Count != 2 || z.WithLevel != 1 || z.Level != (Range{3.5, 3.5}) {
		t.Errorf("zones are %+v, want 2, one with a level of 3.5", z)
	}
	g := r.Gauge
	if g == nil || len(g.Series) != 2 || g.Series[1].Name != "mouth" || g.Records != 6 || g.LongestGap != 1800 || g.Gaps != 1 {
		t.Fatalf("gauge is %+v, want two with 6 records and a gap of 1800 s", g)
	}
	closeTo(t, "lowest level of the gauges", g.Level.Low, 0, 1e-12)
	closeTo(t, "highest level of the gauges", g.Level.High, 1.4, 1e-12)
	from := time.Date(2026, 5, 1, 10, 0, 0, 0, time.UTC)
	if !g.From.Equal(from) || !g.To.Equal(from.Add(40*time.Minute)) {
		t.Errorf("times are %v to %v", g.From, g.To)
	}
	if s := r.Separation; s == nil || s.Range != (Range{40, 40.5}) || s.Extent != (Extent{Range{0, 100}, Range{-10, 50}}) {
		t.Errorf("separation is %+v", s)
	}
	m := r.Map
	if m == nil || m.At == nil || !m.At.Equal(from.Add(20*time.Minute)) || len(m.Outlines) != 2 {
		t.Fatalf("map is %+v, want one at 10:20 with two outlines", m)
	}
	// At 10:20 the weir is in a gap, so the mouth alone counts: 2.4 - 1.
	for i, level := range m.Levels {
		x, y, base := m.X[i%len(m.X)], m.Y[i/len(m.X)], 0.25
		if x < 40 && y > 0 && y < 40 {
			base = 3.5
		}
		closeTo(t, fmt.Sprintf("level at %g %g", x, y), level, base+1.4+40+0.005*x, 1e-9)
	}
	if len(m.X) != 200 || len(m.Y) != 120 {
		t.Errorf("the map has %d by %d places, want 200 by 120 of the separation", len(m.X), len(m.Y))
	}
}

// A gauge alone, and two zones of which one has a level: the map shows both with a tenth
// of their extent around, and the range of levels is that of gauge and zone together.
func TestDescribeZonesOverAGauge(t *testing.T) {
	r := described(t, strings.Replace(metres, "[water]", "[water]\nzones = \"zones.geojson\"", 1)+"[surface.gauge]\nfile = \"gauge.csv\"\n", files{
		"zones.geojson": `{"type":"FeatureCollection","features":[
			{"type":"Feature","properties":{"name":"basin","level":1.5},"geometry":{"type":"Polygon","coordinates":[[[0,0],[40,0],[40,40],[0,40],[0,0]]]}},
			{"type":"Feature","properties":{"name":"bay","temperature":8,"salinity":0},"geometry":{"type":"Polygon","coordinates":[[[360,0],[400,0],[400,80],[360,80],[360,0]]]}}]}`,
		"gauge.csv": "time,level,x,y\n1000,0.25,90000,0\n1600,0.25,90000,0\n", // one gauge holds everywhere
	})
	m := r.Map
	if m == nil {
		t.Fatal("there is no map, want one around the zones")
	}
	closeTo(t, "western edge", m.X[0], -40, 480.0/200)
	closeTo(t, "eastern edge", m.X[len(m.X)-1], 440, 480.0/200)
	closeTo(t, "southern edge", m.Y[0], -40, 480.0/200)
	closeTo(t, "northern edge", m.Y[len(m.Y)-1], 120, 480.0/200)
	if m.Level != (Range{0.25, 1.75}) {
		t.Errorf("levels are %v, want 0.25 of the gauge to 1.75 with the zone", m.Level)
	}
}

// A grid over points of a plane with an offset: counts and the level by hand.
func TestDescribeGrid(t *testing.T) {
	text := "x,y,z\n"
	for i := range 40 {
		for k := range 30 {
			text += fmt.Sprintf("%d,%d,%s\n", i, k, exact(0.3+0.001*float64(i)))
		}
	}
	r := described(t, metres+"[surface.grid]\npoints = \"points.csv\"\ncell = 5\noffset = 0.05\n", files{"points.csv": text})
	g := r.Grid
	if g == nil || g.Points != 1200 || g.Ignored != 0 || g.Cell != 5 || g.Reach != 5 || g.Window != 2 || g.Offset != 0.05 || g.Extent != (Extent{Range{0, 39}, Range{0, 29}}) {
		t.Fatalf("grid is %+v", g)
	}
	closeTo(t, "lowest level", g.Level.Low, 0.35+0.001*r.Map.X[0], 1e-9)
	closeTo(t, "highest level", g.Level.High, 0.35+0.001*r.Map.X[199], 1e-9)
	if g.Cells < 8*6 || g.Patches != g.Cells {
		t.Errorf("%d cells and %d patches, want 48 or more, and as many", g.Cells, g.Patches)
	}
}

func TestDescribePlainSurfaces(t *testing.T) {
	level := described(t, metres+"[surface]\nlevel = 0.42\n", nil)
	if level.Level == nil || *level.Level != 0.42 || level.Map != nil {
		t.Errorf("report is %+v, want a level and no map", level)
	}
	column := described(t, metres+"[surface]\ncolumn = \"tide\"\n", nil)
	if column.Column != "tide" || column.Map != nil {
		t.Errorf("report is %+v, want a column and no map", column)
	}
	given := described(t, metres+"[extent]\npolygons = \"water.geojson\"\n[surface.plane]\nlevel = 1\nat = [0, 0]\nslope_x = 0.001\n", files{"water.geojson": polygonOf(0, 0, 9, 9)})
	if given.Plane == nil || given.Plane.Fit != nil || !math.IsNaN(given.Plane.LevelSigma) || given.Map == nil {
		t.Errorf("report is %+v, want a given plane and its map over the extent", given)
	}
	if slope, bearing := given.Plane.Fall(); slope != 0.001 || bearing != 270 {
		t.Errorf("it falls by %g towards %g, want 0.001 towards 270", slope, bearing)
	}
}

// A surface that cannot be made is a wrong job.
func TestDescribeRefuses(t *testing.T) {
	for name, c := range map[string]struct {
		tables, want string
		files        files
	}{
		"no file":  {"[surface.plane]\nwaterline = \"line.csv\"\n", "no such file", nil},
		"one bank": {"[surface.plane]\nwaterline = \"line.csv\"\n", "want points on both banks", files{"line.csv": "x,y,z\n0,0,1\n10,0,1\n20,0,1\n30,0,1\n"}},
		"no cloud": {"[surface.grid]\nclasses = [41]\n", "matches no file", nil},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := describeText(t, metres+c.tables, c.files)
			var call *CallError
			if !errors.As(err, &call) || !strings.Contains(err.Error(), c.want) {
				t.Errorf("error is %v, want a CallError with %q", err, c.want)
			}
		})
	}
}

func TestDescribeStops(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	folder := t.TempDir()
	files{"line.csv": "x,y,z\n0,0,1\n10,0,1\n10,9,1\n"}.write(t, folder)
	j := loadJob(t, folder, metres+"[output]\nfolder = \"true\"\n[rays]\nmodel = \"vertical\"\n[surface.plane]\nwaterline = \"line.csv\"\n")
	if _, err := DescribeSurface(ctx, j, nil); !errors.Is(err, context.Canceled) {
		t.Errorf("error is %v, want that of the context", err)
	}
}

func TestCheckPicture(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.png": "", "line.csv": ""}.write(t, folder)
	j := &job.Job{Path: folder + "/job.png", Dir: folder}
	j.Surface.Plane = &job.Plane{Waterline: "line.PNG"}
	j.Input.Files = []string{"raw/*"}
	j.Output.Folder = "true"
	for path, want := range map[string]string{
		folder + "/surface.png": "", folder + "/SURFACE.PNG": "",
		folder + "/surface.jpg": "ends in .png", folder + "/./job.png": "would overwrite", folder + "/line.PNG": "would overwrite", folder + "/raw/a.png": "would overwrite",
	} {
		err := CheckPicture(j, path)
		if want == "" && err != nil || want != "" && (err == nil || !strings.Contains(err.Error(), want)) {
			t.Errorf("%s: error is %v, want %q", path, err, want)
		}
	}
}
