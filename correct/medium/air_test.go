package medium

import (
	"math"
	"testing"
)

// saturationPressureIF97 is the saturation pressure of water in Pa by
// IAPWS-IF97 (1997), eq. 30, with the coefficients from memory;
// TestSaturationPressureIF97 holds them to the release's verification values.
func saturationPressureIF97(temperatureC float64) float64 {
	n := [...]float64{
		0.11670521452767e4, -0.72421316703206e6, -0.17073846940092e2, 0.12020824702470e5, -0.32325550322333e7,
		0.14915108613530e2, -0.48232657361591e4, 0.40511340542057e6, -0.23855557567849, 0.65017534844798e3,
	}
	kelvin := temperatureC + 273.15
	th := kelvin + n[8]/(kelvin-n[9])
	a := th*th + n[0]*th + n[1]
	b := n[2]*th*th + n[3]*th + n[4]
	c := n[5]*th*th + n[6]*th + n[7]
	return 1e6 * math.Pow(2*c/(-b+math.Sqrt(b*b-4*a*c)), 4)
}

func TestSaturationPressureIF97(t *testing.T) {
	for _, row := range []struct{ kelvin, want, unit float64 }{
		{300, 0.353658941e4, 1e-5}, // IAPWS-IF97, Table 35, from memory
		{500, 0.263889776e7, 1e-2}, // the same
	} {
		if got := saturationPressureIF97(row.kelvin - 273.15); math.Abs(got-row.want) > row.unit {
			t.Errorf("%g K: %.9g Pa, want %.9g", row.kelvin, got, row.want)
		}
	}
}

// TestSaturationPressure holds the equation of BIPM to that of IAPWS; 0.1 % of
// saturated vapour is 1e-9 of the index at 20 degrees C.
func TestSaturationPressure(t *testing.T) {
	for tc := 0.0; tc <= 60; tc++ {
		if ratio := saturationPressure(tc) / saturationPressureIF97(tc); math.Abs(ratio-1) > 1e-3 {
			t.Errorf("%g C: ratio to IAPWS-IF97 %.6f, want 1 within 0.1 %%", tc, ratio)
		}
	}
}

// TestAirGroupAgainstIAG1999 compares the group index with the closed formula of
// IAG Resolution 3 (XXII General Assembly, Birmingham 1999), which claims 0.25
// ppm: N = (273.15/1013.25) N_g0 p/T - 11.27 e/T, 375 ppm CO2, p and e in hPa.
// The same resolution's phase formula holds the phase index.
func TestAirGroupAgainstIAG1999(t *testing.T) {
	for _, tc := range []float64{0, 12, 20, 35} {
		for _, hPa := range []float64{900, 1013.25, 1050} {
			for _, humidity := range []float64{0, 50, 100} {
				for _, nm := range []float64{500, 532, 658, 850, 1064} {
					air := Air{TemperatureC: tc, PressureHPa: hPa, HumidityPercent: humidity, CO2PPM: 375}
					phase, group, err := air.Index(nm)
					if err != nil {
						t.Fatal(err)
					}
					s, kelvin, vapour := 1e6/(nm*nm), tc+273.15, humidity/100*saturationPressureIF97(tc)/100
					iag := func(n0 float64) float64 {
						return 1 + 1e-6*(273.15/1013.25*n0*hPa/kelvin-11.27*vapour/kelvin)
					}
					if want := iag(287.6155 + 4.88660*s + 0.06800*s*s); math.Abs(group-want) > 0.25e-6 {
						t.Errorf("%+v, %g nm: group index %.8f, IAG %.8f", air, nm, group, want)
					}
					if want := iag(287.6155 + 1.62887*s + 0.01360*s*s); math.Abs(phase-want) > 0.25e-6 {
						t.Errorf("%+v, %g nm: phase index %.8f, IAG %.8f", air, nm, phase, want)
					}
				}
			}
		}
	}
}

// TestAirIndependent: 20 degrees C, 1013.25 hPa, 50 % humidity, 450 ppm, 532 nm
// by an independent evaluation of the printed coefficients, nine decimals.
func TestAirIndependent(t *testing.T) {
	phase, group, err := Air{TemperatureC: 20, PressureHPa: 1013.25, HumidityPercent: 50, CO2PPM: 450}.Index(532)
	if err != nil || math.Abs(phase-1.000273027) > 1e-9 || math.Abs(group-1.000284401) > 1e-9 {
		t.Errorf("got %.9f, %.9f, %v, want 1.000273027, 1.000284401 (%s)", phase, group, err, independent)
	}
}

// TestAirExtremes adds the rows of Stone & Zimmerman, NIST Engineering Metrology
// Toolbox, Index of Refraction of Air, Table 1 (450 ppm CO2, saturation pressure
// of IAPWS), where the vapour's own dispersion and the compressibility count most.
func TestAirExtremes(t *testing.T) {
	for _, row := range []struct{ tc, humidity, kPa, nm, want float64 }{
		{20, 0, 101.325, 633, 1.000271800},
		{5, 0, 100, 633, 1.000282756},
		{50, 100, 120, 633, 1.000287924},
		{40, 100, 110, 300, 1.000289000},
	} {
		vapour := row.humidity / 100 * saturationPressureIF97(row.tc)
		fraction := vapourFraction(row.tc, 1000*row.kPa, vapour)
		if got, _ := moistAir(row.tc, 1000*row.kPa, fraction, 450, row.nm); math.Abs(got-row.want) > 1e-9 {
			t.Errorf("StoneZimmerman/%+v: got %.10f", row, got)
		}
	}
}

// TestStandardAir is an identity: in the standard state the index is the
// dispersion formula itself (Ciddor 1996).
func TestStandardAir(t *testing.T) {
	for _, nm := range []float64{400, 532, 700} {
		s := 1e6 / (nm * nm)
		want := 1 + 1e-8*(5792105/(238.0185-s)+167917/(57.362-s))
		got, _, err := StandardAir().Index(nm)
		if err != nil || math.Abs(got-want) > 1e-15 {
			t.Errorf("%g nm: %.16f, %v, want %.16f", nm, got, err, want)
		}
	}
}
