package pipeline

import (
	"math"
	"slices"
	"strings"
	"testing"

	"bentray/correct/medium"
)

// hotCast is a station with one cast: on average above 35 degrees C, where the formula ends,
// down to 11.43 m.
const hotCast = "x,y,temperature,salinity,depth\n5,6,37,30,0\n5,6,30,30,20\n"

// Only the water down to the true depth decides whether it is in the formula's range. An
// image's true depth lies below the apparent one, a pulse's above it.
func TestOnlyTheTrueDepthDecidesTheRange(t *testing.T) {
	f := files{
		"raw/a.csv":    "x,y,z,class,strip,origin_x,origin_y,origin_z\n0,0,-10,2,b,,,\n0,0,-7,2,b,,,\n0,0,-15,2,a,0,0,400\n0,0,-17,2,a,0,0,400\n0,0,-10,2,a,3000,0,400\n",
		"stations.csv": hotCast,
	}
	got := correctFiles(t, f, overLevel(localJob)+"stations = \"stations.csv\"\n")
	if is, want := got.column(t, "outcome"), []string{"corrected", "out_of_range", "out_of_range", "corrected", "out_of_range"}; !slices.Equal(is, want) {
		t.Fatalf("outcomes are %q, want %q", is, want)
	}
	for i, wavelength := range map[int]float64{0: 550, 3: 532} {
		depth := got.number(t, i, "depth")
		v := mean([][3]float64{{0, 37, 30}, {20, 30, 30}}, depth)
		near(t, i, "temperature", got.number(t, i, "temperature"), v[0], 0.51e-4)
		phase, group, err := medium.QuanFry.Index(medium.Water{TemperatureC: v[0], Salinity: v[1]}, wavelength)
		if err != nil {
			t.Fatal(err)
		}
		near(t, i, "n_water", got.number(t, i, "n_water"), phase, 1e-9)
		if i == 3 { // straight down
			near(t, i, "depth", depth, 17*got.number(t, i, "ng_air")/group, 1e-6)
		}
	}
	for i, column := range []string{"temperature", "incidence_deg", "n_water"} {
		if is := got.text(t, 4, column); (is == "") != (i > 0) {
			t.Errorf("%s of a point out of range is %q", column, is)
		}
	}
}

// overLevel has localJob's points over one level of 0 and without limits in place.
func overLevel(job string) string {
	return strings.NewReplacer(
		"[extent]\npolygons = \"water.geojson\"\n", "", "[output]\n", "[output]\ndecimals = 9\n",
		"[surface.profile]\ncentreline = \"hairpin.geojson\"\nlevels = \"levels.csv\"\nreach = 30\n", "[surface]\nlevel = 0\n",
	).Replace(job)
}

// saddle is a water surface of no sea: the plane at an entry is decimetres off over a bed
// 10 m away.
func saddle(x, y, _ float64) (z, slopeX, slopeY float64) {
	return 0.3 + 0.015*x*y, 0.015 * y, 0.015 * x
}

// Under a curved surface a cast is averaged down to the depth that is written, below the
// surface over the true point: the simulation fires each pulse again with the water down
// to that depth, until the depth stays.
func TestCastsUnderACurvedSurface(t *testing.T) {
	cast := [][3]float64{{0, 29, 1}, {4, 15, 20}, {20, 3, 36}}
	r := newRand(22)
	var shots []shot
	var waters [][2]float64
	farthest := 0.0
	for range 500 {
		x, y, turn, below := 40*r.Float64()-20, 40*r.Float64()-20, 2*math.Pi*r.Float64(), 0.5+11*r.Float64()
		z, _, _ := saddle(x, y, 0)
		away := 400 * math.Tan(35*r.Float64()*math.Pi/180)
		origin, v, s := vec{x + away*math.Cos(turn), y + away*math.Sin(turn), 400}, [2]float64{15, 20}, shot{}
		for range 30 {
			c := scene{surface: saddle, sea: seaOf(t, v[0], v[1])}
			s = c.fire(0, origin, vec{x, y, z}, below)
			v = mean(cast, s.waterLevel-s.bed[2])
		}
		shots, waters = append(shots, s), append(waters, v)
		_, slopeX, slopeY := saddle(x, y, 0)
		farthest = max(farthest, math.Abs(s.waterLevel-z-slopeX*(s.bed[0]-x)-slopeY*(s.bed[1]-y)))
	}
	if farthest < 0.1 {
		t.Fatalf("seed %d: the surface is %.3f m off the planes at most, so this test shows nothing", seed, farthest)
	}
	f := files{
		"raw/a.csv":    cloudOf(shots, 40, nil),
		"stations.csv": lines("x,y,temperature,salinity,depth", []float64{5, 6, 29, 1, 0}, []float64{5, 6, 15, 20, 4}, []float64{5, 6, 3, 36, 20}),
		"above.csv":    lines("x,y,z", []float64{-90, -90, 121.5}, []float64{90, -90, -121.5}, []float64{-90, 90, -121.5}, []float64{90, 90, 121.5}),
	}
	got := correctFiles(t, f, inNanometres(pulseJob)+"[water]\nstations = \"stations.csv\"\n[surface]\nlevel = 0.3\n[surface.separation]\nfile = \"above.csv\"\n")
	compareShots(t, got, shots, 2e-6)
	for i, v := range waters {
		near(t, i, "temperature", got.number(t, i, "temperature"), v[0], 0.5e-4+1e-5)
		near(t, i, "salinity", got.number(t, i, "salinity"), v[1], 0.5e-4+1e-5)
	}
}
