package quality

import (
	"math"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// Warnings say where check points fall short.
func TestCheckWarnings(t *testing.T) {
	raw, corrected, check := checkedCloud(20_000, 300)
	shallow := sheet{check[0]}
	for _, row := range check[1:] {
		if z, _ := strconv.ParseFloat(row[2], 64); z > -2.5 {
			shallow = append(shallow, row)
		}
	}
	dry, wet := scene(3000)
	var land sheet
	land = append(land, check[0], []string{wet[10][0], wet[10][1], "1.5"})
	for _, c := range []struct {
		name           string
		raw, corrected sheet
		check          sheet
		says           []string
	}{
		{"few", raw, corrected, check[:20], []string{"19 check points are matched, fewer than 30"}},
		{"shallow", raw, corrected, shallow, []string{"the check points span depths of"}},
		{"far away", raw, corrected, sheet{check[0], {"1", "2", "-3"}}, []string{"no check point lies within 2"}},
		{"one lost", raw, corrected, append(check.clone(), []string{"1", "2", "-3"}, []string{"1", "2", "nan"}), []string{"1 of 301 check points are unmatched", "1 check points lack"}},
		{"on land", dry, wet, land, []string{"1 check points lie on land"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			path := c.check.write(t, filepath.Join(t.TempDir(), "check.csv"))
			r := diffSheets(t, "csv", c.raw, c.corrected, Options{Check: path, Reach: 2}).Check
			for _, says := range c.says {
				if !strings.Contains(strings.Join(r.Warnings, "\n"), says) {
					t.Errorf("warnings %q, want %q", r.Warnings, says)
				}
			}
		})
	}
}

// A slope is told by its sign where it is beyond its uncertainty at 95 %: Student's t is
// 12.71 for one degree of freedom, 2.78 for four, 2.00 for 58 (Student 1908, as in any
// table of the distribution; from memory).
func TestMeaning(t *testing.T) {
	for _, c := range []struct {
		slope, sigma float64
		points       int
		says         string
	}{
		{0.005, 0.002, 60, "the more the corrected bed is too shallow, by 0.50 % of the depth: an index"},
		{-0.005, 0.002, 60, "too deep, by 0.50 %"},
		{0.005, 0.003, 60, "no slope of the error against depth beyond its uncertainty"},
		{0.005, 0.002, 6, "no slope of the error"},
		{0.006, 0.002, 6, "too shallow, by 0.60 %"},
		{0.012, 0.001, 3, "no slope of the error"},
		{0.013, 0.001, 3, "too shallow, by 1.30 %"},
		{-5e-17, 1e-17, 60, "no slope of the error"}, // that of rounding
		{math.NaN(), math.NaN(), 2, "do not give a slope"},
	} {
		points := make([]CheckPoint, c.points)
		for i := range points {
			points[i].Depth = float64(i)
		}
		if got := meaning(c.slope, isTold(c.slope, c.sigma, points), false); !strings.Contains(got, c.says) {
			t.Errorf("%g ± %g of %d points: %q, want %q", c.slope, c.sigma, c.points, got, c.says)
		}
	}
}
