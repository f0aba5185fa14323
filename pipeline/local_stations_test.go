package pipeline

import (
	"cmp"
	"math"
	"slices"
	"testing"

	"bentray/correct"
	"bentray/correct/medium"
)

// probe is a station of a test: by time a cast of depth, temperature, salinity.
type probe struct {
	at    vec
	times []float64
	casts [][][3]float64
}

// mean averages a cast from the surface to a depth by the trapezoid rule over its
// levels, with the first held up to the surface and the last held down.
func mean(cast [][3]float64, depth float64) (v [2]float64) {
	at := func(d float64) (v [2]float64) {
		k := slices.IndexFunc(cast, func(level [3]float64) bool { return level[0] >= d })
		switch {
		case k < 0:
			return [2]float64(cast[len(cast)-1][1:])
		case k == 0:
			return [2]float64(cast[0][1:])
		}
		share := (d - cast[k-1][0]) / (cast[k][0] - cast[k-1][0])
		return [2]float64{cast[k-1][1] + share*(cast[k][1]-cast[k-1][1]), cast[k-1][2] + share*(cast[k][2]-cast[k-1][2])}
	}
	if depth <= 0 {
		return at(0)
	}
	knots := []float64{0}
	for _, level := range cast {
		if level[0] > 0 && level[0] < depth {
			knots = append(knots, level[0])
		}
	}
	knots = append(knots, depth)
	for k := 1; k < len(knots); k++ {
		above, below := at(knots[k-1]), at(knots[k])
		for i := range v {
			v[i] += (above[i] + below[i]) / 2 * (knots[k] - knots[k-1]) / depth
		}
	}
	return v
}

// over is the probe's water at a time: linear between casts, held beyond them.
func (p probe) over(utc, depth float64) (v [2]float64) {
	k := slices.IndexFunc(p.times, func(at float64) bool { return at > utc })
	switch {
	case k < 0:
		return mean(p.casts[len(p.casts)-1], depth)
	case k == 0:
		return mean(p.casts[0], depth)
	}
	a, b := mean(p.casts[k-1], depth), mean(p.casts[k], depth)
	share := (utc - p.times[k-1]) / (p.times[k] - p.times[k-1])
	return [2]float64{a[0] + share*(b[0]-a[0]), a[1] + share*(b[1]-a[1])}
}

// weigh weights the 8 nearest of all probes that have a cast within maxGap of the
// time by the inverse square of their distance (Shepard 1968).
func weigh(probes []probe, x, y, utc, depth, maxGap float64) (v [2]float64) {
	var live []probe
	for _, p := range probes {
		if utc >= p.times[0]-maxGap && utc <= p.times[len(p.times)-1]+maxGap {
			live = append(live, p)
		}
	}
	distance := func(p probe) float64 { return math.Hypot(p.at[0]-x, p.at[1]-y) }
	slices.SortFunc(live, func(a, b probe) int { return cmp.Compare(distance(a), distance(b)) })
	total := 0.0
	for _, p := range live[:min(8, len(live))] {
		w := 1 / (distance(p) * distance(p))
		for i, one := range p.over(utc, depth) {
			v[i] += w * one
		}
		total += w
	}
	return [2]float64{v[0] / total, v[1] / total}
}

// probes returns 30 stations of 3 casts each, 1000 s apart, not all at once.
func probes() (list []probe) {
	r := newRand(9)
	for k := range 30 {
		p := probe{at: vec{500*r.Float64() - 50, 500*r.Float64() - 50}}
		for c := range 3 {
			p.times = append(p.times, 1.9e9+1000*float64(c)+50*float64(k))
			cast := [][3]float64{}
			for level := range 5 {
				depth := 0.5 + 4*float64(level) + r.Float64()
				cast = append(cast, [3]float64{depth, 20 - 0.8*depth + 3*r.Float64(), 5 + 1.5*depth + 2*r.Float64()})
			}
			p.casts = append(p.casts, cast)
		}
		list = append(list, p)
	}
	return list
}

// stationFile writes all levels of all casts, or the first level without depth, in an
// order that is not that of time.
func stationFile(list []probe, depths bool) string {
	var rows [][]float64
	for c := range 3 {
		for _, p := range list {
			for _, level := range p.casts[(c+1)%3] {
				line := []float64{p.at[0], p.at[1], level[1], level[2], p.times[(c+1)%3]}
				if !depths {
					rows = append(rows, line)
					break
				}
				rows = append(rows, append(line, level[0]))
			}
		}
	}
	if depths {
		return lines("x,y,temperature,salinity,time,depth", rows...)
	}
	return lines("x,y,temperature,salinity,time", rows...)
}

// Stations in space and time, and casts down to the true depth: positions, water and
// index are those of a search through all stations. A raw position and its water
// depend on each other, which the simulation settles by trying again.
func TestStationsAsBruteForce(t *testing.T) {
	list := probes()
	for name, casts := range map[string]bool{"surface values": false, "casts": true} {
		t.Run(name, func(t *testing.T) {
			r := newRand(10)
			var shots []shot
			var waters [][2]float64
			for range 1500 {
				utc := 1.9e9 - 900 + 5200*r.Float64()
				x, y, turn := 400*r.Float64(), 400*r.Float64(), 2*math.Pi*r.Float64()
				below, origin := 15*r.Float64(), vec{x + 150*math.Cos(turn), y + 150*math.Sin(turn), 400}
				s, v := shot{time: utc, raw: vec{x, y, -1}, origin: origin}, [2]float64{}
				for range 20 {
					v = weigh(flat(list, casts), s.raw[0], s.raw[1], utc, below, 600)
					if math.IsNaN(v[0]) {
						break
					}
					c := scene{surface: still(0.42, 0, 0), sea: seaOf(t, v[0], v[1])}
					s = c.fire(utc, origin, vec{x, y, 0.42}, below)
				}
				shots, waters = append(shots, s), append(waters, v)
			}
			f := files{"raw/a.csv": cloudOf(shots, 40, asUTC), "stations.csv": stationFile(list, casts)}
			got := correctFiles(t, f, inUTC(pulseJob)+"[water]\nstations = \"stations.csv\"\nmax_gap = 600\n[surface]\nlevel = 0.42\n")
			checkStations(t, got, shots, waters)
		})
	}
}

// flat returns the stations with their first levels alone, unless casts are wanted.
func flat(list []probe, casts bool) []probe {
	if casts {
		return list
	}
	var all []probe
	for _, p := range list {
		one := probe{at: p.at, times: p.times}
		for _, cast := range p.casts {
			one.casts = append(one.casts, cast[:1])
		}
		all = append(all, one)
	}
	return all
}

func checkStations(t *testing.T, got table, shots []shot, waters [][2]float64) {
	t.Helper()
	dry := 0
	for i, s := range shots {
		if math.IsNaN(waters[i][0]) {
			dry++
			if outcome := got.text(t, i, "outcome"); outcome != "no_water" {
				t.Fatalf("seed %d, row %d is %s, want no_water: no station has any at its time", seed, i, outcome)
			}
			continue
		}
		for k, name := range []string{"x", "y", "z"} {
			near(t, i, name, got.number(t, i, name), s.bed[k], fourDecimals+1e-6)
		}
		near(t, i, "temperature", got.number(t, i, "temperature"), waters[i][0], 0.5e-4+1e-6)
		near(t, i, "salinity", got.number(t, i, "salinity"), waters[i][1], 0.5e-4+1e-6)
		phase, group, err := medium.QuanFry.Index(medium.Water{TemperatureC: waters[i][0], Salinity: waters[i][1]}, 532)
		if err != nil {
			t.Fatal(err)
		}
		near(t, i, "n_water", got.number(t, i, "n_water"), phase, 1e-9)
		near(t, i, "ng_water", got.number(t, i, "ng_water"), group, 1e-9)
		if source := got.text(t, i, "water_source"); source != "stations" {
			t.Fatalf("row %d: the water is of %q, want stations", i, source)
		}
	}
	if dry == 0 || dry > len(shots)/2 {
		t.Errorf("%d of %d points have no water, want some", dry, len(shots))
	}
}

// Every outcome that shows its water, and those that are set before the water is looked
// up though they come after it in precedence, gets the water of its own place: what an
// earlier chunk left there is gone.
func TestWaterOfEarlierChunks(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.csv": "x,y,z\n1,2,3\n", "stations.csv": "x,y,temperature,salinity\n1,2,12,30\n"}.write(t, folder)
	s, err := readSurvey(t.Context(), loadJob(t, folder, pulseJob+"[surface]\nlevel = 0\n[water]\nstations = \"stations.csv\"\n"), nil, Options{})
	if err != nil {
		t.Fatal(err)
	}
	n := int(correct.NumOutcomes)
	var w workspace
	out := make([]correct.Outcome, n)
	w.zone = make([]int32, n)
	growAll(n, &w.raw.X, &w.raw.Y, &w.temperature, &w.salinity, &w.source, &w.fromStations[0], &w.fromStations[1])
	for i := range n {
		out[i], w.zone[i], w.temperature[i], w.fromStations[0][i] = correct.Outcome(i), -1, -99, -99
	}
	s.fillWater(&w, out, nil)
	for i, o := range out {
		if isFresh := w.temperature[i] == 12 && w.salinity[i] == 30 && w.source[i] == fromStations; watered(o) && o != correct.OutOfRange && !isFresh {
			t.Errorf("%v has %v degrees C, salinity %v from %v, want 12 and 30 from stations", o, w.temperature[i], w.salinity[i], w.source[i])
		}
	}
}
