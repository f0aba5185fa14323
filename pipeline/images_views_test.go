package pipeline

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

// agree sees places of the bed from all cameras that a rule finds at the raw point, so
// that the simulated survey software and the job look at the same cameras. Points on
// which they do not come to agree, near the edge of an image, are left out.
func (c *scene) agree(residual string, all []photo, n int, sees func(photo, vec) bool) (list []image) {
	find := func(p vec) (views []int) {
		for k, camera := range all {
			if sees(camera, p) {
				views = append(views, k)
			}
		}
		return views
	}
	for r := newRand(150); len(list) < n; {
		im := image{raw: c.dive(r, 0)}
		bed := im.raw
		for range 6 {
			if views := find(im.raw); len(views) < 2 {
				break
			} else if slices.Equal(views, im.views) {
				list = append(list, im)
				break
			} else {
				im = c.look(residual, all, views, bed, 0, false)
			}
		}
	}
	return list
}

// Without a column views all cameras count whose images contain the raw point, whether
// they are turned by angles or by a matrix, else all within max_off_nadir: as a look
// at every camera finds them.
func TestImagesSeenByARule(t *testing.T) {
	c := scene{surface: still(0.42, 0.02, -0.013), sea: seaAt(t, 550)}
	all := block(newRand(151))
	const plane = "[surface.plane]\nlevel = 0.42\nat = [0, 0]\nslope_x = 0.02\nslope_y = -0.013\n[limits]\nmax_incidence = 85\n"
	for _, test := range []struct {
		name, source, residual, keys string
		rotations                    string
		sees                         func(photo, vec) bool
	}{
		{"angles", "image", "image", "", withAngles, photo.shows},
		{"matrix", "image", "image", "", withMatrix, photo.shows},
		{"matrix, far", "image", "equal", "max_off_nadir = 5\nresidual = \"equal\"\n", withMatrix, photo.shows},
		{"45 degrees", "angle", "angle", "", noRotations, func(p photo, q vec) bool { return p.offNadir(q) <= 45 }},
		{"30 degrees", "angle", "angle", "max_off_nadir = 30\n", noRotations, func(p photo, q vec) bool { return p.offNadir(q) <= 30 }},
	} {
		list := c.agree(test.residual, all, 300, test.sees)
		for _, format := range formats {
			t.Run(test.name+", "+format, func(t *testing.T) {
				folder := t.TempDir()
				files{
					"raw/a." + format:   encode(t, format, imageCloud(list, false, false, inMetres)),
					"cameras." + format: encode(t, format, cameraFile(all, test.rotations, test.rotations != noRotations, false, inMetres)),
				}.write(t, folder)
				runJob(t, loadJob(t, folder, inFormat(imageJob, format)+test.keys+seaWater+plane), Options{Workers: 2})
				got := decode(t, format, readFile(t, folder, "true/a."+format))
				compareImages(t, got, list, test.source, inMetres, nanometres)
				want := fmt.Sprintf("300 of 300 points name no cameras; those that may have seen them were taken, by %s. ", test.source)
				if r := readReceipt(t, folder+"/true/a."+format); !slices.ContainsFunc(r.Cautions, func(c string) bool { return strings.HasPrefix(c, want) }) {
					t.Errorf("cautions are %q, want one that begins %q", r.Cautions, want)
				}
			})
		}
	}
}

// The views of a cloud count before the images do; a camera that stands twice counts
// once, and the order of the names does not matter.
func TestImagesWithNamedViews(t *testing.T) {
	c, r := scene{surface: still(0.42, 0, 0), sea: seaAt(t, 550)}, newRand(152)
	all := block(r)
	list := c.images(r, "image", all, 200, 0, false)
	f := files{"cameras.csv": cameraFile(all, withMatrix, true, false, inMetres)}
	const job = imageJob + "residual = \"image\"\n" + seaWater + "[surface]\nlevel = 0.42\n"
	f["raw/a.csv"] = imageCloud(list, true, false, inMetres)
	want := correctFiles(t, f, job)
	compareImages(t, want, list, "column", inMetres, nanometres)
	for i := range list {
		views := slices.Clone(list[i].views)
		slices.Reverse(views)
		list[i].views = append(views, views[0], views[1])
	}
	f["raw/a.csv"] = imageCloud(list, true, false, inMetres)
	got := correctFiles(t, f, job)
	for i := range list {
		for _, name := range []string{"x", "y", "z", "ray_count", "incidence_deg", "entry_level"} {
			if is := got.text(t, i, name); is != want.text(t, i, name) {
				t.Errorf("row %d, cameras reversed and two of them twice: %s is %s, want %s", i, name, is, want.text(t, i, name))
			}
		}
	}
}

// The quick ways to solve, by what they are said to do, under a level.
func TestImagesQuickSolutions(t *testing.T) {
	c, r := scene{surface: still(0.42, 0, 0), sea: seaAt(t, 550)}, newRand(153)
	all := block(r)
	list := c.images(r, "equal", all, 200, 0, false)
	f := files{"raw/a.csv": imageCloud(list, true, false, inMetres), "cameras.csv": cameraFile(all, noRotations, false, false, inMetres)}
	for solve, find := range map[string]func(image) vec{
		"average": func(im image) vec {
			depth := 0.0
			for _, k := range im.views {
				i := all[k].offNadir(im.raw) * math.Pi / 180
				depth += (0.42 - im.raw[2]) * math.Tan(i) / math.Tan(math.Asin(c.air*math.Sin(i)/c.waterPhase)) / float64(len(im.views))
			}
			return vec{im.raw[0], im.raw[1], 0.42 - depth}
		},
		"intersect": func(im image) vec {
			var entries []photo
			var dirs []vec
			for _, k := range im.views {
				d := im.raw.plus(-1, all[k].at).unit()
				entry := all[k].at.plus((0.42-all[k].at[2])/d[2], d)
				wet, _, _ := c.under(d, 0, 0)
				entries, dirs = append(entries, photo{at: entry}), append(dirs, wet)
			}
			return triangulate("equal", entries, dirs, im.raw)
		},
	} {
		got := correctFiles(t, f, imageJob+"solve = \""+solve+"\"\n"+seaWater+"[surface]\nlevel = 0.42\n")
		for i, im := range list {
			want := find(im)
			for k, name := range []string{"x", "y", "z"} {
				near(t, i, solve+" "+name, got.number(t, i, name), want[k], 2e-9)
			}
		}
	}
}
