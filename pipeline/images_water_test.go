package pipeline

import (
	"testing"

	"bentray/correct/medium"
)

// imageSea is the standard air over another water, at 550 nm.
func imageSea(t testing.TB, temperature, salinity float64) sea {
	t.Helper()
	w := seaAt(t, 550)
	var err error
	if w.waterPhase, _, err = medium.QuanFry.Index(medium.Water{TemperatureC: temperature, Salinity: salinity}, 550); err != nil {
		t.Fatal(err)
	}
	return w
}

// soak sees places of the bed through water that depends on the raw plan position and
// the depth: in turns, until the raw point stays.
func soak(t *testing.T, c scene, residual string, all []photo, n int, utc float64, own bool, water func(x, y, depth float64) [2]float64) (list []image, waters [][2]float64) {
	t.Helper()
	for _, im := range c.images(newRand(140), residual, all, n, utc, own) {
		var w [2]float64
		for range 30 {
			last := im.raw
			w = water(im.raw[0], im.raw[1], im.waterLevel-im.bed[2])
			c.sea = imageSea(t, w[0], w[1])
			if im = c.look(residual, all, im.views, im.bed, utc, own); im.raw.plus(-1, last).length() < 1e-12 {
				break
			}
		}
		list, waters = append(list, im), append(waters, w)
	}
	return list, waters
}

// Water from 30 stations, weighted at the raw plan position; with depths each is a cast,
// of which the mean over 0 to the written depth counts.
func TestImagesThroughStations(t *testing.T) {
	c := scene{surface: still(0.42, 0.02, -0.013), sea: seaAt(t, 550)}
	all, utc := block(newRand(141)), 1.9e9+1500
	for _, casts := range []bool{false, true} {
		list, waters := soak(t, c, "image", all, 200, utc, false, func(x, y, depth float64) [2]float64 {
			if !casts {
				return weigh(shallow(), x, y, utc, 0, 3600)
			}
			return weigh(probes(), x, y, utc, depth, 3600)
		})
		for _, format := range formats {
			folder := t.TempDir()
			files{
				"raw/a." + format:   encode(t, format, imageCloud(list, true, true, inMetres)),
				"cameras." + format: encode(t, format, cameraFile(all, withMatrix, false, false, inMetres)),
				"casts." + format:   encode(t, format, stationFile(probes(), casts)),
			}.write(t, folder)
			job := inUTC(imageJob) + "[water]\nstations = \"casts.csv\"\n[surface.plane]\nlevel = 0.42\nat = [0, 0]\nslope_x = 0.02\nslope_y = -0.013\n"
			runJob(t, loadJob(t, folder, inFormat(job, format)), Options{Workers: 2})
			got := decode(t, format, readFile(t, folder, "true/a."+format))
			compareImages(t, got, list, "column", inMetres, tolerances{2e-8, 2e-8})
			for i, w := range waters {
				near(t, i, "temperature", got.number(t, i, "temperature"), w[0], 0.51e-4)
				near(t, i, "salinity", got.number(t, i, "salinity"), w[1], 0.51e-4)
				near(t, i, "n_water", got.number(t, i, "n_water"), imageSea(t, w[0], w[1]).waterPhase, 1e-9)
				if source := got.text(t, i, "water_source"); source != "stations" {
					t.Fatalf("row %d: water_source is %q, want stations", i, source)
				}
			}
		}
	}
}

// shallow are the probes with the first level of each cast alone.
func shallow() (list []probe) {
	for _, p := range probes() {
		for k, cast := range p.casts {
			p.casts[k] = [][3]float64{{0, cast[0][1], cast[0][2]}}
		}
		list = append(list, p)
	}
	return list
}

// Under levels of the cameras' own times a cast is averaged down to the depth that is written:
// below the level at the point's time.
func TestImagesThroughACastUnderTheirOwnTides(t *testing.T) {
	c := scene{sea: seaAt(t, 550)}
	c.surface = func(_, _, utc float64) (float64, float64, float64) { return 0.05 * tide(utc), 0, 0 }
	var gauge [][]float64
	for k := range tideSize {
		gauge = append(gauge, []float64{tideStart + tideStep*float64(k), 0.05 * tideAt(k)})
	}
	cast := [][3]float64{{0, 24, 2}, {4, 18, 8}, {12, 4, 30}}
	all, utc := block(newRand(143)), tideStart+20_000
	list, waters := soak(t, c, "angle", all, 300, utc, true, func(_, _, depth float64) [2]float64 { return mean(cast, depth) })
	f := files{
		"raw/a.csv": imageCloud(list, true, true, inMetres), "cameras.csv": cameraFile(all, noRotations, false, true, inMetres),
		"gauge.csv": lines("time,level", gauge...), "casts.csv": "x,y,temperature,salinity,depth\n5,6,24,2,0\n5,6,18,8,4\n5,6,4,30,12\n",
	}
	got := correctFiles(t, f, inUTC(imageJob)+"[water]\nstations = \"casts.csv\"\n[surface.gauge]\nfile = \"gauge.csv\"\n")
	compareImages(t, got, list, "column", inMetres, tolerances{2e-8, 2e-8})
	for i, w := range waters {
		near(t, i, "temperature", got.number(t, i, "temperature"), w[0], 0.51e-4)
		near(t, i, "n_water", got.number(t, i, "n_water"), imageSea(t, w[0], w[1]).waterPhase, 1e-9)
	}
}

// Casts under swell: a depth that is iterated over a surface that is met ray by ray, and
// yet the same water throughout gives what a job with that water gives.
func TestImagesThroughOneWaterUnderSwell(t *testing.T) {
	c, r := scene{surface: swell(0), sea: seaAt(t, 550)}, newRand(142)
	all := block(r)
	list := c.images(r, "angle", all, 300, 0, false)
	var points [][]float64
	for range 20_000 {
		x, y := 140*r.Float64()-20, 140*r.Float64()-20
		z, _, _ := c.surface(x, y, 0)
		points = append(points, []float64{x, y, z})
	}
	f := files{
		"raw/a.csv": imageCloud(list, true, false, inMetres), "surface.csv": lines("x,y,z", points...),
		"cameras.csv":   cameraFile(all, noRotations, false, false, inMetres),
		"casts.csv":     "x,y,temperature,salinity,depth\n5,6,17.5,34.9,1\n5,6,17.5,34.9,20\n",
		"zones.geojson": zonesFile([]place{{"All", [][2]float64{{-9e3, -9e3}, {9e3, -9e3}, {9e3, 9e3}, {-9e3, 9e3}}, 17.5, 34.9, nan}}),
	}
	const grid = "[surface.grid]\npoints = \"surface.csv\"\n"
	want := correctFiles(t, f, imageJob+seaWater+grid)
	for _, water := range []string{"[water]\nstations = \"casts.csv\"\n", "[water]\nzones = \"zones.geojson\"\n"} {
		got := correctFiles(t, f, imageJob+water+grid)
		for i := range list {
			if outcome := got.text(t, i, "outcome"); outcome != "corrected" || want.text(t, i, "outcome") != outcome {
				t.Fatalf("%s: row %d is %s", water, i, outcome)
			}
			for _, name := range []string{"x", "y", "z", "depth", "entry_level", "slope_x", "slope_y", "incidence_deg", "ray_count"} {
				near(t, i, water+name, got.number(t, i, name), want.number(t, i, name), 1e-9)
			}
		}
	}
}
