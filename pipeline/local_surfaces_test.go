package pipeline

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// river is a centreline with a bend to the left; the water falls evenly along it.
var river = []vec{{0, 0}, {300, 40}, {330, 420}}

const riverFall = 0.002

// riverAt is the level at the nearest point of the centreline, and the slope along it.
func riverAt(x, y, _ float64) (z, slopeX, slopeY float64) {
	p, best, before := vec{x, y}, math.Inf(1), 0.0
	for k := 1; k < len(river); k++ {
		run := river[k].plus(-1, river[k-1])
		share := min(max(p.plus(-1, river[k-1]).dot(run)/run.dot(run), 0), 1)
		if away := p.plus(-1, river[k-1].plus(share, run)).length(); away < best {
			best = away
			z = 3 - riverFall*(before+share*run.length())
			slopeX, slopeY = -riverFall*run[0]/run.length(), -riverFall*run[1]/run.length()
		}
		before += run.length()
	}
	return z, slopeX, slopeY
}

// nearBend tells places from which two points of the river are almost equally near,
// or the nearest one is the vertex: within 15 m of the line that halves the bend.
func nearBend(p vec) bool {
	in, out := river[1].plus(-1, river[0]), river[2].plus(-1, river[1])
	half := vec{}.plus(1/in.length(), in).plus(1/out.length(), out)
	from := p.plus(-1, river[1])
	from[2] = 0
	return math.Abs(from.dot(half))/half.length() < 15
}

// A river that bends: the level of the nearest centreline point, its slope along the
// line; no surface beyond reach, off the line and beyond its ends.
func TestProfileAlongARiver(t *testing.T) {
	c, r := scene{surface: riverAt, sea: standardSea(t)}, newRand(12)
	var levels [][]float64
	for k := 1; k < len(river); k++ {
		for i := range 11 {
			p := river[k-1].plus(float64(i)/10, river[k].plus(-1, river[k-1]))
			z, _, _ := riverAt(p[0]+3, p[1], 0)
			levels = append(levels, []float64{p[0] + 3, p[1], z})
		}
	}
	var shots []shot
	for len(shots) < 2000 {
		s := c.random(r, 0, 400, 24, 15)
		if max(offRiver(s.raw), offRiver(s.bed)) < 60 && !nearBend(s.raw) && !nearBend(s.bed) {
			shots = append(shots, s)
		}
	}
	far := []shot{
		{raw: vec{150, 120, -1}, origin: vec{150, 120, 400}},  // 100 m off the line
		{raw: vec{-90, -12, -1}, origin: vec{-90, -12, 400}},  // 91 m before its start
		{raw: vec{340, 500, -1}, origin: vec{340, 500, 400}},  // 81 m beyond its end
		{raw: vec{-40, -5, -1}, origin: vec{-40, -5, 400}},    // 40 m before
		{raw: vec{150, 20, 2.5}, origin: vec{150, 20, 400}},   // 0.2 m below
		{raw: vec{150, 20, 2.75}, origin: vec{150, 20, 400}},  // above
		{raw: vec{75, 90, -20}, origin: vec{360, -180, 400}},  // the entry lies nearer than the raw point
		{raw: vec{150, 105, -4}, origin: vec{150, 525, 400}},  // the raw point is out of reach
		{raw: vec{150, 93, -14}, origin: vec{150, 513, 400}},  // in reach, but the entry is out of it
		{raw: vec{150, 20, -14}, origin: vec{150, 520, -400}}, // from below
	}
	f := files{
		"raw/a.csv":    cloudOf(shots, 40, nil),
		"line.geojson": `{"type":"LineString","coordinates":[[0,0],[300,40],[330,420]]}`,
		"levels.csv":   lines("x,y,z", levels...),
	}
	const job = pulseJob + seaWater + "[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = 75\n"
	got := correctFiles(t, f, inNanometres(job))
	compareShots(t, got, shots, 2e-6)
	for i, s := range shots {
		_, slopeX, slopeY := riverAt(s.bed[0], s.bed[1], 0)
		near(t, i, "slope_x", got.number(t, i, "slope_x"), slopeX, 1e-7)
		near(t, i, "slope_y", got.number(t, i, "slope_y"), slopeY, 1e-7)
	}
	f["raw/a.csv"] = cloudOf(far, 40, nil)
	want := []string{"no_surface", "no_surface", "no_surface", "corrected", "corrected", "dry", "no_surface", "no_surface", "no_surface", "no_origin"}
	for i, outcome := range correctFiles(t, f, job).column(t, "outcome") {
		if outcome != want[i] {
			t.Errorf("far row %d is %s, want %s", i, outcome, want[i])
		}
	}
}

// offRiver returns how far a place is from the river's line.
func offRiver(p vec) float64 {
	off := math.Inf(1)
	p[2] = 0
	for k := 1; k < len(river); k++ {
		run := river[k].plus(-1, river[k-1])
		share := min(max(p.plus(-1, river[k-1]).dot(run)/run.dot(run), 0), 1)
		off = min(off, p.plus(-1, river[k-1].plus(share, run)).length())
	}
	return off
}

// A separation grid that is bilinear as a whole lies over a level and over a column;
// outside it there is no surface.
func TestSeparationOverBases(t *testing.T) {
	height := func(x, y float64) float64 { return 40 + 0.002*x - 0.001*y + 1e-6*x*y }
	c, r := scene{sea: standardSea(t)}, newRand(13)
	c.surface = func(x, y, _ float64) (float64, float64, float64) {
		return 0.42 + height(x, y), 0.002 + 1e-6*y, -0.001 + 1e-6*x
	}
	var shots []shot
	var nodes [][]float64
	for range 2000 {
		x, y, turn := 400*r.Float64(), 400*r.Float64(), 2*math.Pi*r.Float64()
		shots = append(shots, c.fire(0, vec{x + 100*math.Cos(turn), y + 100*math.Sin(turn), 440}, vec{x, y, 40}, 15*r.Float64()))
	}
	for i := range 30 {
		x, y := 120*float64(i%6-1), 150*float64(i/6-1)
		nodes = append(nodes, []float64{x, y, height(x, y)})
	}
	f := files{
		"raw/a.csv": cloudOf(shots, 40, nil), "above.csv": lines("x,y,z", nodes...),
		"raw/b.csv": "x,y,z,classification,origin_x,origin_y,origin_z\n600,200,-1,40,600,200,440\n",
	}
	for _, base := range []string{"level = 0.42", "plane = { level = 0.42, at = [7, 9] }"} {
		folder := t.TempDir()
		f.write(t, folder)
		j := loadJob(t, folder, inNanometres(pulseJob)+seaWater+"[surface]\n"+base+"\n[surface.separation]\nfile = \"above.csv\"\n")
		runJob(t, j, Options{})
		compareShots(t, readTable(t, readFile(t, folder, "true/a.csv")), shots, 2e-6)
		if outcome := readTable(t, readFile(t, folder, "true/b.csv")).text(t, 0, "outcome"); outcome != "no_surface" {
			t.Errorf("%s: a point outside the separation is %s, want no_surface", base, outcome)
		}
	}
}

// Everything at once: the cloud's own levels, a tide over them, a separation over both,
// and heights in feet.
func TestColumnGaugeAndSeparation(t *testing.T) {
	c, r := scene{sea: standardSea(t)}, newRand(14)
	var shots []shot
	for range 1000 {
		stage := r.NormFloat64() / 4
		c.surface = func(x, y, utc float64) (float64, float64, float64) {
			return stage + tide(utc) + 0.001*x, 0.001, 0
		}
		s := c.random(r, tideStart+20_000*r.Float64(), 400, 24, 15)
		s.level = stage // what the column says
		shots = append(shots, s)
	}
	in := truthCase{plan: 1, height: foot}
	var gauge [][]float64
	for k := range tideSize {
		gauge = append(gauge, []float64{tideStart + tideStep*float64(k), tideAt(k) / foot})
	}
	f := files{
		"raw/a.csv": in.cloud(shots), "gauge.csv": lines("time,level", gauge...),
		"above.csv": lines("x,y,z", []float64{-500, -500, -0.5 / foot}, []float64{900, -500, 0.9 / foot}, []float64{-500, 900, -0.5 / foot}, []float64{900, 900, 0.9 / foot}),
	}
	job := inUTC(inNanometres(pulseJob)) + seaWater + "[surface]\ncolumn = \"tide\"\n[surface.gauge]\nfile = \"gauge.csv\"\n[surface.separation]\nfile = \"above.csv\"\n"
	got := correctFiles(t, f, strings.Replace(job, "[output]", "vertical_unit = \"ft\"\n[output]", 1))
	for i, s := range shots {
		near(t, i, "x", got.number(t, i, "x"), s.bed[0], 1e-6)
		near(t, i, "z", got.number(t, i, "z"), s.bed[2]/foot, 4e-6)
		near(t, i, "water_level", got.number(t, i, "water_level"), s.waterLevel/foot, 4e-6)
		near(t, i, "entry_level", got.number(t, i, "entry_level"), s.entryLevel/foot, 4e-6)
	}
}

// A true point may lie where there is no surface although its entry and its raw point lie
// where there is one: over a hole of 8 m in a separation, for which one node is missing.
func TestTruePointWithoutSurface(t *testing.T) {
	var nodes [][]float64
	for i := range 25 {
		if i != 12 {
			nodes = append(nodes, []float64{4 * float64(i%5), 4 * float64(i/5), 0.1})
		}
	}
	f := files{
		"raw/a.csv": "x,y,z,origin_x,origin_y,origin_z\n" +
			"13,8,-9.4,-396.6,8,400.2\n" + // from 3.6 to 8.5 in x
			"7,8,-2.7,-398,8,400\n" + // the raw point is in the hole
			"7,2,-2.7,-398,2,400\n", // beside the hole
		"above.csv": lines("x,y,z", nodes...),
	}
	got := correctFiles(t, f, pulseJob+seaWater+"[surface]\nlevel = -0.1\n[surface.separation]\nfile = \"above.csv\"\n")
	if is, want := got.column(t, "outcome"), []string{"no_surface", "no_surface", "corrected"}; !slices.Equal(is, want) {
		t.Fatalf("outcomes are %q, want %q", is, want)
	}
	for name, want := range map[string]string{"x": "13", "z": "-9.4", "depth": "", "water_level": "", "entry_level": "", "incidence_deg": "", "n_water": ""} {
		if is := got.text(t, 0, name); is != want {
			t.Errorf("%s is %q, want %q", name, is, want)
		}
	}
}
