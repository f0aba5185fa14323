package pipeline

import (
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// Every outcome of points from images, each before those that its row has besides. The
// zone Good has water from x = 100 on, the zone Hot from 150, elsewhere there is none.
// Cameras twin stands where a does, both far ones stand low and in one place.
const outcomeCloud = `x,y,z,tide,views,want,constant
50,0,-5,,low far,no_surface,no_surface
50,0,1,0.25,low far,dry,dry
50,0,-5,0.25,low far,no_origin,no_origin
50,0,-5,0.25,a low b,no_origin,no_origin
50,0,-5,0.25,far far2,no_water,grazing
50,0,-5,0.25,a,no_water,few_rays
50,0,-5,0.25,low,no_origin,no_origin
160,0,-5,0.25,far far2,out_of_range,grazing
160,0,-5,0.25,,out_of_range,few_rays
120,0,-5,0.25,low,no_origin,no_origin
120,0,-5,0.25,far,few_rays,few_rays
120,0,-5,0.25,,few_rays,few_rays
120,0,-5,0.25,a far,grazing,grazing
120,0,-5,0.25,far far2,grazing,grazing
120,0,-5,0.25,a twin,unsolved,unsolved
120,0,-5,0.25,a b,corrected,corrected
`

const outcomeCameras = "camera,x,y,z\na,110,0,60\nb,130,3,60\nlow,120,0,-30\ntwin,110,0,60\nfar,9000,0,60\nfar2,9000,0,60\n"

// imageColumns are added columns with the outcomes that have a value in them.
var imageColumns = map[string][]string{
	"depth": {"corrected", "dry"}, "water_level": {"corrected", "dry"}, "entry_level": {"corrected"}, "refraction_deg": {"corrected"},
	"incidence_deg": {"corrected", "grazing"},
	"n_water":       {"corrected", "grazing", "unsolved"}, "slope_x": {"corrected", "grazing", "unsolved"},
	"ray_count":   {"corrected", "grazing", "unsolved", "few_rays", "no_origin", "no_water", "out_of_range"},
	"view_source": {"corrected", "grazing", "unsolved", "few_rays", "no_origin", "no_water", "out_of_range"},
}

func TestImageOutcomes(t *testing.T) {
	const job = imageJob + "residual = \"angle\"\n[surface]\ncolumn = \"tide\"\n"
	f := files{"cameras.csv": outcomeCameras, "zones.geojson": zonesFile([]place{band("Good", 100, 12), band("Hot", 150, 36)})}
	for by, water := range map[string]string{"want": "[water]\nzones = \"zones.geojson\"\n", "constant": seaWater} {
		for _, format := range formats {
			folder := t.TempDir()
			f.write(t, folder)
			files{"raw/a." + format: encode(t, format, outcomeCloud)}.write(t, folder)
			runJob(t, loadJob(t, folder, strings.Replace(job, "*.csv", "*."+format, 1)+water), Options{})
			output := filepath.Join("true", "a."+format)
			got, counts := decode(t, format, readFile(t, folder, output)), map[string]int64{}
			for i := range got.rows {
				want, is := got.text(t, i, by), got.text(t, i, "outcome")
				counts[want]++
				if is != want {
					t.Errorf("%s, %s, row %d (%s): outcome is %s, want %s", by, format, i+1, got.text(t, i, "views"), is, want)
					continue
				}
				for name, has := range imageColumns {
					if text := got.text(t, i, name); (text != "") != slices.Contains(has, want) {
						t.Errorf("%s, %s, row %d (%s): %s is %q", by, format, i+1, want, name, text)
					}
				}
				if has := len(strings.Fields(got.text(t, i, "views"))); got.text(t, i, "ray_count") != "" && got.number(t, i, "ray_count") != float64(has) {
					t.Errorf("row %d: ray_count is %s, want %d", i+1, got.text(t, i, "ray_count"), has)
				}
			}
			r := readReceipt(t, filepath.Join(folder, output))
			if !maps.Equal(r.Outcomes, counts) {
				t.Errorf("%s, %s: outcomes are %v, want %v", by, format, r.Outcomes, counts)
			}
			want := "4 of 14 points were seen by a camera that is on their own side of the surface: are cameras, cloud and level in one system and unit?"
			if !slices.Contains(r.Cautions, want) {
				t.Errorf("%s, %s: cautions are %q, want %q", by, format, r.Cautions, want)
			}
		}
	}
}

// A ray that enters where a curved surface has no plane has no surface, and is not counted.
func TestImageRayOffTheSurface(t *testing.T) {
	f := files{
		"raw/a.csv":   "x,y,z,views\n95,50,-5,east easter\n50,50,-5,east easter\n",
		"cameras.csv": "camera,x,y,z\neast,130,50,60\neaster,140,60,60\n",
		"above.csv":   "x,y,z\n0,0,0.1\n0,100,0\n96,0,0\n96,100,0.1\n",
	}
	got := correctFiles(t, f, imageJob+seaWater+"[surface]\nlevel = 0.42\n[surface.separation]\nfile = \"above.csv\"\n")
	for name, want := range map[string][]string{"outcome": {"no_surface", "corrected"}, "ray_count": {"", "2"}, "view_source": {"", "column"}} {
		if is := got.column(t, name); !slices.Equal(is, want) {
			t.Errorf("%s is %q, want %q", name, is, want)
		}
	}
}

// sensorsOfImages are four sensors in one cloud: a laser, two flights of one camera each
// with poses of its own, and cameras under water.
const sensorsOfImages = `[input]
files = ["raw/*.csv"]
[output]
folder = "true"
decimals = 9
[air]
temperature = 18
humidity = 60
[[sensor]]
name = "laser"
where.strip = ["laser"]
rays.model = "pulse"
[[sensor]]
name = "morning"
where.strip = ["morning"]
rays = { model = "multiview", cameras = "morning.csv", residual = "image" }
[[sensor]]
name = "noon"
where.strip = ["noon"]
rays = { model = "multiview", cameras = "noon.csv", residual = "equal" }
[[sensor]]
name = "divers"
where.strip = ["divers"]
rays = { model = "multiview", cameras = "divers.csv", residual = "angle", camera_medium = "water" }
`

// Each point by its own sensor's model and cameras, which may share names.
func TestSensorsWithImages(t *testing.T) {
	w, c, r := seaAt(t, 532), scene{surface: still(0.42, 0.02, -0.013), sea: seaAt(t, 550)}, newRand(170)
	w.level, w.slopeX, w.slopeY = 0.42, 0.02, -0.013
	morning, noon, divers := block(r), block(r), submerged()
	up := c.upward("angle", divers, 100)
	var list []image
	var strips []string
	var text strings.Builder
	text.WriteString("x,y,z,strip,views,origin_x,origin_y,origin_z\n")
	add := func(strip string, im image, origin string) {
		list, strips = append(list, im), append(strips, strip)
		views := ""
		if origin == ",," {
			views = named(im.views, " ")
		}
		text.WriteString(strings.Join(append(inMetres.in(im.raw), strip, views, origin), ",") + "\n")
	}
	for i := range 100 {
		add("morning", c.images(r, "image", morning, 1, 0, false)[0], ",,")
		add("noon", c.images(r, "equal", noon, 1, 0, false)[0], ",,")
		add("divers", up[i], ",,")
		s := w.see(0, vec{50, 50, 400}, c.dive(r, 0))
		add("laser", image{bed: s.bed, raw: s.raw, views: []int{0}, waterLevel: s.waterLevel, entryLevel: s.entryLevel, slopeX: 0.02, slopeY: -0.013, incidence: s.incidence, refraction: s.refraction}, "50,50,400")
	}
	dry := image{raw: vec{50, 50, 9}, views: []int{0, 1}}
	add("morning", dry, ",,")
	dry.raw[2] = -9
	add("divers", dry, ",,")
	f := files{
		"raw/a.csv": text.String(), "morning.csv": cameraFile(morning, withAngles, false, false, inMetres),
		"noon.csv": cameraFile(noon, noRotations, false, false, inMetres), "divers.csv": cameraFile(divers, withMatrix, false, false, inMetres),
		"zones.geojson": zonesFile([]place{{"All", [][2]float64{{-9e3, -9e3}, {9e3, -9e3}, {9e3, 9e3}, {-9e3, 9e3}}, 17.5, 34.9, nan}}),
	}
	for _, water := range []string{seaWater, "[water]\nzones = \"zones.geojson\"\n"} {
		folder := t.TempDir()
		f.write(t, folder)
		runJob(t, loadJob(t, folder, sensorsOfImages+water+"[surface.plane]\nlevel = 0.42\nat = [0, 0]\nslope_x = 0.02\nslope_y = -0.013\n"), Options{})
		got := readTable(t, readFile(t, folder, "true/a.csv"))
		for i, im := range list[:len(list)-2] {
			model, source, index := "multiview", "column", c.waterPhase
			if strips[i] == "laser" {
				model, source, index = "pulse", "", w.waterPhase
			}
			if got.text(t, i, "outcome") != "corrected" || got.text(t, i, "model") != model || got.text(t, i, "view_source") != source {
				t.Fatalf("seed %d: row %d of %s is %q", seed, i, strips[i], got.rows[i])
			}
			if group := got.text(t, i, "ng_water"); (group != "") != (model == "pulse") {
				t.Errorf("row %d of %s: ng_water is %q", i, strips[i], group)
			}
			for k, name := range []string{"x", "y", "z"} {
				near(t, i, strips[i]+" "+name, got.number(t, i, name), im.bed[k], 3e-9)
			}
			near(t, i, "ray_count", got.number(t, i, "ray_count"), float64(len(im.views)), 0)
			near(t, i, "n_water", got.number(t, i, "n_water"), index, 1e-9)
			near(t, i, "entry_level", got.number(t, i, "entry_level"), im.entryLevel, 6e-9)
			near(t, i, "incidence_deg", got.number(t, i, "incidence_deg"), im.incidence, 0.6e-5)
			near(t, i, "refraction_deg", got.number(t, i, "refraction_deg"), im.refraction, 0.6e-5)
		}
		r := readReceipt(t, filepath.Join(folder, "true/a.csv"))
		if want := map[string]int64{"corrected": 400, "dry": 1, "wet": 1}; !maps.Equal(r.Outcomes, want) {
			t.Errorf("outcomes are %v, want %v", r.Outcomes, want)
		}
	}
}

// Incidence is judged where the entries have come to rest: just below and just above the
// largest of a point's rays, under a saddle, whose first planes slope otherwise.
func TestImagesGrazingAtRest(t *testing.T) {
	height := func(x, y float64) float64 { return 4e-3 * (x - 50) * (y - 50) }
	c, r := scene{sea: seaAt(t, 550)}, newRand(175)
	c.surface = func(x, y, _ float64) (float64, float64, float64) {
		return 0.42 + height(x, y), 4e-3 * (y - 50), 4e-3 * (x - 50)
	}
	var nodes [][]float64
	for i := range 25 {
		x, y := -200+120*float64(i%5), -200+120*float64(i/5)
		nodes = append(nodes, []float64{x, y, height(x, y)})
	}
	all := block(r)
	f := files{"cameras.csv": cameraFile(all, noRotations, false, false, inMetres), "above.csv": lines("x,y,z", nodes...)}
	for range 10 {
		im := c.images(r, "angle", all, 1, 0, false)[0]
		widest := 0.0
		for _, k := range im.views {
			widest = max(widest, c.look("angle", all, []int{k, k}, im.bed, 0, false).incidence)
		}
		f["raw/a.csv"] = imageCloud([]image{im}, true, false, inMetres)
		for limit, want := range map[float64]string{widest - 1e-3: "grazing", widest + 1e-3: "corrected"} {
			job := imageJob + seaWater + "[surface]\nlevel = 0.42\n[surface.separation]\nfile = \"above.csv\"\n[limits]\nmax_incidence = " + exact(limit) + "\n"
			got := correctFiles(t, f, job)
			if is := got.text(t, 0, "outcome"); is != want {
				t.Errorf("seed %d: a point seen to %g degrees is %s with a limit of %g, want %s", seed, widest, is, limit, want)
			}
			if want == "corrected" {
				near(t, 0, "z", got.number(t, 0, "z"), im.bed[2], 2e-6)
			}
		}
	}
}
