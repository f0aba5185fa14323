package demo

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// smallSurvey writes outputs and truth of one tile and returns its survey.
func smallSurvey(t *testing.T, output, truth string) *Survey {
	t.Helper()
	s := newSurvey(t.TempDir())
	s.Tiles = []string{"sub/tile.csv"}
	for folder, text := range map[string]string{s.Corrected: output, s.Truth: truth} {
		path := below(folder, s.Tiles[0])
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return s
}

const (
	smallOutput = "x,y,z,x_raw,y_raw,z_raw,outcome\n" +
		"0,0,-1,3,4,-3,corrected\n" +
		"0,0,-3.0005,0,0,-4,corrected\n" +
		",,,,,,invalid\n" +
		"9,9,9,9,9,9,dry\n"
	smallTruth = "x,y,z,depth,outcome\n" +
		"0,0,-1,1,corrected\n" +
		"0,0,-3,3,corrected\n" +
		"1,1,-1,1,invalid\n" +
		"9,9,9,-9,dry\n"
)

// Sums by hand: raw heights lie 2 and 1 too deep, raw positions 5 and 0 away;
// the second corrected point is 0.0005 too deep.
func TestCompare(t *testing.T) {
	c, err := Compare(smallSurvey(t, smallOutput, smallTruth))
	if err != nil {
		t.Fatal(err)
	}
	if c.Points != 4 || c.Unexpected != 0 || c.Outcomes["corrected"] != 2 || c.Outcomes["invalid"] != 1 || c.Outcomes["dry"] != 1 {
		t.Errorf("comparison is %+v, want 4 points with the outcomes of the truth", c)
	}
	if len(c.Bands) != 2 || c.Bands[0].Points != 1 || c.Bands[1].Points != 1 || c.Bands[1].From != 2 || c.Bands[1].To != 4 {
		t.Fatalf("bands are %+v, want one point from 0 to 2 m and one from 2 to 4 m", c.Bands)
	}
	raw := c.All.Raw
	near(t, "bias in z", raw.ZBias, -1.5, 1e-12)
	near(t, "squared rms in z", raw.ZRMS*raw.ZRMS, 2.5, 1e-12)
	near(t, "largest in z", raw.ZMax, 2, 1e-12)
	near(t, "mean in plan", raw.PlanMean, 2.5, 1e-12)
	near(t, "squared rms in plan", raw.PlanRMS*raw.PlanRMS, 12.5, 1e-12)
	near(t, "largest in plan", raw.PlanMax, 5, 1e-12)
	near(t, "corrected bias in z", c.All.Corrected.ZBias, -0.00025, 1e-12)
	near(t, "corrected bias of the first band", c.Bands[0].Corrected.ZBias, 0, 0)
	if err := c.Verify(); err != nil {
		t.Errorf("Verify: %v, want no error", err)
	}
}

func TestVerifyFindsFaults(t *testing.T) {
	for name, output := range map[string]string{
		"a point 2 mm too deep":     strings.Replace(smallOutput, "-3.0005", "-3.002", 1),
		"a point 2 mm to the side":  strings.Replace(smallOutput, "0,0,-3.0005", "0.002,0,-3", 1),
		"a point that is not found": strings.Replace(smallOutput, "-3.0005", "NaN", 1),
		"another outcome":           strings.Replace(smallOutput, "dry", "outside", 1),
	} {
		t.Run(name, func(t *testing.T) {
			c, err := Compare(smallSurvey(t, output, smallTruth))
			if err != nil {
				t.Fatal(err)
			}
			if c.Verify() == nil {
				t.Error("Verify finds no fault")
			}
		})
	}
}

func TestCompareRefuses(t *testing.T) {
	for name, output := range map[string]string{
		"a row too few":         strings.TrimSuffix(smallOutput, "9,9,9,9,9,9,dry\n"),
		"a row too many":        smallOutput + "9,9,9,9,9,9,dry\n",
		"text for a number":     strings.Replace(smallOutput, "-3.0005", "deep", 1),
		"a column that is gone": strings.Replace(smallOutput, "outcome", "other", 1),
		"an empty file":         "",
	} {
		t.Run(name, func(t *testing.T) {
			if c, err := Compare(smallSurvey(t, output, smallTruth)); err == nil {
				t.Errorf("comparison is %+v, want an error", c)
			}
		})
	}
}
