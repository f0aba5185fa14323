package pipeline

import (
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"
)

// quickJob is a job of verticals in UTC under a gauge.
var quickJob = inUTC(strings.Replace(pulseJob, "pulse", "vertical", 1)) + seaWater + "[surface.gauge]\nfile = \"gauge.csv\"\n"

// cautionsOfBoth returns the cautions of a plan and of the receipt of raw/a.csv, which
// must be the same.
func cautionsOfBoth(t *testing.T, f files, jobText string) []string {
	t.Helper()
	folder := t.TempDir()
	f.write(t, folder)
	j := loadJob(t, folder, jobText)
	p, err := MakePlan(t.Context(), j, nil)
	if err != nil {
		t.Fatal(err)
	}
	runJob(t, j, Options{})
	r := readReceipt(t, filepath.Join(folder, "true/a.csv"))
	if !slices.Equal(r.Cautions, p.Cautions) {
		t.Errorf("the receipt cautions %q, the plan %q", r.Cautions, p.Cautions)
	}
	return r.Cautions
}

// What a gauge leaves without a level is told apart, with the times in UTC: 1000 s after
// 1970-01-01T00:00:00Z are 00:16:40.
func TestGaugeCautions(t *testing.T) {
	const gauge = "time,level\n1000,1\n2000,1.5\n3001,1.5\n3500,1.5\n"
	for _, c := range []struct {
		name, times, keys string
		want              []string
	}{
		{"within", "1000 1500 3500", "", nil},
		{"before and after", "999 1500 3501 3600", "", []string{
			"3 of 4 points have no water surface: the gauge's records are from 1970-01-01T00:16:40Z to 1970-01-01T00:58:20Z, the cloud's times from 1970-01-01T00:16:39Z to 1970-01-01T01:00:00Z",
		}},
		{"in a gap", "1500 2500", "max_gap = 1000\n", []string{
			"1 of 2 points have no water surface: their times fall into gaps of the gauge's records longer than max_gap (1000 s)",
		}},
		{"gap as long as it may be", "1500 2500", "max_gap = 1001\n", nil},
		{"no time", "1500 -", "", []string{"1 of 2 points have no water surface: they have no time, by which the gauge is looked up"}},
		{"all of it", "- 999 2500 1500", "max_gap = 1000\n", []string{
			"1 of 4 points have no water surface: the gauge's records are from 1970-01-01T00:16:40Z to 1970-01-01T00:58:20Z, the cloud's times from 1970-01-01T00:16:39Z to 1970-01-01T00:41:40Z",
			"1 of 4 points have no water surface: their times fall into gaps of the gauge's records longer than max_gap (1000 s)",
			"1 of 4 points have no water surface: they have no time, by which the gauge is looked up",
		}},
		{"at, not used", "1500", "at = 1970-01-01T00:20:00Z\n", []string{"[surface.gauge] at is not used: the points have times of their own"}},
		{"at, outside", "", "at = 1970-01-01T10:00:00Z\n", []string{
			"1 of 1 points have no water surface: the gauge's records are from 1970-01-01T00:16:40Z to 1970-01-01T00:58:20Z, [surface.gauge] at is 1970-01-01T10:00:00Z",
			"no point was corrected",
		}},
		{"at, used", "", "at = 1970-01-01T00:20:00Z\n", nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			cloud := "x,y,z\n500,6,-10\n"
			if c.times != "" {
				cloud = "x,y,z,gps_time\n"
				for _, at := range strings.Fields(c.times) {
					cloud += "500,6,-10," + strings.Trim(at, "-") + "\n"
				}
			}
			if got := cautionsOfBoth(t, files{"raw/a.csv": cloud, "gauge.csv": gauge}, quickJob+c.keys); !slices.Equal(got, c.want) {
				t.Errorf("cautions are\n%q, want\n%q", got, c.want)
			}
		})
	}
}

// Under a base that does not reach a point the gauge is not to blame.
func TestGaugeCautionsLeaveTheBase(t *testing.T) {
	f := files{
		"raw/a.csv": "x,y,z,gps_time,stage\n500,6,-10,1500,\n500,6,-10,1500,0\n500,6,-10,900,0\n",
		"gauge.csv": "time,level\n1000,1\n2000,1.5\n",
	}
	want := []string{
		"1 of 3 points have no water surface: the gauge's records are from 1970-01-01T00:16:40Z to 1970-01-01T00:33:20Z, the cloud's times from 1970-01-01T00:15:00Z to 1970-01-01T00:25:00Z",
		"1 of 3 points have no water surface: it does not reach them in place or time, or its column is empty there",
	}
	if got := cautionsOfBoth(t, f, quickJob+"[surface]\ncolumn = \"stage\"\n"); !slices.Equal(got, want) {
		t.Errorf("cautions are\n%q, want\n%q", got, want)
	}
}

// Of two gauges one ends early and pauses: the points whose level is of one gauge alone
// are counted, dry ones too, but none that has no level, is left out or is invalid.
func TestPartialGauges(t *testing.T) {
	f := files{
		"raw/a.csv": "x,y,z,gps_time,classification\n" +
			"500,6,-10,1100,2\n" + // both
			"500,6,-10,1900,2\n" + // one pauses
			"500,6,-10,2600,2\n" + // both
			"500,6,-10,3500,2\n500,6,50,3500,2\n" + // one has ended; the second is dry
			"500,6,-10,3500,9\n,6,-10,3500,2\n" + // not selected, invalid
			"500,6,-10,4001,2\n", // none
		"gauge.csv": "time,level,name,x,y\n1000,1,pier,0,0\n4000,1,pier,0,0\n1000,1.1,mole,900,0\n1500,1.1,mole,900,0\n2500,1.1,mole,900,0\n3000,1.1,mole,900,0\n",
	}
	job := quickJob + "max_gap = 3000\n[select]\nwhere = { classification = [2] }\n"
	const (
		none = "1 of 8 points have no water surface: the gauge's records are from 1970-01-01T00:16:40Z to 1970-01-01T01:06:40Z, the cloud's times from 1970-01-01T00:18:20Z to 1970-01-01T01:06:41Z"
		some = "2 of 8 points have their level from only some of the gauges, the others having none at their times: it makes a step where a gauge's records begin, end or pause for longer than max_gap (3000 s)"
		bad  = "1 of 8 points have no finite coordinates"
	)
	if got := cautionsOfBoth(t, f, job); !slices.Equal(got, []string{none, some, bad}) {
		t.Errorf("cautions are\n%q, want\n%q", got, []string{none, some, bad})
	}
	// now the pier pauses from 1000 to 4000, the whole time
	job = strings.Replace(job, "max_gap = 3000", "max_gap = 1000", 1)
	if got := cautionsOfBoth(t, f, job); len(got) != 4 || !strings.HasPrefix(got[1], "2 of 8 points have no water surface: their times fall into gaps") || !strings.HasPrefix(got[2], "3 of 8 points have their level from only some") {
		t.Errorf("with gaps cautions are %q", got)
	}
}

// The level at the corners of a plan is that of the middle of the clouds' times where
// the gauge has one; in a zone it is the zone's.
func TestPlanMoment(t *testing.T) {
	f := files{
		"raw/a.csv":     "x,y,z,gps_time\n500,6,-10,1100\n600,90,-10,1300\n",
		"raw/b.csv":     "x,y,z,gps_time\n500,6,-10,1400\n600,90,-10,1500\n",
		"gauge.csv":     "time,level\n1000,1\n1600,7\n",
		"zones.geojson": zonesFile([]place{{"Pond", [][2]float64{{590, 80}, {610, 80}, {610, 100}, {590, 100}}, nan, nan, 30}}),
	}
	zoned := strings.Replace(quickJob, seaWater, seaWater+"zones = \"zones.geojson\"\n", 1) + "[surface]\nlevel = 0\n"
	p := planOf(t, f, zoned)
	if p.At == nil || !p.At.Equal(time.Unix(1300, 0)) || p.At.Why != "the middle of the clouds' first times" {
		t.Fatalf("the moment is %v, want 1300 s, in the middle", p.At)
	}
	for i, want := range []float64{4, 4, 4, 34} {
		near(t, i, "the level at a corner", p.Corners[i].Level, want, 1e-12)
	}
	f["gauge.csv"] = "time,level\n5000,1\n5300,2\n5700,3\n6500,7\n"
	p = planOf(t, f, zoned)
	const instead = "the gauge's record nearest to the middle of all; no gauge has a level at the middle of the clouds' first times, 1970-01-01T00:21:40Z"
	if p.At == nil || !p.At.Equal(time.Unix(5700, 0)) || p.At.Why != instead {
		t.Errorf("the moment is %v, want 5700 s, %s", p.At, instead)
	}
	near(t, 0, "the level at a corner", p.Corners[0].Level, 3, 1e-12)
	if p := planOf(t, spread(500, 600, 2500, 2600), tinyJob(`"raw/*.csv"`, "true")); p.At != nil {
		t.Errorf("one level has the moment %v, want none", p.At)
	}
}
