package pipeline

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"bentray/pipeline/job"
)

// planOf plans a job over clouds below raw/ and checks that nothing is written.
func planOf(t *testing.T, f files, jobText string) *Plan {
	t.Helper()
	folder := t.TempDir()
	f.write(t, folder)
	j := loadJob(t, folder, jobText)
	before := snapshot(t, folder)
	p, err := MakePlan(t.Context(), j, nil)
	if err != nil {
		t.Fatal(err)
	}
	same(t, "a plan's folder", snapshot(t, folder), before)
	return p
}

// spread is a cloud over an extent, 1 to 12 m under a level of 0.
func spread(west, south, east, north float64) files {
	return files{"raw/a.csv": fmt.Sprintf("x,y,z,origin_x,origin_y,origin_z\n%g,%g,-12,%g,%g,400\n%g,%g,-1,%g,%g,400\n",
		west, south, west, south, east, north, east, north)}
}

func TestPlanCautions(t *testing.T) {
	atLevel := func(level string) string {
		return strings.Replace(tinyJob(`"raw/*.csv"`, "true"), "level = 0", "level = "+level, 1)
	}
	const (
		degrees = "all x lie within 180 and all y within 90: these look like degrees; coordinates must be projected lengths"
		wide    = "one constant level over 2.1 km: an ellipsoidal level is not level over such a distance; use a plane, or heights above a geoid"
	)
	plane := "plane = { level = 0, at = [0, 0], slope_x = 0, slope_y = 0 }"
	for _, c := range []struct {
		name  string
		cloud files
		job   string
		want  []string
	}{
		{"none", spread(500, 600, 2500, 2600), atLevel("0"), nil},
		{"degrees", spread(-180, -90, 180, 90), atLevel("0"), []string{degrees}},
		{"x beyond degrees", spread(-180, -90, 180.1, 90), atLevel("0"), nil},
		{"y beyond degrees", spread(-180, -90.1, 180, 90), atLevel("0"), nil},
		{"wide along x", spread(500, 600, 2600, 700), atLevel("0"), []string{wide}},
		{"wide along y", spread(500, 600, 600, 2700), atLevel("0"), []string{wide}},
		{"wide under a plane", spread(500, 600, 2600, 700), atLevel(`0`) + plane, nil},
		{"2100 feet are not wide", spread(500, 600, 2600, 700), strings.Replace(atLevel("0"), "[output]", "unit = \"ft\"\n[output]", 1), nil},
		{"6890 feet are", spread(500, 600, 7390, 700), strings.Replace(atLevel("0"), "[output]", "unit = \"ft\"\n[output]", 1), []string{wide}},
		{"level below the cloud", spread(500, 600, 2500, 2600), atLevel("-13.5"), []string{
			"the level -13.5 lies 1.5 m below the lowest point: no point would be under water; are level and cloud in one vertical reference?",
			"no point was corrected",
		}},
		{"level high above", spread(500, 600, 2500, 2600), atLevel("46.4"), []string{
			"the level 46.4 lies 47.4 m above the highest point: far for a shallow cloud; are level and cloud in one vertical reference?",
		}},
		{"level 29 m above", spread(500, 600, 2500, 2600), atLevel("28"), nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			text := c.job
			if strings.HasSuffix(text, plane) {
				text = strings.Replace(strings.TrimSuffix(text, plane), "level = 0", plane, 1)
			}
			if p := planOf(t, c.cloud, text); !slices.Equal(p.Cautions, c.want) {
				t.Errorf("cautions are %q, want %q", p.Cautions, c.want)
			}
		})
	}
}

// A plan says what a run then does.
func TestPlanForetellsTheRun(t *testing.T) {
	folder := fleet(t)
	files{"raw/wrong.csv": "x,y\n1,2\n"}.write(t, folder)
	j := fleetJob(t, folder, "true")
	p, err := MakePlan(t.Context(), j, nil)
	if err != nil {
		t.Fatal(err)
	}
	s, err := Run(t.Context(), j, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if p.Run != s.Run || len(p.Files) != len(s.Files) {
		t.Fatalf("planned %.12s with %d files, done %.12s with %d", p.Run, len(p.Files), s.Run, len(s.Files))
	}
	for i, planned := range p.Files {
		done := s.Files[i]
		if planned.Input != done.Input || planned.Output != done.Output || planned.Fresh {
			t.Errorf("planned %+v, done %+v", planned, done)
		}
		if failed := planned.Err != nil; failed != (done.Error != "") || failed && planned.Err.Error() != done.Error {
			t.Errorf("%s: would fail by %v, failed by %q", planned.Input, planned.Err, done.Error)
		}
		if off := float64(planned.Points)/float64(max(done.Rows.Written, 1)) - 1; done.Rows.Written > 0 && (off < -0.02 || off > 0.02) {
			t.Errorf("%s: planned %d points, done %d", planned.Input, planned.Points, done.Rows.Written)
		}
	}
	want := []RoleColumn{{"x", "x"}, {"y", "y"}, {"z", "z"}, {"gps_time", "gps_time"}}
	if !slices.Equal(p.Roles, want) {
		t.Errorf("roles are %v, want %v", p.Roles, want)
	}
	if p, err = MakePlan(t.Context(), j, nil); err != nil || !p.Files[0].Fresh {
		t.Errorf("after the run the first file is not fresh (%v)", err)
	}
}

// The surface at the corners, in the job's units; times on the calendar.
func TestPlanCornersAndTimes(t *testing.T) {
	f := files{
		"raw/a.csv":  "x,y,z,gps_time\n1000,2000,-5,0\n1500,2600,-5,86400\n",
		"flight.csv": "gps_time,x,y,z\n0,0,0,900\n86400,1,1,900\n",
	}
	p := planOf(t, f, "[input]\nfiles = [\"raw/*.csv\"]\nunit = \"ft\"\nvertical_unit = \"m\"\ntime = \"gps-week\"\nweek = 2300\n[output]\nfolder = \"true\"\n"+media+
		"[surface.plane]\nlevel = 1\nat = [1000, 2000]\nslope_x = 0.001\nslope_y = -0.002\n[rays]\nmodel = \"pulse\"\ntrajectory = \"flight.csv\"\nmax_gap = 1e6\n")
	want := [4]Corner{{1000, 2000, 1}, {1500, 2000, 1 + 0.5*foot}, {1000, 2600, 1 - 1.2*foot}, {1500, 2600, 1 - 0.7*foot}}
	for i, c := range p.Corners {
		if c.X != want[i].X || c.Y != want[i].Y {
			t.Errorf("corner %d is %v, want %v", i, c, want[i])
		}
		near(t, i, "the surface at a corner", c.Level, want[i].Level, 1e-12)
	}
	// 2300 weeks of 604800 s after 1980-01-06 is 2024-02-04, and GPS time is 18 s ahead of UTC since 2017.
	if got := p.Heads.Times[0].Format("2006-01-02T15:04:05Z07:00"); got != "2024-02-03T23:59:42Z" {
		t.Errorf("the first time is %s, want 2024-02-03T23:59:42Z", got)
	}
	if got := p.Heads.Times[1].Sub(p.Heads.Times[0]).Hours(); got != 24 {
		t.Errorf("the times are %g h apart, want 24", got)
	}
}

// The starting job is valid once its marked lines are filled in, and corrects
// its cloud.
func TestStartingJob(t *testing.T) {
	for _, c := range []struct {
		name, cloud string
		fill        []string // old, new
	}{
		{"origin columns", tiny, nil},
		{"trajectory", "x,y,z,gps_time\n5,6,-10,1.5\n", nil},
		{"views", "x,y,z,views\n5,6,-10,a b\n", nil},
		{"other names", "east,north,up,gps_time,\"a\nb\"\n5,6,-10,1.5,0\n", []string{`x = ""`, `x = "east"`, `y = ""`, `y = "north"`, `z = ""`, `z = "up"`}},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := t.TempDir()
			files{"cloud.csv": c.cloud, "flight.csv": "gps_time,x,y,z\n1,5,6,400\n2,5,6,400\n", "cameras.csv": "camera,x,y,z\na,0,0,60\nb,20,5,60\n"}.write(t, folder)
			t.Chdir(folder)
			var b strings.Builder
			if err := StartJob(&b, "cloud.csv"); err != nil {
				t.Fatal(err)
			}
			if _, err := job.Parse("job.toml", []byte(b.String())); err == nil || strings.Contains(err.Error(), "not valid TOML") {
				t.Errorf("as it is written the job gives %v, want only what is to fill in", err)
			}
			j := loadJob(t, ".", filled(b.String(), c.fill))
			if s := runJob(t, j, Options{}); s.Outcomes["corrected"] != 1 {
				t.Errorf("outcomes are %v, want one corrected", s.Outcomes)
			}
		})
	}
}

// filled takes the mark off every line that is a key behind "# ".
func filled(text string, fill []string) string {
	lines := strings.Split(text, "\n")
	for i, line := range lines {
		if key, marked := strings.CutPrefix(line, "# "); marked && strings.Contains(key, " = ") {
			lines[i] = key
		}
	}
	return strings.NewReplacer(fill...).Replace(strings.Join(lines, "\n"))
}

func TestStartingJobOfNoCloud(t *testing.T) {
	folder := t.TempDir()
	files{"empty.csv": ""}.write(t, folder)
	path := filepath.Join(folder, "empty.csv")
	var b strings.Builder
	if err := StartJob(&b, path); err == nil || err.Error() != path+" is empty, want a header line" || b.Len() > 0 {
		t.Errorf("got %v and %q", err, b.String())
	}
}

func TestStartingJobOnAFullDisk(t *testing.T) {
	full, err := os.OpenFile("/dev/full", os.O_WRONLY, 0)
	if err != nil {
		t.Skip("no /dev/full here")
	}
	defer full.Close()
	folder := t.TempDir()
	files{"a.csv": tiny}.write(t, folder)
	if err := StartJob(full, filepath.Join(folder, "a.csv")); err == nil || !strings.Contains(err.Error(), "no space left") {
		t.Errorf("got %v, want no space left", err)
	}
}
