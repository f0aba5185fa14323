package medium

import (
	"fmt"
	"math"
	"testing"
)

// independent marks numbers that an independent evaluation of the printed
// coefficients gave, rounded to the digits shown.
const independent = "independent evaluation of the printed coefficients"

// TestGreenLaser holds the two indices near 532 nm at 1 atm; one unit of the
// sixth decimal is allowed.
func TestGreenLaser(t *testing.T) {
	const nm = 532
	type pair struct{ phase, group float64 }
	for _, row := range []struct {
		salinity, temperatureC float64
		want                   map[WaterFormula]pair
	}{
		{0, 0, map[WaterFormula]pair{IAPWS: {1.336377, 1.358056}, QuanFry: {1.336394, 1.358102}, MillardSeaver: {1.336386, 1.358102}}},
		{0, 10, map[WaterFormula]pair{IAPWS: {1.336101, 1.357744}, QuanFry: {1.336099, 1.357726}, MillardSeaver: {1.336106, 1.357755}}},
		{0, 20, map[WaterFormula]pair{IAPWS: {1.335380, 1.356952}, QuanFry: {1.335400, 1.356947}, MillardSeaver: {1.335381, 1.356946}}},
		{0, 30, map[WaterFormula]pair{IAPWS: {1.334311, 1.355783}, QuanFry: {1.334298, 1.355765}, MillardSeaver: {1.334311, 1.355780}}},
		{35, 0, map[WaterFormula]pair{QuanFry: {1.343383, 1.365850}, MillardSeaver: {1.343348, 1.365664}}},
		{35, 10, map[WaterFormula]pair{QuanFry: {1.342776, 1.365163}, MillardSeaver: {1.342778, 1.365094}}},
		{35, 20, map[WaterFormula]pair{QuanFry: {1.341877, 1.364184}, MillardSeaver: {1.341851, 1.364149}}},
		{35, 30, map[WaterFormula]pair{QuanFry: {1.340688, 1.362915}, MillardSeaver: {1.340693, 1.362962}}},
	} {
		for f, want := range row.want {
			w := Water{TemperatureC: row.temperatureC, Salinity: row.salinity}
			phase, group, err := f.Index(w, nm)
			if err != nil {
				t.Fatal(err)
			}
			if math.Abs(phase-want.phase) > 1e-6 || math.Abs(group-want.group) > 1e-6 {
				t.Errorf("%s %+v: got %.6f, %.6f, want %.6f, %.6f (%s)", f, w, phase, group, want.phase, want.group, independent)
			}
		}
	}
}

// TestFormulasAgree holds the greatest difference between two formulas on one
// grid: 0 to 30 degrees C by 1, salinity by 2.5, wavelength by 5 nm, 1 atm.
func TestFormulasAgree(t *testing.T) {
	for _, row := range []struct {
		name        string
		a, b        WaterFormula
		maxSalinity float64
		low, high   float64 // nm
		group       bool
		max         float64 // by independent evaluation, in the digits shown
		unit        float64 // of its last digit
	}{
		{"phase", QuanFry, MillardSeaver, 40, 450, 650, false, 5.3e-5, 1e-6},
		{"phase in both published ranges", QuanFry, MillardSeaver, 35, 500, 650, false, 4.2e-5, 1e-6},
		{"phase fresh", QuanFry, IAPWS, 0, 450, 650, false, 2.1e-5, 1e-6},
		{"phase fresh", MillardSeaver, IAPWS, 0, 450, 650, false, 1.7e-5, 1e-6},
		{"phase fresh in published range", MillardSeaver, IAPWS, 0, 500, 650, false, 1.1e-5, 1e-6},
		{"group fresh", QuanFry, IAPWS, 0, 450, 650, true, 8.3e-5, 1e-6},
		{"group fresh", MillardSeaver, IAPWS, 0, 450, 650, true, 1.25e-4, 1e-6},
		{"group", QuanFry, MillardSeaver, 40, 450, 650, true, 2.9e-4, 1e-5},
		{"group green", QuanFry, MillardSeaver, 40, 532, 532, true, 2.1e-4, 1e-5},
	} {
		t.Run(fmt.Sprintf("%s/%s against %s", row.name, row.a, row.b), func(t *testing.T) {
			phase, group := greatestDifference(t, row.a, row.b, interval{0, 30}, row.maxSalinity, interval{row.low, row.high})
			got := phase
			if row.group {
				got = group
			}
			if math.Abs(got-row.max) > row.unit {
				t.Errorf("greatest difference %.3g, want %.3g (%s)", got, row.max, independent)
			}
		})
	}
}

// TestExtendedRange holds how far two independent fits drift apart beyond their
// published ranges. The bound at 532 nm is the one the range was chosen by.
func TestExtendedRange(t *testing.T) {
	for _, row := range []struct{ low, high, phase, group float64 }{
		{532, 532, 7.5e-5, 3.0e-4},
		{450, 700, 1.03e-4, 4.3e-4},
		{400, 700, 1.5e-4, 5.8e-4},
	} {
		phase, group := greatestDifference(t, QuanFry, MillardSeaver, interval{-2, 35}, 45, interval{row.low, row.high})
		if phase > row.phase || group > row.group {
			t.Errorf("%g to %g nm: differences %.3g, %.3g, want at most %.3g, %.3g", row.low, row.high, phase, group, row.phase, row.group)
		}
	}
}

func greatestDifference(t *testing.T, a, b WaterFormula, temperature interval, maxSalinity float64, nm interval) (phase, group float64) {
	t.Helper()
	for tc := temperature.low; tc <= temperature.high; tc++ {
		for s := 0.0; s <= maxSalinity; s += 2.5 {
			for l := nm.low; l <= nm.high; l += 5 {
				w := Water{TemperatureC: tc, Salinity: s}
				pa, ga, errA := a.Index(w, l)
				pb, gb, errB := b.Index(w, l)
				if errA != nil || errB != nil {
					t.Fatal(errA, errB)
				}
				phase, group = math.Max(phase, math.Abs(pa-pb)), math.Max(group, math.Abs(ga-gb))
			}
		}
	}
	return phase, group
}

// TestTelescopeTable compares with a deep-sea table of Quan & Fry's formula at 9
// decimals. Its nominal salinity, 38.44, does not reproduce its 1/lambda term;
// 38.40 does, and then every digit of the other terms is put to the test.
func TestTelescopeTable(t *testing.T) {
	rows := 0
	for _, c := range readCheckValues(t, "refractive_index.json") {
		if c.CheckKind != "own_formula_inputs_uncertain" {
			continue
		}
		rows++
		n, _ := quanFry(c.Inputs["t_C"], 38.40, c.Inputs["lambda_nm"])
		at530, _ := quanFry(c.Inputs["t_C"], 38.40, 530)
		if got := n - at530; math.Abs(got-c.Value) > 4e-9 {
			t.Errorf("%g nm: difference to 530 nm %.9f, want %.9f (%s)", c.Inputs["lambda_nm"], got, c.Value, c.Source)
		}
	}
	if rows != 6 {
		t.Errorf("compared %d rows, want 6", rows)
	}
}

// TestMillardSeaverWarmAndDeep adds the warm rows under pressure of Millard &
// Seaver 1990, Table 2 (589.26 nm), where the terms in p^2 t^2, p S t and p S t^2
// count. One unit of the last digit is allowed.
func TestMillardSeaverWarmAndDeep(t *testing.T) {
	for _, row := range []struct {
		water Water
		want  float64
	}{
		{Water{20, 0, 4000}, 1.338647},
		{Water{20, 35, 0}, 1.339386},
		{Water{20, 35, 2000}, 1.342228},
		{Water{25, 35, 10000}, 1.351836},
	} {
		if got, _ := millardSeaver(row.water, 589.26); math.Abs(got-row.want) > 1e-6 {
			t.Errorf("MillardSeaver1990/%+v: got %.7f, want %.6f", row.water, got, row.want)
		}
	}
}

// TestPressureLeftOut measures, by the formula that has it, the pressure term
// that the others leave out: 1.3e-6 to 1.7e-6 per dbar.
func TestPressureLeftOut(t *testing.T) {
	for _, tc := range []float64{-2, 10, 35} {
		for _, s := range []float64{0, 20, 45} {
			for _, nm := range []float64{400, 532, 700} {
				surface, _, _ := MillardSeaver.Index(Water{tc, s, 0}, nm)
				below, _, err := MillardSeaver.Index(Water{tc, s, 100}, nm)
				if perDbar := (below - surface) / 100; err != nil || !(perDbar > 1.3e-6 && perDbar < 1.7e-6) {
					t.Errorf("%g C, salinity %g, %g nm: %.3g per dbar, error %v", tc, s, nm, perDbar, err)
				}
			}
		}
	}
	for _, f := range []WaterFormula{QuanFry, IAPWS} {
		a, ag, _ := f.Index(Water{TemperatureC: 12}, 532)
		b, bg, err := f.Index(Water{TemperatureC: 12, PressureDbar: 40}, 532)
		if f.UsesPressure() || err != nil || a != b || ag != bg {
			t.Errorf("%s: pressure entered the index: %v %v, %v %v, %v", f, a, b, ag, bg, err)
		}
	}
	if !MillardSeaver.UsesPressure() {
		t.Error("millard-seaver says it does not use the pressure")
	}
}
