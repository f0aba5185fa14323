package medium

import (
	"errors"
	"fmt"
	"math"
	"testing"
)

func TestWaterRange(t *testing.T) {
	nan := math.NaN()
	for _, row := range []struct {
		formula   WaterFormula
		water     Water
		nm        float64
		message   string // empty where there is a value
		published bool
	}{
		{QuanFry, Water{0, 0, 0}, 400, "", true},
		{QuanFry, Water{30, 35, 5}, 700, "", true},
		{QuanFry, Water{-2, 45, 100}, 400, "", false},
		{QuanFry, Water{35, 0, 0}, 532, "", false},
		{QuanFry, Water{20, 52, 0}, 532, "salinity is 52, want 0 to 45 for quan-fry", false},
		{QuanFry, Water{20, -0.1, 0}, 532, "salinity is -0.1, want 0 to 45 for quan-fry", false},
		{QuanFry, Water{35.5, 0, 0}, 532, "water temperature is 35.5 degrees C, want -2 to 35 for quan-fry", false},
		{QuanFry, Water{20, 35, 101}, 532, "water pressure is 101 dbar, want 0 to 100 for quan-fry", true},
		{QuanFry, Water{20, 35, 0}, 1064, "wavelength is 1064 nm, want 400 to 700 for quan-fry", false},
		{QuanFry, Water{nan, 35, 0}, 532, "water temperature is NaN degrees C, want -2 to 35 for quan-fry", false},
		{QuanFry, Water{20, nan, 0}, 532, "salinity is NaN, want 0 to 45 for quan-fry", false},
		{QuanFry, Water{20, 35, nan}, 532, "water pressure is NaN dbar, want 0 to 100 for quan-fry", false},
		{QuanFry, Water{20, 35, 0}, nan, "wavelength is NaN nm, want 400 to 700 for quan-fry", false},
		{MillardSeaver, Water{30, 40, 11000}, 500, "", true},
		{MillardSeaver, Water{30, 40, 11000}, 499, "", false},
		{MillardSeaver, Water{30, 40.5, 0}, 532, "", false},
		{MillardSeaver, Water{30, 40, 11001}, 532, "water pressure is 11001 dbar, want 0 to 11000 for millard-seaver", false},
		{IAPWS, Water{-12, 0, 0}, 200, "", true},
		{IAPWS, Water{110, 0, 0}, 1100, "", true},
		{IAPWS, Water{10, 0.5, 0}, 532, "", false},
		{IAPWS, Water{10, 0.6, 0}, 532, "salinity is 0.6, want 0 to 0.5 for iapws", false},
		{IAPWS, Water{math.Inf(1), 0, 0}, 532, "water temperature is +Inf degrees C, want -12 to 110 for iapws", false},
	} {
		phase, group, err := row.formula.Index(row.water, row.nm)
		checkOutcome(t, phase, group, err, row.message)
		if got := row.formula.Computed(row.water, row.nm); got != (row.message == "") {
			t.Errorf("%s %+v, %g nm: Computed is %v", row.formula, row.water, row.nm, got)
		}
		if got := row.formula.Published(row.water, row.nm); got != row.published {
			t.Errorf("%s %+v, %g nm: Published is %v", row.formula, row.water, row.nm, got)
		}
	}
}

func TestNearestWater(t *testing.T) {
	nan := math.NaN()
	for _, row := range []struct {
		formula     WaterFormula
		water, want Water
	}{
		{QuanFry, Water{20.1, 34.9, 5}, Water{20.1, 34.9, 5}},
		{QuanFry, Water{36, 46, 200}, Water{35, 45, 200}},
		{MillardSeaver, Water{-3, -1, 0}, Water{-2, 0, 0}},
		{IAPWS, Water{-3, 0.6, 0}, Water{-3, 0.5, 0}},
		{IAPWS, Water{nan, nan, 0}, Water{nan, nan, 0}},
	} {
		if got := row.formula.Nearest(row.water); fmt.Sprint(got) != fmt.Sprint(row.want) { // NaN too
			t.Errorf("%s %+v: the nearest is %+v, want %+v", row.formula, row.water, got, row.want)
		}
	}
}

func TestAirRange(t *testing.T) {
	nan := math.NaN()
	for _, row := range []struct {
		air       Air
		nm        float64
		message   string
		published bool
	}{
		{StandardAir(), 532, "", true},
		{Air{-40, 800, 0, 0}, 300, "", true},
		{Air{60, 500, 100, 2000}, 1700, "", false},
		{Air{15, 640, 30, 420}, 532, "", false},
		{Air{80, 1000, 0, 450}, 532, "air temperature is 80 degrees C, want -40 to 60 for ciddor", true},
		{Air{}, 532, "air pressure is 0 hPa, want 500 to 1200 for ciddor", false},
		{Air{15, 1013, 101, 450}, 532, "humidity is 101 %, want 0 to 100 for ciddor", false},
		{Air{15, 1013, 50, -1}, 532, "CO2 is -1 ppm, want 0 to 2000 for ciddor", true},
		{Air{15, 1013, 50, nan}, 532, "CO2 is NaN ppm, want 0 to 2000 for ciddor", false},
		{Air{nan, 1013, 50, 450}, 532, "air temperature is NaN degrees C, want -40 to 60 for ciddor", false},
		{StandardAir(), nan, "wavelength is NaN nm, want 300 to 1700 for ciddor", false},
	} {
		phase, group, err := row.air.Index(row.nm)
		checkOutcome(t, phase, group, err, row.message)
		if got := row.air.Published(row.nm); got != row.published {
			t.Errorf("%+v, %g nm: Published is %v", row.air, row.nm, got)
		}
	}
}

// checkOutcome wants either two indices above 1 or NaN with a typed error.
func checkOutcome(t *testing.T, phase, group float64, err error, message string) {
	t.Helper()
	if message == "" {
		if err != nil || !(phase > 1 && group > phase) {
			t.Errorf("got %v, %v, %v, want two indices", phase, group, err)
		}
		return
	}
	var fault *RangeError
	if !errors.As(err, &fault) || err.Error() != message {
		t.Errorf("error is %v, want a *RangeError %q", err, message)
	}
	if !math.IsNaN(phase) || !math.IsNaN(group) {
		t.Errorf("got %v, %v beside the error %q, want NaN", phase, group, message)
	}
}

func TestWaterFormulaNames(t *testing.T) {
	for _, f := range []WaterFormula{QuanFry, MillardSeaver, IAPWS} {
		if got, err := ParseWaterFormula(f.String()); err != nil || got != f {
			t.Errorf("ParseWaterFormula(%q) is %v, %v", f.String(), got, err)
		}
	}
	_, err := ParseWaterFormula("Quan-Fry")
	if want := `water formula is "Quan-Fry", want one of quan-fry, millard-seaver, iapws`; err == nil || err.Error() != want {
		t.Errorf("error is %v, want %s", err, want)
	}
	if got := WaterFormula(9).String(); got != "WaterFormula(9)" {
		t.Errorf("unknown formula is called %q", got)
	}
}
