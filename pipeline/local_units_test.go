package pipeline

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// unitPairs are jobs whose plan and heights have different units, either way round: what
// is scaled by the wrong one of them shows.
var unitPairs = []truthCase{
	{name: "feet and metres", plan: foot, height: 1, units: "unit = \"ft\"\nvertical_unit = \"m\"\n", roundingMetres: 2e-6},
	{name: "metres and feet", plan: 1, height: foot, units: "unit = \"m\"\nvertical_unit = \"ft\"\n", roundingMetres: 2e-6},
}

// local writes a job of such units with nine decimals.
func (c truthCase) local(tables string) string {
	return "[input]\nfiles = [\"raw/*.csv\"]\ntime = \"utc\"\n" + c.units + "[output]\nfolder = \"true\"\ndecimals = 9\n[air]\ntemperature = 18\nhumidity = 60\n[rays]\nmodel = \"pulse\"\n" + tables
}

// points writes x, y, z in the job's units, with what stands behind them as it is.
func (c truthCase) points(header string, list []vec, rest ...[]float64) string {
	var rows [][]float64
	for i, p := range list {
		row := []float64{p[0] / c.plan, p[1] / c.plan, p[2] / c.height}
		for _, more := range rest {
			row = append(row, more[i])
		}
		rows = append(rows, row)
	}
	return lines(header, rows...)
}

// zone is a zone's file in the job's units.
func (c truthCase) zone(p place) string {
	ring := make([][2]float64, len(p.ring))
	for i, corner := range p.ring {
		ring[i] = [2]float64{corner[0] / c.plan, corner[1] / c.plan}
	}
	p.ring, p.level = ring, p.level/c.height
	return zonesFile([]place{p})
}

// check runs a job on shots, which all come back, and on points without a surface.
func (c truthCase) check(t *testing.T, f files, jobText string, shots, beyond []shot) {
	t.Helper()
	f["raw/a.csv"] = c.cloud(shots)
	c.compare(t, correctFiles(t, f, jobText), shots, 0.5e-9)
	f["raw/a.csv"] = c.cloud(beyond)
	for i, outcome := range correctFiles(t, f, jobText).column(t, "outcome") {
		if outcome != "no_surface" {
			t.Errorf("point %d beyond the surface is %s, want no_surface", i, outcome)
		}
	}
}

// tideOf is the tide's records with their levels in the job's units.
func (c truthCase) tideOf() string {
	var records [][]float64
	for k := range tideSize {
		records = append(records, []float64{tideStart + tideStep*float64(k), tideAt(k) / c.height})
	}
	return lines("time,level", records...)
}

// dock is a basin in the bend of the river, with a level of its own.
var dock = place{"Gull Dock", [][2]float64{{120, 30}, {200, 40}, {190, 90}, {125, 80}}, nan, nan, 3.4}

// The casts of two stations at either end of the river.
var (
	upper = probe{vec{20, 60}, []float64{0}, [][][3]float64{{{0, 21, 4}, {3, 17, 12}, {12, 9, 30}}}}
	lower = probe{vec{300, 300}, []float64{0}, [][][3]float64{{{0.5, 24, 9}, {5, 14, 28}, {12, 8, 34}}}}
)

// castShots fires n pulses into the river with its dock and its casts under the tide.
func castShots(t *testing.T, r *rand.Rand, n int, zero float64) (shots []shot) {
	for len(shots) < n {
		x, y, turn, below := 400*r.Float64(), 400*r.Float64(), 2*math.Pi*r.Float64(), 0.5+9*r.Float64()
		utc, isDock := tideStart+20_000*r.Float64(), r.IntN(4) == 0
		surface := func(x, y, utc float64) (z, slopeX, slopeY float64) {
			if z = dock.level; !isDock {
				z, slopeX, slopeY = riverAt(x, y, utc)
			}
			return z + zero + tide(utc), slopeX, slopeY
		}
		origin, v, s := vec{x + 120*math.Cos(turn), y + 120*math.Sin(turn), 400}, [2]float64{15, 20}, shot{}
		for range 20 {
			c := scene{surface: surface, sea: seaOf(t, v[0], v[1])}
			s = c.fire(utc, origin, vec{x, y, 0}, below)
			v = weigh([]probe{upper, lower}, s.raw[0], s.raw[1], 0, s.waterLevel-s.bed[2], 1)
		}
		if max(offRiver(s.raw), offRiver(s.bed)) < 60 && !nearBend(s.raw) && !nearBend(s.bed) && dock.holds(s.raw[0], s.raw[1]) == isDock {
			shots = append(shots, s)
		}
	}
	return shots
}

// A river's profile with its reach, a zone with a level, casts with depths and a gauge
// with its zero.
func TestUnitsOfAProfileAndCasts(t *testing.T) {
	shots := castShots(t, newRand(23), 400, -1.25)
	beyond := []shot{{time: tideStart, raw: vec{150, 120, -1}, origin: vec{150, 120, 400}}, {time: tideStart, raw: vec{-90, -12, -1}, origin: vec{-90, -12, 400}}}
	var levels, line, casts []vec
	var temperature, salinity []float64
	for k := range 22 {
		p := river[k/11].plus(float64(k%11)/10, river[k/11+1].plus(-1, river[k/11]))
		p[2], _, _ = riverAt(p[0], p[1], 0)
		levels = append(levels, p)
	}
	line = append(line, river...)
	for _, p := range []probe{upper, lower} {
		for _, level := range p.casts[0] {
			casts = append(casts, vec{p.at[0], p.at[1], level[0]})
			temperature, salinity = append(temperature, level[1]), append(salinity, level[2])
		}
	}
	for _, c := range unitPairs {
		t.Run(c.name, func(t *testing.T) {
			f := files{
				"levels.csv": c.points("x,y,z", levels), "casts.csv": c.points("x,y,depth,temperature,salinity", casts, temperature, salinity),
				"zone.geojson": c.zone(dock), "gauge.csv": c.tideOf(), "line.geojson": c.lineOf(line),
			}
			tables := fmt.Sprintf("[water]\nstations = \"casts.csv\"\nzones = \"zone.geojson\"\n[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = %s\n[surface.gauge]\nfile = \"gauge.csv\"\nzero = %s\n",
				exact(75/c.plan), exact(-1.25/c.height))
			c.check(t, f, c.local(tables), shots, beyond)
		})
	}
}

// lineOf is a centreline in the job's units.
func (c truthCase) lineOf(line []vec) string {
	text := ""
	for _, p := range line {
		text += fmt.Sprintf(",[%s,%s]", exact(p[0]/c.plan), exact(p[1]/c.plan))
	}
	return `{"type":"LineString","coordinates":[` + text[1:] + `]}`
}

// A grid through points 0.2 m below a tilted plane, with its cell, its offset and its reach
// in cells; and a tide over it.
func TestUnitsOfAGrid(t *testing.T) {
	r := newRand(24)
	c := scene{sea: standardSea(t), surface: func(x, y, utc float64) (z, slopeX, slopeY float64) {
		return 0.42 + 0.002*x - 0.001*y + tide(utc), 0.002, -0.001
	}}
	var shots []shot
	for range 400 {
		s := c.random(r, tideStart+20_000*r.Float64(), 200, 24, 10)
		shots = append(shots, s)
	}
	var below []vec
	for range 6000 {
		x, y := 240*r.Float64()-20, 240*r.Float64()-20
		below = append(below, vec{x, y, 0.22 + 0.002*x - 0.001*y})
	}
	beyond := []shot{{time: tideStart, raw: vec{260, 100, -1}, origin: vec{260, 100, 400}}, {time: tideStart, raw: vec{100, -60, -1}, origin: vec{100, -60, 400}}}
	for _, c := range unitPairs {
		t.Run(c.name, func(t *testing.T) {
			f := files{"surface.csv": c.points("x,y,z", below), "gauge.csv": c.tideOf()}
			tables := fmt.Sprintf("%s[surface.grid]\npoints = \"surface.csv\"\ncell = %s\nreach = 3\noffset = %s\n[surface.gauge]\nfile = \"gauge.csv\"\n", seaWater, exact(8/c.plan), exact(0.2/c.height))
			c.check(t, f, c.local(tables), shots, beyond)
		})
	}
}
