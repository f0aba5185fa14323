package pipeline

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
	"time"
)

// The tide of these tests: semidiurnal, 4 m between high and low water, recorded
// every 10 minutes from 00:00 to 08:00 on a day after the last leap second.
var (
	tideStart = float64(time.Date(2026, 3, 4, 0, 0, 0, 0, time.UTC).Unix())
	tideStep  = 600.0
	tideSize  = 49
)

func tideAt(record int) float64 {
	return 2 * math.Sin(2*math.Pi*(tideStep*float64(record)/44714-0.3)) // half a lunar day, from memory
}

// tide is the level at a time, linear between the records.
func tide(utc float64) float64 {
	at := (utc - tideStart) / tideStep
	k := int(at)
	return tideAt(k) + (at-float64(k))*(tideAt(k+1)-tideAt(k))
}

// gaugeFile has times as numbers, or as text in a time zone 5.5 h east of UTC.
func gaugeFile(text bool) string {
	var b bytes.Buffer
	b.WriteString("time,level\n")
	for k := range tideSize {
		utc := tideStart + tideStep*float64(k)
		stamp := exact(utc)
		if text {
			stamp = time.Unix(int64(utc), 0).In(time.FixedZone("", 19800)).Format(time.RFC3339)
		}
		row(&b, stamp, exact(tideAt(k)))
	}
	return b.String()
}

// GPS seconds count from 1980-01-06 without leap seconds, of which 18 had passed by
// 2017 (IERS Bulletin C 52, 2016); adjusted ones are less by 1e9 (ASPRS LAS 1.4 R15,
// 2019, section 2.4); weeks have 604800 s (IS-GPS-200).
const (
	gpsStart = 315964800
	leaps    = 18
	gpsWeek  = 2408 // 2026-03-01
)

func asAdjusted(utc float64) float64 { return utc - gpsStart + leaps - 1e9 }
func asWeek(utc float64) float64     { return utc - gpsStart + leaps - gpsWeek*604800 }

// tidalShots fires n pulses in the half hours around the fastest tide, 0.3 of the
// period after the start. The gauge's zero has the height given.
func tidalShots(t *testing.T, n int, zero float64) []shot {
	c, r := scene{sea: standardSea(t)}, newRand(6)
	c.surface = func(_, _, utc float64) (float64, float64, float64) { return zero + tide(utc), 0, 0 }
	var shots []shot
	for range n {
		shots = append(shots, c.random(r, tideStart+0.3*44714+3600*(r.Float64()-0.5), 400, 24, 15))
	}
	return shots
}

const gaugeTable = "[surface.gauge]\nfile = \"gauge.csv\"\nzero = -1.25\n"

// A gauge in UTC against clouds in GPS time: exact to the written decimals. Where 18
// leap seconds are forgotten every point has a level that is wrong by 5 mm.
func TestGaugeAcrossTimeScales(t *testing.T) {
	shots := tidalShots(t, 2000, -1.25)
	for i, s := range shots {
		if off := math.Abs(tide(s.time+leaps) - tide(s.time)); off < 0.004 {
			t.Fatalf("row %d: 18 s change the level by %.4f m only, so leap seconds would not show", i, off)
		}
	}
	for _, scale := range []struct {
		name, keys string
		clock      func(utc float64) float64
	}{
		{"adjusted", "", asAdjusted},
		{"week", fmt.Sprintf("time = \"gps-week\"\nweek = %d\n", gpsWeek), asWeek},
		{"previous week", fmt.Sprintf("time = \"gps-week\"\nweek = %d\n", gpsWeek-1), func(utc float64) float64 { return asWeek(utc) + 604800 }},
		{"UTC", "time = \"utc\"\n", asUTC},
	} {
		for _, text := range []bool{false, true} {
			t.Run(fmt.Sprintf("%s, text %t", scale.name, text), func(t *testing.T) {
				f := files{"raw/a.csv": cloudOf(shots, 40, scale.clock), "gauge.csv": gaugeFile(text)}
				job := strings.Replace(pulseJob, "[output]", scale.keys+"[output]", 1)
				compareShots(t, correctFiles(t, f, job+seaWater+gaugeTable), shots, fourDecimals)
			})
		}
	}
}

// The gauge lies over each base, and over the levels of zones.
func TestGaugeOverBases(t *testing.T) {
	shots, lower := tidalShots(t, 500, 0.5), tidalShots(t, 500, 0.5)
	whole := place{"All", [][2]float64{{-1000, -1000}, {2000, -1000}, {2000, 2000}, {-1000, 2000}}, nan, nan, 0.75}
	cloud := cloudOf(lower, 40, asAdjusted)
	withTide := strings.Replace(strings.ReplaceAll(cloud, "\n", ",0.75\n"), ",0.75\n", ",stage\n", 1)
	for _, test := range []struct{ name, water, surface string }{
		{"nothing", "", "[surface.gauge]\nfile = \"gauge.csv\"\nzero = 0.5\n"},
		{"level", "", "[surface]\nlevel = 0.75\n"},
		{"column", "", "[surface]\ncolumn = \"stage\"\n"},
		{"plane", "", "[surface.plane]\nlevel = 0.75\nat = [0, 0]\n"},
		{"zone", "zones = \"zones.geojson\"\n", ""},
	} {
		t.Run(test.name, func(t *testing.T) {
			if test.name != "nothing" {
				test.surface += "[surface.gauge]\nfile = \"gauge.csv\"\nzero = -0.25\n"
			}
			f := files{"raw/a.csv": withTide, "gauge.csv": gaugeFile(false), "zones.geojson": zonesFile([]place{whole})}
			compareShots(t, correctFiles(t, f, pulseJob+seaWater+test.water+test.surface), shots, fourDecimals)
		})
	}
}

// A gauge has no level in gaps longer than max_gap, before its first record and after
// its last.
func TestGaugeGaps(t *testing.T) {
	f := files{
		"raw/a.csv": "x,y,z,gps_time\n5,6,-10,999\n5,6,-10,1000\n5,6,-10,1500\n5,6,-10,2000\n5,6,-10,2001\n5,6,-10,3001\n5,6,-10,3500\n5,6,-10,3501\n5,6,-10,\n",
		// 0.5 m a 1000 s, then a gap of 1001 s
		"gauge.csv": "time,level\n1000,1\n2000,1.5\n3001,7\n3500,7\n",
	}
	job := inUTC(strings.Replace(pulseJob, "pulse", "vertical", 1)) + seaWater + "[surface.gauge]\nfile = \"gauge.csv\"\nmax_gap = 1000\n"
	got := correctFiles(t, f, job).column(t, "water_level")
	if want := []string{"", "1.0000", "1.2500", "1.5000", "", "7.0000", "7.0000", "", ""}; !slices.Equal(got, want) {
		t.Errorf("levels are %q, want %q", got, want)
	}
	if outcomes := correctFiles(t, f, job).column(t, "outcome"); outcomes[0] != "no_surface" || outcomes[4] != "no_surface" || outcomes[8] != "no_surface" {
		t.Errorf("outcomes are %q, want no_surface outside the gauge", outcomes)
	}
}

// Clouds without times take the one that the job names; clouds with times do not.
func TestGaugeAt(t *testing.T) {
	folder := t.TempDir()
	files{
		"raw/a.csv": "x,y,z\n5,6,-10\n", "raw/b.csv": "x,y,z,gps_time\n5,6,-10,1300\n",
		"gauge.csv": "time,level\n1000,1\n2000,2\n",
	}.write(t, folder)
	job := inUTC(strings.Replace(pulseJob, "pulse", "vertical", 1)) + seaWater + "[surface.gauge]\nfile = \"gauge.csv\"\n"
	s, err := Run(t.Context(), loadJob(t, folder, job), Options{})
	if err != nil {
		t.Fatal(err)
	}
	want := `no column "gps_time" (the gauge is looked up by it; or give [surface.gauge] at); the columns are x, y, z`
	if !strings.HasSuffix(s.Files[0].Error, want) || s.Files[1].Error != "" {
		t.Errorf("the files say %q and %q, want %q and nothing", s.Files[0].Error, s.Files[1].Error, want)
	}
	runJob(t, loadJob(t, folder, job+"at = 1970-01-01T00:29:10Z\n"), Options{})
	for name, level := range map[string]string{"true/a.csv": "1.7500", "true/b.csv": "1.3000"} {
		if got := readTable(t, readFile(t, folder, name)).text(t, 0, "water_level"); got != level {
			t.Errorf("%s: the level is %s, want %s", name, got, level)
		}
	}
}

// Two gauges, weighted by inverse distance: the level differs from place to place,
// and a ray takes it where it enters.
func TestTwoGauges(t *testing.T) {
	c, r := scene{sea: standardSea(t)}, newRand(7)
	gauges := [2]vec{{50, 100}, {380, 250}}
	level := func(k int, utc float64) float64 { return []float64{0.2, 1.1}[k] + []float64{0.001, -0.002}[k]*utc }
	c.surface = func(x, y, utc float64) (float64, float64, float64) {
		p := vec{x, y}
		near, far := p.plus(-1, gauges[0]).length(), p.plus(-1, gauges[1]).length()
		return (level(0, utc)*far + level(1, utc)*near) / (near + far), 0, 0
	}
	var shots []shot
	for range 2000 {
		shots = append(shots, c.random(r, 100*r.Float64(), 400, 24, 15))
	}
	var records [][]float64
	for i := range 4 {
		records = append(records, []float64{60 * float64(i/2), level(i%2, 60*float64(i/2)), gauges[i%2][0], gauges[i%2][1]})
	}
	records = append(records, []float64{100, level(0, 100), 50, 100}, []float64{100, level(1, 100), 380, 250})
	f := files{"raw/a.csv": cloudOf(shots, 40, asUTC), "gauge.csv": lines("time,level,x,y", records...)}
	compareShots(t, correctFiles(t, f, inUTC(inNanometres(pulseJob))+seaWater+"[surface.gauge]\nfile = \"gauge.csv\"\n"), shots, 1e-6)
}
