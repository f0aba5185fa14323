package pipeline

import (
	"bytes"
	"fmt"
	"math"
	"strings"
	"testing"
)

const (
	foot       = 0.3048        // m, exact by definition (NIST SP 811, 2008, B.6)
	surveyFoot = 1200.0 / 3937 // m, exact (NIST SP 811, 2008, B.6)
)

// truthCase is one way to describe a survey in files.
type truthCase struct {
	name           string
	byTrajectory   bool
	surface        string // the job's table; "column" and "plane" change the sea as well
	north          float64
	plan, height   float64 // metres per unit
	units          string  // lines of [input]
	decimals       int
	rangeIndex     float64 // 0: the job's air
	roundingMetres float64 // what double precision costs at these coordinates
}

const (
	nearOrigin = 1e-10 // coordinates below 2 km: 2^-42 m a rounding, a few hundred of them at most
	farNorth   = 1e-8  // coordinates of 7e6 m: 2^-30 m a rounding, a few of them
)

var truthCases = []truthCase{
	{name: "trajectory, level", byTrajectory: true, surface: "level", plan: 1, height: 1, decimals: 9, roundingMetres: nearOrigin},
	{name: "origin columns, level", surface: "level", plan: 1, height: 1, decimals: 9, roundingMetres: nearOrigin},
	{name: "origin columns, column", surface: "column", plan: 1, height: 1, decimals: 9, roundingMetres: nearOrigin},
	{name: "trajectory, plane", byTrajectory: true, surface: "plane", plan: 1, height: 1, decimals: 9, roundingMetres: nearOrigin},
	{name: "origin columns, plane", surface: "plane", plan: 1, height: 1, decimals: 9, roundingMetres: nearOrigin},
	{name: "four decimals", byTrajectory: true, surface: "level", plan: 1, height: 1, decimals: 4, roundingMetres: nearOrigin},
	{name: "far north, level", byTrajectory: true, surface: "level", north: 7e6, plan: 1, height: 1, decimals: 9, roundingMetres: farNorth},
	{name: "far north, plane", surface: "plane", north: 7e6, plan: 1, height: 1, decimals: 9, roundingMetres: farNorth},
	{name: "feet", byTrajectory: true, surface: "level", plan: foot, height: foot, units: "unit = \"ft\"\n", decimals: 9, roundingMetres: nearOrigin},
	{name: "survey feet, far north, plane", surface: "plane", north: 7e6, plan: surveyFoot, height: surveyFoot, units: "unit = \"us-ft\"\n", decimals: 9, roundingMetres: farNorth},
	{name: "metres and feet, column", byTrajectory: true, surface: "column", plan: 1, height: foot, units: "vertical_unit = \"ft\"\n", decimals: 9, roundingMetres: nearOrigin},
	{name: "survey feet and metres, plane", byTrajectory: true, surface: "plane", plan: surveyFoot, height: 1, units: "unit = \"us-ft\"\nvertical_unit = \"m\"\n", decimals: 9, roundingMetres: nearOrigin},
	{name: "range index", byTrajectory: true, surface: "level", plan: 1, height: 1, decimals: 9, rangeIndex: 1.000123, roundingMetres: nearOrigin},
}

func TestTruthComesBack(t *testing.T) {
	for _, c := range truthCases {
		t.Run(c.name, func(t *testing.T) {
			w := standardSea(t)
			if c.surface == "plane" {
				w.slopeX, w.slopeY = 0.004, -0.003
			}
			if c.rangeIndex > 0 {
				w.rangeNg = c.rangeIndex
			}
			shots := w.shoot(400, c.surface == "column")
			folder := t.TempDir()
			files{"raw/a.csv": c.cloud(shots), "flight.csv": c.flight()}.write(t, folder)
			runJob(t, loadJob(t, folder, c.job(w)), Options{Workers: 2})
			c.compare(t, readTable(t, readFile(t, folder, "true/a.csv")), shots)
		})
	}
}

// in writes a position in the file's units.
func (c truthCase) in(p vec) []string {
	return []string{exact(p[0] / c.plan), exact((p[1] + c.north) / c.plan), exact(p[2] / c.height)}
}

func (c truthCase) cloud(shots []shot) string {
	var b bytes.Buffer
	b.WriteString("x,y,z,gps_time,tide")
	if !c.byTrajectory {
		b.WriteString(",origin_x,origin_y,origin_z")
	}
	b.WriteByte('\n')
	for _, s := range shots {
		fields := append(c.in(s.raw), exact(s.time), exact(s.level/c.height))
		if !c.byTrajectory {
			fields = append(fields, c.in(s.origin)...)
		}
		row(&b, fields...)
	}
	return b.String()
}

func (c truthCase) flight() string {
	var b bytes.Buffer
	b.WriteString("gps_time,x,y,z\n")
	for k := range flightSize {
		row(&b, append([]string{exact(firstTime + flightStep*float64(k))}, c.in(record(k))...)...)
	}
	return b.String()
}

func (c truthCase) job(w sea) string {
	var b strings.Builder
	fmt.Fprintf(&b, "[input]\nfiles = [\"raw/*.csv\"]\n%s[output]\nfolder = \"true\"\ndecimals = %d\n%s", c.units, c.decimals, media)
	switch c.surface {
	case "level":
		fmt.Fprintf(&b, "[surface]\nlevel = %s\n", exact(w.level/c.height))
	case "column":
		b.WriteString("[surface]\ncolumn = \"tide\"\n")
	case "plane":
		fmt.Fprintf(&b, "[surface.plane]\nlevel = %s\nat = [0, %s]\nslope_x = %g\nslope_y = %g\n", exact(w.level/c.height), exact(c.north/c.plan), w.slopeX, w.slopeY)
	}
	b.WriteString("[rays]\nmodel = \"pulse\"\n")
	if c.byTrajectory {
		b.WriteString("trajectory = \"flight.csv\"\n")
	}
	if c.rangeIndex > 0 {
		fmt.Fprintf(&b, "range_index = %g\n", c.rangeIndex)
	}
	return b.String()
}

func (c truthCase) compare(t *testing.T, got table, shots []shot) {
	t.Helper()
	if len(got.rows) != len(shots) {
		t.Fatalf("%d rows, want %d", len(got.rows), len(shots))
	}
	half := 0.5 * math.Pow10(-c.decimals)
	plan, height := half+c.roundingMetres/c.plan, half+c.roundingMetres/c.height
	for i, s := range shots {
		if outcome := got.text(t, i, "outcome"); outcome != "corrected" {
			t.Fatalf("row %d is %s, want corrected", i, outcome)
		}
		near(t, i, "x", got.number(t, i, "x"), s.bed[0]/c.plan, plan)
		near(t, i, "y", got.number(t, i, "y"), (s.bed[1]+c.north)/c.plan, plan)
		near(t, i, "z", got.number(t, i, "z"), s.bed[2]/c.height, height)
		near(t, i, "depth", got.number(t, i, "depth"), (s.waterLevel-s.bed[2])/c.height, height)
		near(t, i, "water_level", got.number(t, i, "water_level"), s.waterLevel/c.height, height)
		near(t, i, "entry_level", got.number(t, i, "entry_level"), s.entryLevel/c.height, height)
		near(t, i, "incidence_deg", got.number(t, i, "incidence_deg"), s.incidence, 0.6e-5)
		near(t, i, "refraction_deg", got.number(t, i, "refraction_deg"), s.refraction, 0.6e-5)
		near(t, i, "origin_x", got.number(t, i, "origin_x"), s.origin[0]/c.plan, plan)
		near(t, i, "origin_z", got.number(t, i, "origin_z"), s.origin[2]/c.height, height)
	}
}

func near(t *testing.T, row int, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("seed %d, row %d: %s is %.12g, want %.12g within %g", seed, row, what, got, want, tolerance)
	}
}
