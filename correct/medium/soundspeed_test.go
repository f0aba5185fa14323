package medium

import (
	"errors"
	"math"
	"testing"
)

var soundFormulas = []SoundFormula{ChenMillero, DelGrosso, Mackenzie}

// At 0 degrees C, salinity 0 and the surface Chen & Millero is its first coefficient
// (1977), and the scale of temperature does not matter.
func TestSoundSpeedFreezing(t *testing.T) {
	if got, err := ChenMillero.Speed(Water{}, 0); got != 1402.388 || err != nil {
		t.Errorf("ChenMillero1977: got %.6f m/s, %v, want 1402.388", got, err)
	}
}

// Del Grosso's own coefficients of 1974, in IPTS-68, before the refit: an independent
// set of numbers. Either circulated misprint (S^2, P^3) would show by 0.06 m/s or more.
func TestDelGrosso1974(t *testing.T) {
	original := func(w Water) float64 {
		t, s, p := 1.00024*w.TemperatureC, w.Salinity, w.PressureDbar/9.80665
		return 1402.392 + 0.501109398873e1*t - 0.550946843172e-1*t*t + 0.221535969240e-3*t*t*t +
			0.132952290781e1*s + 0.128955756844e-3*s*s +
			0.156059257041*p + 0.244998688441e-4*p*p - 0.883392332513e-8*p*p*p -
			0.127562783426e-1*t*s + 0.635191613389e-2*t*p + 0.265484716608e-7*t*t*p*p -
			0.159349479045e-5*t*p*p + 0.522116437235e-9*t*p*p*p - 0.438031096213e-6*t*t*t*p -
			0.161674495909e-8*s*s*p*p + 0.968403156410e-4*t*t*s + 0.485639620015e-5*t*s*s*p -
			0.340597039004e-3*t*s*p
	}
	for temperature := 0.0; temperature <= 30; temperature += 2 {
		for salinity := 30.0; salinity <= 40; salinity += 2 {
			for pressure := 0.0; pressure <= 9800; pressure += 350 {
				w := Water{temperature, salinity, pressure}
				if got, want := delGrosso(w), original(w); math.Abs(got-want) > 9.5e-4 {
					t.Fatalf("DelGrosso1974/%+v: got %.5f m/s, want %.5f", w, got, want)
				}
			}
		}
	}
}

// Three formulas from three sets of measurements, in shallow water.
func TestSoundFormulasAgree(t *testing.T) {
	var computed, published float64
	for temperature := -2.0; temperature <= 35; temperature++ {
		for salinity := 20.0; salinity <= 45; salinity++ {
			for pressure := 0.0; pressure <= 200; pressure += 20 {
				w := Water{temperature, salinity, pressure}
				first, err := ChenMillero.Speed(w, 0.8)
				for _, f := range soundFormulas[1:] {
					got, also := f.Speed(w, 0.8)
					if err != nil || also != nil {
						t.Fatalf("%s %+v: %v, %v", f, w, err, also)
					}
					computed = max(computed, math.Abs(got-first))
					if f.Published(w, 0.8) && ChenMillero.Published(w, 0.8) {
						published = max(published, math.Abs(got-first))
					}
				}
			}
		}
	}
	if !(computed < 0.79 && published < 0.43) {
		t.Errorf("formulas differ by up to %.3f m/s, published %.3f, want 0.79 and 0.43", computed, published)
	}
}

// Saunders 1981 against the polynomial of UNESCO Technical Papers in Marine Science 44
// (Fofonoff & Millard 1983), itself held to its check value, 9712.653 m at 10000 dbar
// and 30 degrees.
func TestDepthAgainstUNESCO44(t *testing.T) {
	unesco := func(p, latitude float64) float64 {
		x := math.Sin(latitude) * math.Sin(latitude)
		g := 9.780318*(1+(5.2788e-3+2.36e-5*x)*x) + 1.092e-6*p
		return (((-1.82e-15*p+2.279e-10)*p-2.2512e-5)*p + 9.72659) * p / g
	}
	if got := unesco(10000, math.Pi/6); math.Abs(got-9712.653) > 0.0005 {
		t.Fatalf("UNESCO44/check value: got %.4f m, want 9712.653", got)
	}
	for _, row := range []struct{ dbar, bound float64 }{{10, 0.005}, {100, 0.042}, {200, 0.08}, {1000, 0.27}, {10000, 7}} {
		for degrees := 0.0; degrees <= 90; degrees += 15 {
			latitude := degrees * math.Pi / 180
			if got, want := DepthM(row.dbar, latitude), unesco(row.dbar, latitude); math.Abs(got-want) > row.bound {
				t.Errorf("%g dbar, %g degrees: got %.4f m, want %.4f", row.dbar, degrees, got, want)
			}
		}
	}
}

func TestPressureRoundTrip(t *testing.T) {
	for _, depth := range []float64{0, 1e-6, 0.3, 20, 8000} {
		for _, latitude := range []float64{-1.2, 0, 0.4, math.Pi / 2} {
			if got := DepthM(PressureDbar(depth, latitude), latitude); math.Abs(got-depth) > 1e-15*depth {
				t.Errorf("%g m at %g rad became %.17g m", depth, latitude, got)
			}
		}
	}
	for _, got := range []float64{PressureDbar(math.NaN(), 0), PressureDbar(1, math.NaN()), DepthM(math.NaN(), 0)} {
		if !math.IsNaN(got) {
			t.Errorf("NaN became %g", got)
		}
	}
}

func TestSoundRange(t *testing.T) {
	nan := math.NaN()
	for _, row := range []struct {
		formula   SoundFormula
		water     Water
		message   string // empty where there is a value
		published bool
	}{
		{ChenMillero, Water{0, 0, 0}, "", true},
		{ChenMillero, Water{40, 40, 10000}, "", true},
		{ChenMillero, Water{-1, 35, 0}, "", false},
		{ChenMillero, Water{10, 41, 0}, "", false},
		{ChenMillero, Water{10, 35, 10001}, "water pressure is 10001 dbar, want 0 to 10000 for chen-millero", false},
		{ChenMillero, Water{10, -1, 0}, "salinity is -1, want 0 to 45 for chen-millero", false},
		{ChenMillero, Water{nan, 35, 0}, "water temperature is NaN degrees C, want -2 to 40 for chen-millero", false},
		{ChenMillero, Water{10, nan, 0}, "salinity is NaN, want 0 to 45 for chen-millero", false},
		{ChenMillero, Water{10, 35, nan}, "water pressure is NaN dbar, want 0 to 10000 for chen-millero", false},
		{DelGrosso, Water{0, 30, 0}, "", true},
		{DelGrosso, Water{30, 40, 9806}, "", true},
		{DelGrosso, Water{10, 29, 0}, "", false},
		{DelGrosso, Water{10, 0.3, 0}, "salinity is 0.3, want 20 to 45 for del-grosso", false},
		{DelGrosso, Water{10, 35, 9807}, "water pressure is 9807 dbar, want 0 to 9806.65 for del-grosso", false},
		{Mackenzie, Water{2, 25, 0}, "", true},
		{Mackenzie, Water{30, 40, 8000}, "", true},
		{Mackenzie, Water{1, 35, 0}, "", false},
		{Mackenzie, Water{10, 24, 0}, "", false},
		{Mackenzie, Water{36, 35, 0}, "water temperature is 36 degrees C, want -2 to 35 for mackenzie", false},
		{Mackenzie, Water{10, 35, -1}, "depth is -0.99408221 m, want 0 to 8000 for mackenzie", false},
	} {
		got, err := row.formula.Speed(row.water, 0)
		var fault *RangeError
		switch {
		case row.message == "" && (err != nil || !(got > 1400)):
			t.Errorf("%s %+v: got %v m/s, %v", row.formula, row.water, got, err)
		case row.message != "" && (!errors.As(err, &fault) || err.Error() != row.message || !math.IsNaN(got)):
			t.Errorf("%s %+v: got %v m/s, %v, want NaN and %s", row.formula, row.water, got, err, row.message)
		}
		if got := row.formula.Published(row.water, 0); got != row.published {
			t.Errorf("%s %+v: Published is %v", row.formula, row.water, got)
		}
	}
	if _, err := Mackenzie.Speed(Water{10, 35, 5}, nan); err == nil {
		t.Error("mackenzie without a latitude has a speed")
	}
}

func TestSoundFormulaNames(t *testing.T) {
	for _, f := range soundFormulas {
		if got, err := ParseSoundFormula(f.String()); err != nil || got != f {
			t.Errorf("ParseSoundFormula(%q) is %v, %v", f.String(), got, err)
		}
	}
	_, err := ParseSoundFormula("Medwin")
	if want := `sound speed formula is "Medwin", want one of chen-millero, del-grosso, mackenzie`; err == nil || err.Error() != want {
		t.Errorf("error is %v, want %s", err, want)
	}
	if got := SoundFormula(9).String(); got != "SoundFormula(9)" {
		t.Errorf("unknown formula is called %q", got)
	}
}
