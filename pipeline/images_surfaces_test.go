package pipeline

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// nanometres is half a unit of the last of nine decimals and what ofImages says.
var nanometres = tolerances{0.5e-9 + ofImages, 0.5e-9 + ofImages}

// atPoint sees the same bed as look, but through the plane that touches the surface at the
// raw plan position, as if all rays of a point met one plane.
func (c *scene) atPoint(residual string, all []photo, im image) image {
	raw := im.raw
	for range 6 {
		z, sx, sy := c.surface(raw[0], raw[1], im.utc)
		flat := scene{surface: still(z-sx*raw[0]-sy*raw[1], sx, sy), sea: c.sea}
		raw = flat.look(residual, all, im.views, im.bed, im.utc, false).raw
	}
	im.raw = raw
	return im
}

// moved is the rms distance between the raw points of two simulations.
func moved(a, b []image) float64 {
	sum := 0.0
	for i := range a {
		d := a[i].raw.plus(-1, b[i].raw)
		sum += d.dot(d)
	}
	return math.Sqrt(sum / float64(len(a)))
}

// A separation that is a saddle, exactly: each ray bends at its own entry. Taken at the
// point, one plane for all rays would leave millimetres, a hundred times the tolerance and more.
func TestImagesUnderASaddle(t *testing.T) {
	height := func(x, y float64) float64 { return 40 + 1e-3*(x-50)*(y-60) }
	c, r := scene{sea: seaAt(t, 550)}, newRand(130)
	c.surface = func(x, y, _ float64) (float64, float64, float64) {
		return 0.42 - 40 + height(x, y), 1e-3 * (y - 60), 1e-3 * (x - 50)
	}
	all := block(r)
	var nodes [][]float64
	for i := range 25 {
		x, y := -200+120*float64(i%5), -200+120*float64(i/5)
		nodes = append(nodes, []float64{x, y, height(x, y)})
	}
	for _, residual := range []string{"image", "angle", "equal"} {
		list, flat := c.images(r, residual, all, 150, 0, false), []image{}
		for _, im := range list {
			flat = append(flat, c.atPoint(residual, all, im))
		}
		if m := moved(list, flat); m < 2e-3 {
			t.Fatalf("%s: one plane a point would move raw points by %g m, too little to show", residual, m)
		}
		f := files{
			"raw/a.csv": imageCloud(list, true, false, inMetres), "cameras.csv": cameraFile(all, withMatrix, false, false, inMetres),
			"above.csv": lines("x,y,z", nodes...),
		}
		job := imageJob + fmt.Sprintf("residual = %q\n", residual) + seaWater + "[surface]\nlevel = -39.58\n[surface.separation]\nfile = \"above.csv\"\n"
		compareImages(t, correctFiles(t, f, job), list, "column", inMetres, tolerances{2e-6, 2e-6})
	}
}

// Swell as a grid of surface points: what it leaves is the grid's. With a plane a point
// the bound would not hold.
func TestImagesUnderSwell(t *testing.T) {
	c, r := scene{surface: swell(0), sea: seaAt(t, 550)}, newRand(131)
	all := block(r)
	list, flat := c.images(r, "angle", all, 400, 0, false), []image{}
	for _, im := range list {
		flat = append(flat, c.atPoint("angle", all, im))
	}
	var points [][]float64
	for range 40_000 {
		x, y := 140*r.Float64()-20, 140*r.Float64()-20
		z, _, _ := c.surface(x, y, 0)
		points = append(points, []float64{x, y, z})
	}
	f := files{"cameras.csv": cameraFile(all, noRotations, false, false, inMetres), "surface.csv": lines("x,y,z", points...)}
	var left [2]float64
	for k, cloud := range [][]image{list, flat} {
		f["raw/a.csv"] = imageCloud(cloud, true, false, inMetres)
		got := correctFiles(t, f, imageJob+seaWater+"[surface.grid]\npoints = \"surface.csv\"\n")
		sum := 0.0
		for i, im := range list {
			if outcome := got.text(t, i, "outcome"); outcome != "corrected" {
				t.Fatalf("seed %d: row %d is %s", seed, i, outcome)
			}
			d := vec{got.number(t, i, "x"), got.number(t, i, "y"), got.number(t, i, "z")}.plus(-1, im.bed)
			sum += d.dot(d)
			near(t, i, "water_level", got.number(t, i, "water_level"), im.waterLevel, 5e-3)
			near(t, i, "entry_level", got.number(t, i, "entry_level"), im.entryLevel, 5e-3)
		}
		left[k] = math.Sqrt(sum / float64(len(list)))
	}
	t.Logf("left: %.5f m; of raw points made with a plane a point %.5f m", left[0], left[1])
	if left[0] > swellLeft || left[1] < 2*swellLeft {
		t.Errorf("seed %d: the bed is %.5f m off (rms), want %g at most; made with a plane a point %.5f m, want twice that at least", seed, left[0], swellLeft, left[1])
	}
}

const swellLeft = 1e-3

// A grid made of points of a tilted plane is that plane.
func TestImagesUnderAGridOfAPlane(t *testing.T) {
	c, r := scene{surface: still(0.42, 0.02, -0.013), sea: seaAt(t, 550)}, newRand(132)
	all := block(r)
	list := c.images(r, "image", all, 500, 0, false)
	var points [][]float64
	for range 5000 {
		x, y := 140*r.Float64()-20, 140*r.Float64()-20
		points = append(points, []float64{x, y, 0.42 + 0.02*x - 0.013*y})
	}
	f := files{
		"raw/a.csv": imageCloud(list, true, false, inMetres), "surface.csv": lines("x,y,z", points...),
		"cameras.csv": cameraFile(all, withAngles, false, false, inMetres),
	}
	got := correctFiles(t, f, imageJob+seaWater+"[surface.grid]\npoints = \"surface.csv\"\n")
	compareImages(t, got, list, "column", inMetres, tolerances{1e-8, 1e-8})
}

// A river that falls evenly: the profile is a plane that slopes along the line.
func TestImagesUnderAProfile(t *testing.T) {
	const fall = 0.004
	along := vec{0.8, 0.6}
	c, r := scene{surface: still(2, -fall*along[0], -fall*along[1]), sea: seaAt(t, 550)}, newRand(133)
	all := block(r)
	list := c.images(r, "angle", all, 500, 0, false)
	var levels [][]float64
	for k := range 31 {
		p := vec{}.plus(10*float64(k)-100, along)
		levels = append(levels, []float64{p[0], p[1], 2 - fall*(10*float64(k)-100)})
	}
	f := files{
		"raw/a.csv": imageCloud(list, true, false, inMetres), "levels.csv": lines("x,y,z", levels...),
		"cameras.csv":  cameraFile(all, noRotations, false, false, inMetres),
		"line.geojson": `{"type":"LineString","coordinates":[[-80,-60],[160,120]]}`,
	}
	got := correctFiles(t, f, imageJob+seaWater+"[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = 150\n")
	compareImages(t, got, list, "column", inMetres, tolerances{1e-7, 1e-7})
}

// Each camera saw its own tide: a point's rays have levels that differ by decimetres, at
// the time of none of which the point is stamped.
func TestImagesAtTheTimesOfTheirCameras(t *testing.T) {
	c, r := scene{sea: seaAt(t, 550)}, newRand(134)
	c.surface = func(_, _, utc float64) (float64, float64, float64) { return 0.5 + tide(utc), 0, 0 }
	all := block(r)
	utc := tideStart + 20_000
	for residual, rotations := range map[string]string{"image": withMatrix, "angle": noRotations} {
		var list []image
		for range 400 {
			bed := c.dive(r, utc)
			bed[2] -= 2 // below the lowest water of all cameras' times
			list = append(list, c.look(residual, all, choose(r, all, bed), bed, utc, true))
		}
		if m := moved(list, c.again(residual, all, list)); m < 0.05 {
			t.Fatalf("the cameras' own times move raw points by %g m, too little to show", m)
		}
		f := files{"cameras.csv": cameraFile(all, rotations, false, true, inMetres), "gauge.csv": gaugeFile(true)}
		for name, times := range map[string]bool{"times in the cloud": true, "at": false} {
			at := ""
			if !times {
				at = "at = 2026-03-04T05:33:20Z\n"
			}
			f["raw/a.csv"] = imageCloud(list, true, times, inMetres)
			t.Run(residual+", "+name, func(t *testing.T) {
				got := correctFiles(t, f, inUTC(imageJob)+seaWater+"[surface.gauge]\nfile = \"gauge.csv\"\nzero = 0.5\n"+at)
				compareImages(t, got, list, "column", inMetres, nanometres)
			})
		}
	}
}

// again sees the same points, all rays at the point's time.
func (c *scene) again(residual string, all []photo, list []image) (other []image) {
	for _, im := range list {
		other = append(other, c.look(residual, all, im.views, im.bed, im.utc, false))
	}
	return other
}

// Swell that moves on while the cameras see it, from surface points of every camera's time:
// within the window of a camera's time, not the point's.
func TestImagesThroughMovingSwell(t *testing.T) {
	c, r := scene{surface: swell(1), sea: seaAt(t, 550)}, newRand(135)
	all := block(r)[:8]
	for k := range all {
		all[k].utc = 1.9e9 + 10*float64(k)
	}
	var points [][]float64
	for _, p := range all {
		for range 6000 {
			x, y := 140*r.Float64()-20, 140*r.Float64()-20
			z, _, _ := c.surface(x, y, p.utc)
			points = append(points, []float64{x, y, z, p.utc})
		}
	}
	var list []image
	for len(list) < 300 {
		bed := c.dive(r, 1.9e9+35)
		bed[1], bed[2] = 40*r.Float64(), -1-9*r.Float64()
		if views := choose(r, all, bed); len(views) > 2 {
			list = append(list, c.look("angle", all, views, bed, 1.9e9+35, true))
		}
	}
	f := files{
		"raw/a.csv": imageCloud(list, true, false, inMetres), "surface.csv": lines("x,y,z,time", points...),
		"cameras.csv": cameraFile(all, noRotations, false, true, inMetres),
	}
	for _, test := range []struct {
		window string
		want   bool
	}{{"window = 1\n", true}, {"window = 1e6\n", false}} {
		got := correctFiles(t, f, imageJob+seaWater+"[surface.grid]\npoints = \"surface.csv\"\n"+test.window)
		sum := 0.0
		for i, im := range list {
			d := vec{got.number(t, i, "x"), got.number(t, i, "y"), got.number(t, i, "z")}.plus(-1, im.bed)
			sum += d.dot(d)
		}
		off := math.Sqrt(sum / float64(len(list)))
		t.Logf("%s: %.4f m", strings.TrimSpace(test.window), off)
		if (off < 0.01) != test.want {
			t.Errorf("seed %d, %s: the bed is %.4f m off (rms), want that within 0.01: %t", seed, strings.TrimSpace(test.window), off, test.want)
		}
	}
}

// A zone's level holds for all rays of a point in it, those that enter outside it too.
func TestImagesInZonesWithLevels(t *testing.T) {
	r := newRand(136)
	all := block(r)
	west := place{"West Pool", [][2]float64{{-500, -500}, {50, -500}, {50, 500}, {-500, 500}}, 11.25, 3.5, 1.1}
	var list []image
	var zones []int
	for len(list) < 600 {
		c := scene{surface: still(0.42, 0.01, -0.02), sea: seaAt(t, 550)}
		k := r.IntN(2)
		if k == 0 {
			c = scene{surface: still(1.1, 0, 0), sea: imageSea(t, 11.25, 3.5)}
		}
		im := c.images(r, "image", all, 1, 0, false)[0]
		if (im.raw[0] < 50) == (k == 0) {
			list, zones = append(list, im), append(zones, k)
		}
	}
	f := files{
		"raw/a.csv": imageCloud(list, true, false, inMetres), "zones.geojson": zonesFile([]place{west}),
		"cameras.csv": cameraFile(all, withAngles, false, false, inMetres),
	}
	got := correctFiles(t, f, imageJob+seaWater+"zones = \"zones.geojson\"\n[surface.plane]\nlevel = 0.42\nat = [0, 0]\nslope_x = 0.01\nslope_y = -0.02\n")
	compareImages(t, got, list, "column", inMetres, nanometres)
	for i, k := range zones {
		if source, want := got.text(t, i, "water_source"), []string{"zone West Pool", "job"}[k]; source != want {
			t.Errorf("row %d: water_source is %q, want %q", i, source, want)
		}
	}
}
