package pipeline

import (
	"errors"
	"slices"
	"strings"
	"testing"
	"time"
)

// The map of a surface with a gauge shows the middle of the clouds' times; where they
// are not there or have none, the time that the job names; else the record nearest to
// the middle. The level follows by hand.
func TestDescribeMoment(t *testing.T) {
	const (
		gauge  = "time,level\n1000,1\n1900,10\n3000,21\n"
		tables = "[extent]\npolygons = \"water.geojson\"\n[surface.plane]\nlevel = 0\nat = [0, 0]\n[surface.gauge]\nfile = \"gauge.csv\"\n"
		timed  = "x,y,z,gps_time\n5,6,-1,1200\n5,6,-1,1300\n"
		at     = "at = 1970-01-01T00:25:00Z\n" // 1500 s
		middle = "the middle of the clouds' first times"
		named  = "the time that [surface.gauge] at names"
		record = "the gauge's record nearest to the middle of all"
		missed = "; no gauge has a level at the middle of the clouds' first times, "
	)
	inUTC := strings.Replace(metres, "[input]\n", "[input]\ntime = \"utc\"\n", 1)
	for _, c := range []struct {
		name     string
		clouds   files
		keys     string
		utc      int64
		why      string
		level    float64
		cautions []string
	}{
		{"clouds", files{"raw/a.csv": timed, "raw/b.csv": strings.ReplaceAll(timed, ",1", ",2")}, "", 1750, middle, 8.5, nil}, // 1200 to 2300
		{"clouds beside at", files{"raw/a.csv": timed}, at, 1250, middle, 3.5, []string{atNotUsed}},
		{"at beside clouds without times", files{"raw/a.csv": "x,y,z\n5,6,-1\n"}, at, 1500, named, 6, nil},
		{"at and no clouds", nil, at, 1500, named, 6, nil},
		{"neither", nil, "", 1900, record, 10, nil},
		{"clouds that cannot be read", files{"raw/a.csv": "x,y,z,gps_time\n5,6,-1,noon\n"}, "", 1900, record, 10, nil},
		{"clouds on another day", files{"raw/a.csv": "x,y,z,gps_time\n5,6,-1,87400\n"}, "", 1900, record + missed + "1970-01-02T00:16:40Z", 10, nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			f := files{"gauge.csv": gauge, "water.geojson": polygonOf(0, 0, 9, 9)}
			for name, text := range c.clouds {
				f[name] = text
			}
			r := described(t, inUTC+tables+c.keys, f)
			if r.Map == nil || r.Map.At == nil || !r.Map.At.Equal(time.Unix(c.utc, 0)) || r.Map.At.Why != c.why {
				t.Fatalf("the moment is %+v, want %d s, %s", r.Map, c.utc, c.why)
			}
			near(t, 0, "the level", r.Map.Level.Low, c.level, 1e-9)
			if !slices.Equal(r.Cautions, c.cautions) {
				t.Errorf("cautions are %q, want %q", r.Cautions, c.cautions)
			}
		})
	}
}

// Clouds in GPS time, as numbers or TIMESTAMPs, give the same moment in UTC.
func TestDescribeMomentInGPSTime(t *testing.T) {
	const cloud = "x,y,z,gps_time\n3,0,-1,400000000\n3,0,-1,400000060\n" // from 1715964782 s, UTC
	tables := strings.Replace(metres, "*.csv", "*.parquet", 1) + "[surface.plane]\nlevel = 0\nat = [0, 0]\n[extent]\npolygons = \"water.geojson\"\n[surface.gauge]\nfile = \"gauge.csv\"\n"
	for name, data := range map[string]string{"numbers": parquetOf(t, cloud, 0, nil), "TIMESTAMP": stamps(t, cloud)} {
		r := described(t, tables, files{"raw/a.parquet": data, "gauge.csv": "time,level\n1715964700,0\n1715965700,10\n", "water.geojson": polygonOf(0, 0, 9, 9)})
		if r.Map == nil || r.Map.At == nil || !r.Map.At.Equal(time.Unix(1715964812, 0)) {
			t.Fatalf("%s: the moment is %+v, want 1715964812 s", name, r.Map)
		}
		near(t, 0, "the level", r.Map.Level.Low, 1.12, 1e-9)
	}
}

// What stops a run before its clouds stops a description, with the same words; what a
// run cautions for all clouds, a description cautions too.
func TestDescribeLikeARun(t *testing.T) {
	grid := "x,y,z,classification\n"
	for i := range 60 {
		grid += exact(float64(i%10)) + "," + exact(float64(i/10)) + ",0,41\n"
	}
	const (
		byClass = "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"true\"\n[surface.grid]\nclasses = [41]\n[rays]\nmodel = \"pulse\"\n"
		flown   = "trajectory = \"flight.csv\"\n"
	)
	for _, c := range []struct {
		name, job string
		files     files
		want      string
	}{
		{"no trajectory", byClass + flown + seaWater, files{"raw/a.csv": grid}, "[rays] trajectory: "},
		{"clouds without times for a trajectory", byClass + flown + seaWater, files{"raw/a.csv": grid, "flight.csv": "gps_time,x,y,z\n0,0,0,400\n1,0,0,400\n"}, `no column "gps_time" (the trajectory is looked up by it)`},
		{"clouds without times for stations", byClass + "[water]\nstations = \"stations.csv\"\n", files{"raw/a.csv": grid, "stations.csv": "x,y,temperature,salinity,time\n0,0,9,30,5\n"}, `no column "gps_time" (the stations are looked up by it)`},
		{"wrong stations", byClass + "[water]\nstations = \"stations.csv\"\n", files{"raw/a.csv": grid, "stations.csv": "x,y,temperature,salinity\n"}, "there are no station records"},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := t.TempDir()
			c.files.write(t, folder)
			j := loadJob(t, folder, c.job)
			_, err := DescribeSurface(t.Context(), j, nil)
			_, ofRun := Run(t.Context(), j, Options{})
			var call *CallError
			if !errors.As(err, &call) || ofRun == nil || err.Error() != ofRun.Error() || !strings.Contains(err.Error(), c.want) {
				t.Errorf("the description says\n%v, the run\n%v, want both with %q", err, ofRun, c.want)
			}
		})
	}
	r := described(t, strings.Replace(metres, "salinity = 0", "salinity = 42", 1)+"[surface]\nlevel = 0\n", nil)
	if len(r.Cautions) != 1 || !strings.Contains(r.Cautions[0], "outside the published range") {
		t.Errorf("cautions are %q, want that of the water", r.Cautions)
	}
}

// The misfit of a grid, in the job's unit: 36 points lifted by 3 ft lie far off.
func TestDescribeGridMisfit(t *testing.T) {
	text := "x,y,z\n"
	for i := range 40 {
		for k := range 30 {
			z := 1 + 0.001*float64(i)
			if i%7 == 3 && k%5 == 2 {
				z += 3
			}
			text += exact(float64(i)) + "," + exact(float64(k)) + "," + exact(z) + "\n"
		}
	}
	tables := strings.Replace(metres, "[input]", "[input]\nunit = \"ft\"", 1) + "[surface.grid]\npoints = \"points.csv\"\ncell = 5\noffset = 0.05\n"
	m := described(t, tables, files{"points.csv": text}).Grid.Misfit
	if m.FarOff != 36 || m.Used != 1200-36 {
		t.Errorf("%d points far off and %d that agree, want 36 and 1164", m.FarOff, m.Used)
	}
	closeTo(t, "farthest", m.Farthest, 3, 1e-4)
	closeTo(t, "rms", m.RMS, 0, 1e-5)
	closeTo(t, "largest", m.Largest, 0, 1e-4)
}
