package medium

import (
	"math"
	"testing"
)

// derivative is the central difference of sixth order with step h.
func derivative(f func(float64) float64, x, h float64) float64 {
	d := func(k float64) float64 { return f(x+k*h) - f(x-k*h) }
	return (45*d(1) - 9*d(2) + d(3)) / (60 * h)
}

func TestGroupIndexIsDerivative(t *testing.T) {
	for _, f := range []WaterFormula{QuanFry, MillardSeaver, IAPWS} {
		t.Run(f.String(), func(t *testing.T) {
			for _, w := range []Water{{}, {TemperatureC: 17.5}, {TemperatureC: 30, Salinity: 0.5}, {TemperatureC: -2, PressureDbar: 50}} {
				groupIsDerivative(t, func(nm float64) (float64, float64, error) { return f.Index(w, nm) })
			}
		})
	}
	t.Run("sea water", func(t *testing.T) {
		for _, f := range []WaterFormula{QuanFry, MillardSeaver} {
			w := Water{TemperatureC: 23, Salinity: 38, PressureDbar: 90}
			groupIsDerivative(t, func(nm float64) (float64, float64, error) { return f.Index(w, nm) })
		}
	})
	t.Run("ciddor", func(t *testing.T) {
		for _, a := range []Air{StandardAir(), {TemperatureC: 35, PressureHPa: 980, HumidityPercent: 100, CO2PPM: 400}} {
			groupIsDerivative(t, a.Index)
		}
	})
}

// groupIsDerivative checks n_g = n - lambda dn/dlambda over the visible range.
// The difference's own rounding is lambda times 2e-16/h: below 1e-12.
func groupIsDerivative(t *testing.T, index func(nm float64) (phase, group float64, err error)) {
	t.Helper()
	for nm := 405.0; nm <= 695; nm += 10 {
		phase, group, err := index(nm)
		if err != nil {
			t.Fatal(err)
		}
		slope := derivative(func(x float64) float64 { n, _, _ := index(x); return n }, nm, 1)
		if want := phase - nm*slope; !(math.Abs(group-want) <= 1e-11) {
			t.Errorf("%g nm: group index %.13f, by difference %.13f", nm, group, want)
		}
		if group <= phase {
			t.Errorf("%g nm: group index %.9f not above phase index %.9f (normal dispersion)", nm, group, phase)
		}
	}
}
