package pipeline

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

// place is a zone of a test: its ring, and what it gives.
type place struct {
	name                         string
	ring                         [][2]float64
	temperature, salinity, level float64 // NaN: not given
}

func (p place) feature() string {
	text := fmt.Sprintf("%q:%q", "name", p.name)
	for i, key := range []string{"temperature", "salinity", "level"} {
		if v := []float64{p.temperature, p.salinity, p.level}[i]; v == v {
			text += fmt.Sprintf(",%q:%s", key, exact(v))
		}
	}
	return feature(text, p.ring...)
}

func zonesFile(places []place) string {
	var all []string
	for _, p := range places {
		all = append(all, p.feature())
	}
	return collection(all...)
}

// holds counts the edges that a line to the right of the point crosses.
func (p place) holds(x, y float64) bool {
	inside := false
	for i, a := range p.ring {
		b := p.ring[(i+1)%len(p.ring)]
		if (a[1] > y) != (b[1] > y) && x < a[0]+(y-a[1])/(b[1]-a[1])*(b[0]-a[0]) {
			inside = !inside
		}
	}
	return inside
}

// area is that of the trapezoids below the edges.
func (p place) area() (sum float64) {
	for i, a := range p.ring {
		b := p.ring[(i+1)%len(p.ring)]
		sum += (b[0] - a[0]) * (a[1] + b[1]) / 2
	}
	return math.Abs(sum)
}

// zoneOf looks at every zone; -1 for none.
func zoneOf(places []place, x, y float64) int {
	best := -1
	for i, p := range places {
		if p.holds(x, y) && (best < 0 || p.area() < places[best].area()) {
			best = i
		}
	}
	return best
}

var nan = math.NaN()

// twoZones have their own water and level; their outlines are no rectangles.
var twoZones = []place{
	{"Lower Basin", [][2]float64{{20, 30}, {180, 10}, {150, 160}, {90, 60}, {30, 170}}, 11.25, 3.5, 0.9},
	{"Tern Creek", [][2]float64{{220, 20}, {380, 60}, {390, 380}, {300, 210}, {230, 390}}, 21.5, 33.75, -0.35},
}

// zonedShots fires n pulses, each through the water of the zone of its raw point, or
// outside through the standard sea, which slopes.
func zonedShots(t *testing.T, r *rand.Rand, n int, places []place) []shot {
	outside := scene{surface: still(0.42, 0.004, -0.003), sea: standardSea(t)}
	waters := []scene{outside}
	for _, p := range places {
		waters = append(waters, scene{surface: still(p.level, 0, 0), sea: seaOf(t, p.temperature, p.salinity)})
	}
	var shots []shot
	for len(shots) < n {
		k := r.IntN(len(waters))
		if s := waters[k].random(r, 0, 400, 24, 15); zoneOf(places, s.raw[0], s.raw[1]) == k-1 {
			shots = append(shots, s)
		}
	}
	return shots
}

// Two zones with their own water and level, and the job's own outside, whose plane
// slopes as no zone does: exact to the
// written decimals, and every point names its zone.
func TestTwoZones(t *testing.T) {
	shots := zonedShots(t, newRand(4), 3000, twoZones)
	for _, format := range formats {
		folder := t.TempDir()
		files{"raw/a." + format: encode(t, format, cloudOf(shots, 40, nil)), "zones.geojson": zonesFile(twoZones)}.write(t, folder)
		runJob(t, loadJob(t, folder, inFormat(pulseJob+seaWater+"zones = \"zones.geojson\"\n[surface.plane]\nlevel = 0.42\nat = [0, 0]\nslope_x = 0.004\nslope_y = -0.003\n", format)), Options{})
		got := decode(t, format, readFile(t, folder, "true/a."+format))
		compareShots(t, got, shots, fourDecimals)
		for i, s := range shots {
			want := []string{"job", "17.5", "34.9"}
			if k := zoneOf(twoZones, s.raw[0], s.raw[1]); k >= 0 {
				z := twoZones[k]
				want = []string{"zone " + z.name, exact(z.temperature), exact(z.salinity)}
			}
			source, temperature, salinity := got.text(t, i, "water_source"), exact(got.number(t, i, "temperature")), exact(got.number(t, i, "salinity"))
			if is := []string{source, temperature, salinity}; !slices.Equal(is, want) {
				t.Fatalf("%s, row %d: the water is %q, want %q", format, i, is, want)
			}
		}
	}
}

// 60 stars that overlap: every point is in the zone that a look at all of them finds.
func TestZonesAsBruteForce(t *testing.T) {
	r := newRand(5)
	var stars []place
	for k := range 60 {
		p := place{name: fmt.Sprintf("Z%d", k), temperature: nan, salinity: nan, level: float64(k) / 16}
		x, y, size := 400*r.Float64(), 400*r.Float64(), 10+70*r.Float64()
		for i := range 11 {
			sin, cos := math.Sincos(2 * math.Pi * float64(i) / 11)
			far := size * (0.3 + 0.7*r.Float64())
			p.ring = append(p.ring, [2]float64{x + far*cos, y + far*sin})
		}
		stars = append(stars, p)
	}
	var rows [][]float64
	for range 20_000 {
		rows = append(rows, []float64{400 * r.Float64(), 400 * r.Float64(), -9})
	}
	got := correctFiles(t, files{"raw/a.csv": lines("x,y,z", rows...), "zones.geojson": zonesFile(stars)},
		strings.Replace(pulseJob, "pulse", "vertical", 1)+seaWater+"zones = \"zones.geojson\"\n[surface]\nlevel = -5\n")
	for i, p := range rows {
		want := -5.0
		if k := zoneOf(stars, p[0], p[1]); k >= 0 {
			want = stars[k].level
		}
		if level := got.number(t, i, "water_level"); level != want {
			t.Fatalf("seed %d, row %d: the level is %g, want %g", seed, i, level, want)
		}
		if source := got.text(t, i, "water_source"); source != "job" {
			t.Fatalf("row %d: the water is of %q, want that of the job: no zone has any", i, source)
		}
	}
}

// Of overlapping zones the smaller wins, and a plan says so, once for each pair.
func TestOverlappingZones(t *testing.T) {
	square := func(name string, from, to, level float64) place {
		return place{name, [][2]float64{{from, from}, {to, from}, {to, to}, {from, to}}, nan, nan, level}
	}
	f := files{
		"raw/a.csv":     "x,y,z\n50,50,-1\n150,150,-1\n350,350,-1\n",
		"zones.geojson": zonesFile([]place{square("Pool", 40, 60, 0.5), square("Bay", 0, 200, 0.25), square("Far", 300, 400, 0)}),
	}
	job := strings.Replace(pulseJob, "pulse", "vertical", 1) + seaWater + "zones = \"zones.geojson\"\n"
	got := correctFiles(t, f, job).column(t, "water_level")
	if want := []string{"0.5000", "0.2500", "0.0000"}; !slices.Equal(got, want) {
		t.Errorf("levels are %q, want %q", got, want)
	}
	if p := planOf(t, f, job); !slices.Equal(p.Cautions, []string{`zones "Pool" and "Bay" overlap: the one with the smaller area wins`}) {
		t.Errorf("cautions are %q, want one on Pool and Bay", p.Cautions)
	}
}

// A zone takes its values before the stations, the stations before the job; what a
// zone does not give comes from them.
func TestWaterByPrecedence(t *testing.T) {
	ring := func(x float64) [][2]float64 { return [][2]float64{{x, 200}, {x + 10, 200}, {x + 10, 210}, {x, 210}} }
	f := files{
		"raw/a.csv": "x,y,z,gps_time\n205,205,-5,1900000000\n225,205,-5,1900000000\n235,205,-5,1900000000\n235,205,-5,1900003661\n205,205,-5,1900003661\n235,205,-5,1900003660\n",
		"zones.geojson": zonesFile([]place{
			{"Warm", ring(200), 20, 1, nan}, {"High", ring(220), nan, nan, 1.5},
		}),
		"stations.csv": "name,x,y,temperature,salinity,time\nA,230,200,12,30,2030-03-17T17:46:40Z\nA,230,200,13,31,1900000060\n",
	}
	const (
		stations = "stations = \"stations.csv\"\n"
		zones    = "zones = \"zones.geojson\"\n"
		surface  = "[surface]\nlevel = 0\n"
	)
	vertical := inUTC(strings.Replace(pulseJob, "pulse", "vertical", 1))
	for _, test := range []struct {
		name, tables       string
		outcomes, sources  []string
		temperature, level string // of all rows
	}{
		{
			"all", seaWater + zones + stations + surface,
			[]string{"corrected", "corrected", "corrected", "corrected", "corrected", "corrected"},
			[]string{"zone Warm", "stations", "stations", "job", "zone Warm", "stations"},
			"20.0000 12.0000 12.0000 17.5000 20.0000 13.0000", "0.0000 1.5000 0.0000 0.0000 0.0000 0.0000",
		},
		{
			"no constants", "[water]\n" + zones + stations + surface,
			[]string{"corrected", "corrected", "corrected", "no_water", "corrected", "corrected"},
			[]string{"zone Warm", "stations", "stations", "", "zone Warm", "stations"},
			"20.0000 12.0000 12.0000  20.0000 13.0000", "0.0000 1.5000 0.0000  0.0000 0.0000",
		},
		{
			"zones alone", "[water]\n" + zones + surface,
			[]string{"corrected", "no_water", "no_water", "no_water", "corrected", "no_water"},
			[]string{"zone Warm", "", "", "", "zone Warm", ""},
			"20.0000    20.0000 ", "0.0000    0.0000 ",
		},
		{
			"levels from zones alone", seaWater + zones,
			[]string{"no_surface", "corrected", "no_surface", "no_surface", "no_surface", "no_surface"},
			[]string{"", "job", "", "", "", ""},
			" 17.5000    ", " 1.5000    ",
		},
	} {
		t.Run(test.name, func(t *testing.T) {
			got := correctFiles(t, f, vertical+test.tables)
			for column, want := range map[string][]string{
				"outcome": test.outcomes, "water_source": test.sources,
				"temperature": strings.Split(test.temperature, " "), "water_level": strings.Split(test.level, " "),
			} {
				if is := got.column(t, column); !slices.Equal(is, want) {
					t.Errorf("%s is %q, want %q", column, is, want)
				}
			}
		})
	}
}
