package pipeline

import (
	"bytes"
	"maps"
	"math"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// submerged is 12 cameras 4 to 6 m below 0 that look up.
func submerged() (list []photo) {
	r := newRand(160)
	for k := range 12 {
		p := photo{at: vec{4*float64(k%4) + r.Float64(), 4*float64(k/4) + r.Float64(), -4 - 2*r.Float64()}}
		p.omega, p.phi, p.kappa = 180+30*r.Float64()-15, 30*r.Float64()-15, 360*r.Float64()
		list = append(list, p)
	}
	return list
}

// upward sees places 0.2 to 6 m above the surface from cameras within 35 degrees.
func (c *scene) upward(residual string, all []photo, n int) (list []image) {
	for r := newRand(161); len(list) < n; {
		p := vec{2 + 10*r.Float64(), 1 + 8*r.Float64()}
		p[2], _, _ = c.surface(p[0], p[1], 0)
		p[2] += 0.2 + 5.8*r.Float64()
		var views []int
		for k := range all {
			if all[k].offNadir(p) < 35 {
				views = append(views, k)
			}
		}
		if len(views) > 1 {
			list = append(list, c.look(residual, all, views, p, 0, false))
		}
	}
	return list
}

const upJob = imageJob + "camera_medium = \"water\"\n"

// Cameras under water see what is above it, by each residual, under a plane and a saddle.
func TestImagesOutOfTheWater(t *testing.T) {
	c := scene{surface: still(0.42, 0.02, -0.013), sea: seaAt(t, 550)}
	all := submerged()
	for _, residual := range []string{"image", "angle", "equal"} {
		list := c.upward(residual, all, 300)
		for _, format := range formats {
			folder := t.TempDir()
			files{
				"raw/a." + format:   encode(t, format, imageCloud(list, true, false, inMetres)),
				"cameras." + format: encode(t, format, cameraFile(all, withAngles, false, false, inMetres)),
			}.write(t, folder)
			job := upJob + "residual = \"" + residual + "\"\n" + seaWater + "[surface.plane]\nlevel = 0.42\nat = [0, 0]\nslope_x = 0.02\nslope_y = -0.013\n"
			runJob(t, loadJob(t, folder, inFormat(job, format)), Options{})
			compareImages(t, decode(t, format, readFile(t, folder, "true/a."+format)), list, "column", inMetres, tolerances{3e-9, 3e-9})
		}
	}
	c.surface = func(x, y, _ float64) (float64, float64, float64) {
		return 0.42 + 4e-3*(x-6)*(y-5), 4e-3 * (y - 5), 4e-3 * (x - 6)
	}
	var nodes [][]float64
	for i := range 25 {
		x, y := -40+20*float64(i%5), -40+20*float64(i/5)
		nodes = append(nodes, []float64{x, y, 4e-3 * (x - 6) * (y - 5)})
	}
	list := c.upward("angle", all, 300)
	f := files{"raw/a.csv": imageCloud(list, true, false, inMetres), "cameras.csv": cameraFile(all, noRotations, false, false, inMetres), "above.csv": lines("x,y,z", nodes...)}
	got := correctFiles(t, f, upJob+seaWater+"[surface]\nlevel = 0.42\n[surface.separation]\nfile = \"above.csv\"\n")
	compareImages(t, got, list, "column", inMetres, tolerances{2e-6, 2e-6})
}

// Looking up is looking down in a mirror: the same cameras see a point, and what is wet
// from below is dry from above. Rays bend the other way, so points above the water come
// down where those below go down too.
func TestImagesWetIsDryInAMirror(t *testing.T) {
	var up, down bytes.Buffer
	up.WriteString("x,y,z\n")
	down.WriteString("x,y,z\n")
	r := newRand(162)
	for range 2000 {
		x, y, z := 16*r.Float64(), 12*r.Float64(), 10*r.Float64()-3
		row(&up, exact(x), exact(y), exact(z))
		row(&down, exact(x), exact(y), exact(-z))
	}
	all := submerged()
	mirrored := slices.Clone(all)
	for k := range mirrored {
		mirrored[k].at[2] *= -1
	}
	const level = seaWater + "[surface]\nlevel = 0\n"
	wet := correctFiles(t, files{"raw/a.csv": up.String(), "cameras.csv": cameraFile(all, noRotations, false, false, inMetres)}, upJob+level)
	dry := correctFiles(t, files{"raw/a.csv": down.String(), "cameras.csv": cameraFile(mirrored, noRotations, false, false, inMetres)}, imageJob+level)
	seen := map[string]int{}
	for i := range wet.rows {
		a, b := wet.text(t, i, "outcome"), dry.text(t, i, "outcome")
		seen[a]++
		if (a == "wet") != (b == "dry") || (a == "few_rays") != (b == "few_rays") {
			t.Fatalf("seed %d: row %d is %s, and %s in the mirror", seed, i, a, b)
		}
		if n, m := wet.text(t, i, "ray_count"), dry.text(t, i, "ray_count"); n != m {
			t.Errorf("seed %d: row %d has %s cameras, and %s in the mirror", seed, i, n, m)
		}
		if a == "corrected" && b == "corrected" {
			for _, got := range []table{wet, dry} {
				if z := got.number(t, i, "z"); !(z < got.number(t, i, "z_raw")) {
					t.Errorf("seed %d: row %d rises from %s to %g", seed, i, got.text(t, i, "z_raw"), z)
				}
			}
			near(t, i, "depth", wet.number(t, i, "depth"), -wet.number(t, i, "z"), 1e-9)
		}
	}
	if seen["wet"] < 100 || seen["corrected"] < 100 || seen["few_rays"] < 10 {
		t.Errorf("outcomes are %v", seen)
	}
}

// Points on the cameras' side are wet, in the column, the receipt and the summary; a ray
// that the surface reflects is grazing, however wide max_incidence is.
func TestImagesWetOutcome(t *testing.T) {
	// 49 degrees is beyond the critical angle of asin(1/1.34) = 48.3 degrees.
	beyond := 5 * math.Tan(49*math.Pi/180)
	f := files{
		"raw/a.csv":   "x,y,z,views\n5,0,3,a b\n5,0,-1,a b\n5,0,0,a b\n" + exact(beyond-1) + ",0,0.5,a b\n" + exact(5+beyond) + ",0,0.001,b c\n",
		"cameras.csv": "camera,x,y,z\na,3,0,-5\nb,7,0,-5\nc,5,0,-5\n",
	}
	folder := t.TempDir()
	f.write(t, folder)
	s := runJob(t, loadJob(t, folder, upJob+seaWater+"[surface]\nlevel = 0\n[limits]\nmax_incidence = 85\n"), Options{})
	got := readTable(t, readFile(t, folder, "true/a.csv"))
	if outcomes, want := got.column(t, "outcome"), []string{"corrected", "wet", "wet", "corrected", "grazing"}; !slices.Equal(outcomes, want) {
		t.Errorf("outcomes are %q, want %q", outcomes, want)
	}
	want := map[string]int64{"corrected": 2, "wet": 2, "grazing": 1}
	if r := readReceipt(t, filepath.Join(folder, "true/a.csv")); !maps.Equal(r.Outcomes, want) || !maps.Equal(s.Outcomes, want) {
		t.Errorf("outcomes are %v in the receipt and %v in the summary, want %v", r.Outcomes, s.Outcomes, want)
	}
	if depth := got.text(t, 1, "depth"); depth != "1.000000000" {
		t.Errorf("the wet point's depth is %s, want 1.000000000", depth)
	}
}

// No caution of a level that is right for cameras under water.
func TestImagesOutOfTheWaterCautions(t *testing.T) {
	f := files{"raw/a.csv": "x,y,z,views\n500,0,3,a b\n500,2,40,a b\n", "cameras.csv": "camera,x,y,z\na,497,0,-5\nb,503,0,-5\n"}
	for level, want := range map[string]string{"0": "", "41": "the level 41 lies 1.0 m above the highest point: no point would be out of the water; are level and cloud in one vertical reference?"} {
		folder := t.TempDir()
		f.write(t, folder)
		runJob(t, loadJob(t, folder, upJob+"residual = \"angle\"\n"+seaWater+"[surface]\nlevel = "+level+"\n"), Options{})
		cautions := readReceipt(t, filepath.Join(folder, "true/a.csv")).Cautions
		if want == "" && len(cautions) > 0 || want != "" && !strings.Contains(strings.Join(cautions, "\n"), want) {
			t.Errorf("level %s: cautions are %q, want %q", level, cautions, want)
		}
	}
}
