package pipeline

import (
	"fmt"
	"math"
	"testing"
)

// ofImages is what double precision costs below 2 km: 2^-42 m a rounding, many times that
// where few rays meet at a small angle.
const ofImages = 5e-10

// imageCases are ways to describe a survey from images in files. Their units and places
// are those of a truthCase.
var imageCases = []struct {
	truthCase
	residual string
}{
	{truthCase{name: "level", surface: "level", plan: 1, height: 1, decimals: 9, roundingMetres: ofImages}, "image"},
	{truthCase{name: "level", surface: "level", plan: 1, height: 1, decimals: 9, roundingMetres: ofImages}, "angle"},
	{truthCase{name: "level", surface: "level", plan: 1, height: 1, decimals: 4, roundingMetres: ofImages}, "equal"},
	{truthCase{name: "plane", surface: "plane", plan: 1, height: 1, decimals: 9, roundingMetres: ofImages}, "image"},
	{truthCase{name: "far north, plane", surface: "plane", north: 7e6, plan: 1, height: 1, decimals: 9, roundingMetres: farNorth}, "image"},
	{truthCase{name: "far north, level", surface: "level", north: 7e6, plan: 1, height: 1, decimals: 9, roundingMetres: farNorth}, "angle"},
	{truthCase{name: "far north, plane", surface: "plane", north: 7e6, plan: 1, height: 1, decimals: 9, roundingMetres: farNorth}, "equal"},
	{truthCase{name: "feet, level", surface: "level", plan: foot, height: foot, units: "unit = \"ft\"\n", decimals: 9, roundingMetres: ofImages}, "angle"},
	{truthCase{name: "survey feet and metres, plane", surface: "plane", plan: surveyFoot, height: 1, units: "unit = \"us-ft\"\nvertical_unit = \"m\"\n", decimals: 9, roundingMetres: ofImages}, "image"},
	{truthCase{name: "metres and feet, column", surface: "column", plan: 1, height: foot, units: "vertical_unit = \"ft\"\n", decimals: 9, roundingMetres: ofImages}, "equal"},
}

// Points seen by 2 to 8 cameras come back, for each residual, in both formats.
func TestImagesTruthComesBack(t *testing.T) {
	for n, c := range imageCases {
		sea, r := seaAt(t, 550), newRand(100+uint64(n))
		sea.level = 0.42
		if c.surface == "plane" {
			sea.slopeX, sea.slopeY = 0.02, -0.013
		}
		s, all := scene{surface: still(sea.level, sea.slopeX, sea.slopeY), sea: sea}, block(r)
		var list []image
		for range 300 {
			if c.surface == "column" {
				s.surface = still(0.42+0.3*r.NormFloat64(), 0, 0)
			}
			list = append(list, s.images(r, c.residual, all, 1, 0, false)...)
		}
		for _, format := range formats {
			t.Run(fmt.Sprintf("%s, %s, %s", c.name, c.residual, format), func(t *testing.T) {
				folder := t.TempDir()
				files{
					"raw/a." + format:   encode(t, format, imageCloud(list, true, false, c.truthCase)),
					"cameras." + format: encode(t, format, cameraFile(all, withAngles, false, false, c.truthCase)),
				}.write(t, folder)
				runJob(t, loadJob(t, folder, inFormat(c.imageJob(sea), format)+fmt.Sprintf("residual = %q\n", c.residual)), Options{Workers: 2})
				half := 0.5 * math.Pow10(-c.decimals)
				if format == "parquet" {
					half = 0
				}
				got := decode(t, format, readFile(t, folder, "true/a."+format))
				compareImages(t, got, list, "column", c.truthCase, tolerances{half + c.roundingMetres/c.plan, half + c.roundingMetres/c.height})
				near(t, 0, "n_air", got.number(t, 0, "n_air"), sea.air, 0.6e-9)
				near(t, 0, "n_water", got.number(t, 0, "n_water"), sea.waterPhase, 0.6e-9)
			})
		}
	}
}

// imageJob is the job of a case without its residual.
func (c truthCase) imageJob(w sea) string {
	job := c.job(w)
	return job[:len(job)-len("model = \"pulse\"\n")] + "model = \"multiview\"\ncameras = \"cameras.csv\"\n"
}

// Both ways of crossing agree: least time over a surface, and halving the derivative of the
// optical path along a plane.
func TestImageCrossings(t *testing.T) {
	w, r := seaAt(t, 550), newRand(120)
	w.level, w.slopeX, w.slopeY = 0.42, 0.03, -0.02
	c := scene{surface: still(w.level, w.slopeX, w.slopeY), sea: w}
	for i := range 1000 {
		dry, bed := vec{60 * r.NormFloat64(), 60 * r.NormFloat64(), 60}, c.dive(r, 0)
		a, b := w.entry(dry, bed), c.crossing(dry, bed, 0)
		near(t, i, "distance of the crossings", a.plus(-1, b).length(), 0, 1e-10)
	}
}
