package pipeline

import (
	"math"
	"testing"
)

// A tilted plane from 400 waterline points on both banks of a reach, with 4 mm
// noise and 12 % blunders of 0 to +2 m: every corrected point lies within 2 mm of
// the truth down to 15 m depth. Without the robust fit the mean of the blunders alone
// would lift the surface by 12 cm, and the bed by 3 cm.
func TestPlaneOfAWaterline(t *testing.T) {
	r := newRand(1)
	plane := scene{surface: still(0.42, 0.0015, -0.0008), sea: standardSea(t)}
	var banks [][]float64
	for i := range 400 {
		x, y := 600*r.Float64(), float64(i%2)*400+30*r.Float64()
		z, _, _ := plane.surface(x, y, 0)
		z += 0.004 * r.NormFloat64()
		if i%25 < 3 {
			z += 2 * r.Float64()
		}
		banks = append(banks, []float64{x, y, z})
	}
	var shots []shot
	for range 3000 {
		shots = append(shots, plane.random(r, 0, 430, 24, 15))
	}
	for _, format := range formats {
		f := files{"raw/a." + format: encode(t, format, cloudOf(shots, 40, nil)), "edge." + format: encode(t, format, lines("x,y,z", banks...))}
		folder := t.TempDir()
		f.write(t, folder)
		j := loadJob(t, folder, inFormat(pulseJob+seaWater+"[surface.plane]\nwaterline = \"edge.csv\"\n", format))
		runJob(t, j, Options{})
		got := decode(t, format, readFile(t, folder, "true/a."+format))
		worst := 0.0
		for i, s := range shots {
			p := vec{got.number(t, i, "x"), got.number(t, i, "y"), got.number(t, i, "z")}
			worst = max(worst, p.plus(-1, s.bed).length())
			near(t, i, "water_level", got.number(t, i, "water_level"), s.waterLevel, 0.002)
		}
		if !(worst < 0.002) {
			t.Errorf("seed %d, %s: a point is %.4f m off, want within 2 mm", seed, format, worst)
		}
		if slope := got.number(t, 0, "slope_x"); math.Abs(slope-0.0015) > 1e-5 {
			t.Errorf("slope_x is %g, want 0.0015", slope)
		}
	}
}
