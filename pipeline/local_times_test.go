package pipeline

import (
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"
)

// asStamps makes an INT64 column one of milliseconds since 1970, adjusted to UTC or of
// no time zone (Parquet's LogicalTypes, TIMESTAMP).
func asStamps(t *testing.T, data, name string, utc bool) string {
	t.Helper()
	return withFooter(t, data, func(meta *parquet.FileMetaData) {
		meta.Schema[1+placeOf(t, meta, name)].LogicalType = &parquet.LogicalType{TIMESTAMP: &parquet.TimestampType{
			IsAdjustedToUTC: utc, Unit: &parquet.TimeUnit{MILLIS: parquet.NewMilliSeconds()},
		}}
	})
}

// Times without a zone are refused beside the clouds, where UTC is meant: they may be
// hours off.
func TestLocalTimesBesideCloudsAreRefused(t *testing.T) {
	const want = `times in column "time" are stored without a time zone (INT64 TIMESTAMP_MILLIS local), want UTC; store them as adjusted to UTC, or as UTC seconds since 1970`
	grid := "x,y,z,time\n"
	for i := range 36 {
		grid += exact(float64(i%6)) + "," + exact(float64(i/6)) + ",0,1500000\n"
	}
	for _, c := range []struct{ file, text, water, surface string }{
		{"gauge.parquet", "time,level\n1000000,1\n2000000,2\n", seaWater, "[surface.gauge]\nfile = \"gauge.parquet\"\n"},
		{"stations.parquet", "x,y,temperature,salinity,time\n5,6,10,30,1500000\n", "[water]\nstations = \"stations.parquet\"\n", "[surface]\nlevel = 0\n"},
		{"points.parquet", grid, seaWater, "[surface.grid]\npoints = \"points.parquet\"\n"},
	} {
		t.Run(c.file, func(t *testing.T) {
			data := parquetOf(t, c.text, 0, map[string]string{"time": "INT64"})
			job := inUTC(strings.Replace(pulseJob, "pulse", "vertical", 1)) + c.water + c.surface
			f := files{"raw/a.csv": "x,y,z,gps_time\n2,2,-10,1500\n", c.file: asStamps(t, data, "time", false)}
			if got := planError(t, f, job); !strings.HasSuffix(got, c.file+": "+want) {
				t.Errorf("got %s, want %s", got, want)
			}
			f[c.file] = asStamps(t, data, "time", true)
			if outcome := correctFiles(t, f, job).text(t, 0, "outcome"); outcome != "corrected" {
				t.Errorf("with UTC the point is %s, want corrected", outcome)
			}
		})
	}
}

// In clouds and trajectories such times are taken for UTC, with a caution where they
// are read.
func TestLocalTimesOfCloudsAreCautioned(t *testing.T) {
	const want = `times in column "gps_time" are stored without a time zone (INT64 TIMESTAMP_MILLIS local) and taken for UTC; store them as adjusted to UTC`
	times := map[string]string{"gps_time": "INT64"}
	cloud := parquetOf(t, "x,y,z,gps_time\n203,0,-1,1715964782250\n", 0, times) // 17 May 2024, 16:53:02.25
	flight := parquetOf(t, "gps_time,x,y,z\n1715964782000,0,0,400\n1715964783000,10,0,400\n", 0, times)
	for _, c := range []struct {
		name          string
		cloud, flight bool // adjusted to UTC
		want          []string
	}{
		{"both UTC", true, true, nil},
		{"cloud", false, true, []string{want}},
		{"trajectory", true, false, []string{"flight.parquet: " + want}},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := t.TempDir()
			files{"raw/a.parquet": asStamps(t, cloud, "gps_time", c.cloud), "flight.parquet": asStamps(t, flight, "gps_time", c.flight)}.write(t, folder)
			j := loadJob(t, folder, tinyJob(`"raw/*.parquet"`, "true")+"trajectory = \"flight.parquet\"\n")
			p, err := MakePlan(t.Context(), j, nil)
			if err != nil || !slices.Equal(p.Cautions, c.want) {
				t.Errorf("plan cautions %q (%v), want %q", p.Cautions, err, c.want)
			}
			runJob(t, j, Options{})
			output := filepath.Join(folder, "true/a.parquet")
			if r := readReceipt(t, output); !slices.Equal(r.Cautions, c.want) {
				t.Errorf("receipt cautions %q, want %q", r.Cautions, c.want)
			}
			near(t, 0, "origin_x", readParquet(t, readFile(t, folder, "true/a.parquet")).number(t, 0, "origin_x"), 2.5, 1e-9)
		})
	}
}

// Waterlines and levels hold at all times, so what else their files have is left aside.
func TestGPSTimesOfATimelessFile(t *testing.T) {
	f := files{"raw/a.csv": "x,y,z\n2,2,-10\n", "edge.csv": "x,y,z,gps_time\n0,0,1,1\n9,9,1,2\n0,9,1,3\n9,0,1,4\n"}
	job := strings.Replace(pulseJob, "pulse", "vertical", 1) + seaWater + "[surface.plane]\nwaterline = \"edge.csv\"\n"
	if level := correctFiles(t, f, job).text(t, 0, "water_level"); level != "1.0000" {
		t.Errorf("the level is %s, want 1.0000", level)
	}
}
