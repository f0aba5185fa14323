package quality

import (
	"math"
	"math/rand/v2"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// checkPlane compares the clouds over the plane of checkedCloud with check points.
func checkPlane(t *testing.T, check sheet, o Options) *Report {
	t.Helper()
	raw, corrected, _ := checkedCloud(5000, 0)
	o.Check, o.Reach = check.write(t, filepath.Join(t.TempDir(), "check.csv")), 4
	return diffSheets(t, "csv", raw, corrected, o)
}

// exactChecks are check points in the middle of the plane, on which it is right.
func exactChecks(n int) sheet {
	check := sheet{{"x", "y", "z"}}
	for i := range n {
		x, y := 500_005+90*float64(i)/float64(n), 7_000_010+float64(i*37%80)
		check = append(check, []string{exact(x), exact(y), exact(bed(x, y))})
	}
	return check
}

// Values that stand for none are as large as a float goes: as a coordinate of a check
// point they are ignored, whatever the way to match.
func TestCheckPointsWithoutValue(t *testing.T) {
	none := exact(-math.MaxFloat32)
	for _, match := range []string{MatchPlane, MatchNearest} {
		check := exactChecks(40)
		check = append(check, []string{"500050", "7000050", none}, []string{none, "7000050", "-3"}, []string{"500050", "1e300", "-3"})
		c := checkPlane(t, check, Options{Match: match}).Check
		if c.Ignored != 3 || c.Given != 40 || c.Count != 40 {
			t.Errorf("%s: %d ignored, %d of %d matched, want 3 and 40 of 40", match, c.Ignored, c.Count, c.Given)
		}
		if says := strings.Join(c.Warnings, "\n"); !strings.Contains(says, "3 check points lack a finite coordinate or have one beyond 1e12") {
			t.Errorf("warnings %q", says)
		}
	}
	raw, corrected, _ := checkedCloud(100, 0)
	path := sheet{{"x", "y", "z"}, {"500050", "7000050", none}}.write(t, filepath.Join(t.TempDir(), "check.csv"))
	folder := t.TempDir()
	_, err := Diff(t.Context(), raw.write(t, filepath.Join(folder, "a.csv")), corrected.write(t, filepath.Join(folder, "b.csv")), Options{Check: path})
	if err == nil || !strings.Contains(err.Error(), "has no check point") {
		t.Errorf("no check point has a height: error %v", err)
	}
}

// Values far beyond those of clouds neither stop the figures nor enter their bands.
func TestValuesOutOfReason(t *testing.T) {
	for _, c := range []struct{ column, value string }{
		{"z", "-9.5e14"}, {"z", "1e300"}, {"depth", "1e300"}, {"water_level", "-3.4028235e38"}, {"z_raw", "-9.5e14"}, {"x", "9e17"},
	} {
		raw, corrected, check := checkedCloud(2000, 40)
		for row := 1; row <= 2000; row += 3 {
			corrected.set(row, c.column, c.value)
		}
		path := check.write(t, filepath.Join(t.TempDir(), "check.csv"))
		for _, match := range []string{MatchPlane, MatchNearest} {
			r := diffSheets(t, "csv", raw, corrected, Options{Check: path, Reach: 4, Match: match, Overlap: true})
			for _, b := range r.ByDepth {
				if !(math.Abs(float64(b.From)) <= maxValue) {
					t.Errorf("%s %s: a band from %v", c.column, c.value, b.From)
				}
			}
		}
	}
}

// Of 40 check points the plane is right, 20 are the tops of stones: on land.
func TestLandIsInNoFigure(t *testing.T) {
	check := exactChecks(40)
	for i := range 20 {
		row := exactChecks(40)[1+i]
		check = append(check, []string{row[0], row[1], exact(sceneLevel + 0.1*float64(i))})
	}
	c := checkPlane(t, check, Options{}).Check
	if c.Count != 40 || c.OnLand != 20 || c.Unmatched != 0 || c.Given != 60 {
		t.Errorf("%d matched, %d on land, %d unmatched of %d, want 40, 20, 0 of 60", c.Count, c.OnLand, c.Unmatched, c.Given)
	}
	for name, v := range map[string]Number{"bias": c.Bias, "rmse": c.RMSE, "p95": c.P95} {
		if !isNear(v, 0, 1e-9) {
			t.Errorf("%s is %v, want 0", name, v)
		}
	}
	if !isNear(c.S44["exclusive"], 1, 0) || float64(c.ByDepth[0].From) < 0 {
		t.Errorf("exclusive %v, bands from %v", c.S44["exclusive"], c.ByDepth[0].From)
	}
	says := strings.Join(c.Warnings, "\n")
	if !strings.Contains(says, "20 check points lie on land") || strings.Contains(says, "unmatched") || strings.Contains(says, "deeper") {
		t.Errorf("warnings %q", says)
	}
	if !strings.HasPrefix(c.Meaning, "no slope") {
		t.Errorf("meaning %q", c.Meaning)
	}
	for i, p := range c.Points {
		if math.IsNaN(p.Residual) != (i >= 40) {
			t.Errorf("residual of point %d is %v", i, p.Residual)
		}
	}
}

// Lists of a report are lists in JSON where nothing was corrected, too.
func TestListsWithoutPoints(t *testing.T) {
	raw, corrected := scene(50)
	for row := 1; row <= 50; row++ {
		corrected.set(row, "outcome", "no_solution")
		for _, name := range []string{"x", "y", "z"} {
			corrected.set(row, name, corrected[row][corrected.column(name+"_raw")])
		}
	}
	if text := asJSON(t, diffSheets(t, "csv", raw, corrected, Options{})); !strings.Contains(text, `"by_depth": [],`) {
		t.Errorf("by_depth is no list: %.3000s", text)
	}
}

// Figures of a lean output take the level for depth plus height.
func TestCheckOfLeanOutput(t *testing.T) {
	raw, corrected, check := checkedCloud(20_000, 300)
	path := check.write(t, filepath.Join(t.TempDir(), "check.csv"))
	level := corrected.column("water_level")
	for i, row := range corrected {
		corrected[i] = slices.Delete(row, level, level+1)
	}
	c := diffSheets(t, "csv", raw, corrected, Options{Check: path, Reach: 2}).Check
	residual, depth := expected(t, corrected, check, MatchPlane)
	if c.Count != 300 {
		t.Fatalf("%d matched", c.Count)
	}
	checkSlope(t, c, residual, depth)
	checkByDepth(t, c, residual, depth)
}

// In a cloud of noise, and check points out of it, residual and depth share the check
// point's height: the slope is large, and no fault of index or rays. Of normal noise the
// scatter is its standard deviation.
func TestScatteredCloud(t *testing.T) {
	for _, c := range []struct {
		sigma float64
		noisy bool
	}{{0.02, false}, {1.2, true}} {
		rng := rand.New(rand.NewPCG(77, 1))
		raw, corrected, _ := checkedCloud(20_000, 0)
		check := sheet{{"x", "y", "z"}}
		for row := 1; row <= 20_000; row++ {
			x, _ := strconv.ParseFloat(corrected[row][0], 64)
			y, _ := strconv.ParseFloat(corrected[row][1], 64)
			z := bed(x, y) + c.sigma*rng.NormFloat64() - 4
			corrected.set(row, "z", exact(z))
			corrected.set(row, "depth", exact(sceneLevel-z))
			if row%100 == 0 {
				check = append(check, []string{exact(x), exact(y), exact(z)})
			}
		}
		path := check.write(t, filepath.Join(t.TempDir(), "check.csv"))
		r := diffSheets(t, "csv", raw, corrected, Options{Check: path, Reach: 2}).Check
		if !isNear(r.Scatter, c.sigma, 0.1*c.sigma) {
			t.Errorf("scatter %v, want %v", r.Scatter, c.sigma)
		}
		says := strings.Join(r.Warnings, "\n")
		if strings.Contains(says, "scatter by") != c.noisy || c.noisy && !strings.Contains(r.Meaning, "clean the cloud before index or rays") || strings.Contains(r.Meaning, "an index that is off") {
			t.Errorf("noise of %g: slope %v, meaning %q, warnings %q", c.sigma, r.Slope, r.Meaning, says)
		}
	}
}
