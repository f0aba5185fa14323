package pipeline

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// Rays that run downstream over a weir 1 m high and 0.2 m long, at angles at which they
// cross its water twice near the upper edge: a point is corrected from the first crossing, or
// unsolved; from the lower pool never.
func TestRaysOverWeir(t *testing.T) {
	const face = 0.2
	weir := func(x, _, _ float64) (z, slopeX, slopeY float64) {
		switch {
		case x <= 0:
			return 1, 0, 0
		case x >= face:
			return 0, 0, 0
		}
		return 1 - x/face, -1 / face, 0
	}
	var levels [][]float64
	for k := range 100 {
		levels = append(levels, []float64{-float64(k), 0, 1}, []float64{face + float64(k), 0, 0})
	}
	c := scene{surface: weir, sea: standardSea(t)}
	var shots []shot
	for _, degrees := range []float64{15, 20, 30, 40, 50} {
		run := math.Tan(degrees * math.Pi / 180)
		d := vec{run, 0, -1}
		d = d.plus(1/d.length()-1, d)
		for k := range 60 {
			x := -1.5 + 0.05*(float64(k)+0.5) // where it is 1 m high
			origin := vec{x - 399*run, 0, 400}
			entry := origin.plus(399/-d[2], d)
			if x > 0 {
				entry = c.meet(origin, d, 0)
			}
			if math.Abs(entry[0]) > 0.02 && math.Abs(entry[0]-face) > 0.02 { // else it touches an edge
				shots = append(shots, c.enter(0, origin, d, entry, 4))
			}
		}
	}
	f := files{
		"raw/a.csv":    cloudOf(shots, 40, nil),
		"line.geojson": `{"type":"LineString","coordinates":[[-150,0],[150,0]]}`, "levels.csv": lines("x,y,z", levels...),
	}
	got := correctFiles(t, f, inNanometres(pulseJob)+seaWater+"[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = 75\n")
	corrected := 0
	for i, s := range shots {
		if outcome := got.text(t, i, "outcome"); outcome != "corrected" {
			if outcome != "unsolved" && outcome != "dry" {
				t.Errorf("row %d is %s", i, outcome)
			}
			continue
		}
		corrected++
		for k, name := range []string{"x", "y", "z"} {
			near(t, i, name, got.number(t, i, name), s.bed[k], 1e-5)
		}
	}
	if corrected < len(shots)*3/4 {
		t.Errorf("%d of %d points are corrected, want most", corrected, len(shots))
	}
}

// A cloud without times takes the surface points of all times together, says so, and does
// not look them up at the time that the job names for its gauge.
func TestGridOfPassesForCloudWithoutTimes(t *testing.T) {
	var points [][]float64
	for i := range 400 {
		x, y := float64(i%20), float64(i/20)
		points = append(points, []float64{x, y, 1, 1.9e9}, []float64{x, y, 3, 1.9e9 + 1000})
	}
	folder := t.TempDir()
	files{
		"raw/a.csv":  "x,y,z,origin_x,origin_y,origin_z\n10,10,-5,10,10,400\n",
		"points.csv": lines("x,y,z,time", points...),
		"gauge.csv":  "time,level\n1899998000,0\n1900002000,0\n",
	}.write(t, folder)
	j := loadJob(t, folder, pulseJob+seaWater+"[surface.grid]\npoints = \"points.csv\"\n[surface.gauge]\nfile = \"gauge.csv\"\nat = 2030-03-17T17:46:40Z\nmax_gap = 9000\n")
	s := runJob(t, j, Options{Workers: 1})
	got := readTable(t, readFile(t, folder, "true/a.csv"))
	near(t, 0, "water_level", got.number(t, 0, "water_level"), 2, fourDecimals) // the mean of 1 and 3
	told := func(text string) bool { return strings.Contains(text, "surface points of all times") }
	if cautions := s.Files[0].Cautions; !slices.ContainsFunc(cautions, told) {
		t.Errorf("cautions are %q, want one on the times", cautions)
	}
}
