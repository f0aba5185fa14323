package acoustics_test

import (
	"errors"
	"math"
	"slices"
	"testing"

	"bentray/correct/acoustics"
	"bentray/correct/medium"
)

func TestCastCleaning(t *testing.T) {
	for _, row := range []struct {
		name   string
		depths []float64
		want   []float64
		told   acoustics.Cleaning
	}{
		{"down", []float64{0, 1, 2, 5}, []float64{0, 1, 2, 5}, acoustics.Cleaning{Rows: 4, Kept: 4}},
		{"one row", []float64{3}, []float64{3}, acoustics.Cleaning{Rows: 1, Kept: 1}},
		{"one depth", []float64{3, 3, 3}, []float64{3}, acoustics.Cleaning{Rows: 3, Kept: 1}},
		{"repeats", []float64{0, 1, 1, 1, 2}, []float64{0, 1, 2}, acoustics.Cleaning{Rows: 5, Kept: 3}},
		{"up", []float64{5, 2, 1, 0}, []float64{0, 1, 2, 5}, acoustics.Cleaning{Rows: 4, Kept: 4, Upward: true}},
		{"down and up", []float64{0.5, 2, 4, 6, 8, 7, 5, 3, 1}, []float64{0.5, 2, 4, 6, 8}, acoustics.Cleaning{Rows: 9, Kept: 5}},
		{"up is longer", []float64{3, 6, 8, 7, 5, 3, 1}, []float64{1, 3, 5, 7, 8}, acoustics.Cleaning{Rows: 7, Kept: 5, Upward: true}},
		{"soak, heave, two dips", []float64{1, 2, 1, 0.5, 1, 3, 4, 3.5, 5, 6, 2, 0.5, 3, 5, 7, 8}, []float64{0.5, 1, 3, 4, 5, 6, 7, 8}, acoustics.Cleaning{Rows: 16, Kept: 8}},
		{"the deeper dip", []float64{0, 2, 4, 3, 2, 1, 0, 2, 4, 6, 8, 6, 4}, []float64{0, 2, 4, 6, 8}, acoustics.Cleaning{Rows: 13, Kept: 5}},
		{"shuffled", []float64{4, 0, 9, 1, 7, 2, 8, 3}, []float64{0, 1, 2, 3, 4, 7, 8, 9}, acoustics.Cleaning{Rows: 8, Kept: 8, Sorted: true}},
		{"shuffled with repeats", []float64{4, 0, 9, 1, 4, 0}, []float64{0, 1, 4, 9}, acoustics.Cleaning{Rows: 6, Kept: 4, Sorted: true}},
	} {
		t.Run(row.name, func(t *testing.T) {
			cast := acoustics.Cast{DepthM: row.depths, Speed: make([]float64, len(row.depths))}
			for i := range cast.Speed {
				cast.Speed[i] = 1500 + float64(i) // tells which row was kept
			}
			before := slices.Clone(row.depths)
			p, told, err := cast.Profile(medium.ChenMillero, 0, acoustics.Linear)
			if err != nil {
				t.Fatal(err)
			}
			var depths []float64
			for i := range p.Samples() {
				depth, speed := p.Sample(i)
				depths = append(depths, depth)
				if k := int(speed) - 1500; row.depths[k] != depth {
					t.Errorf("%g m has the speed of %g m", depth, row.depths[k])
				}
			}
			if !slices.Equal(depths, row.want) || told != row.told {
				t.Errorf("got %v, %+v, want %v, %+v", depths, told, row.want, row.told)
			}
			if !slices.Equal(before, row.depths) {
				t.Error("the cast was changed")
			}
		})
	}
}

// Depth goes in by the pressure of Saunders 1981. The rows of a cast carry the check values of the
// formulas: 1550.744 m/s at 25 degrees C of IPTS-68, salinity 35 and 1000 m (Mackenzie 1981),
// 1402.388 m/s at 0 degrees C, salinity 0 and the surface (Chen & Millero 1977).
func TestCastFormulas(t *testing.T) {
	cast := acoustics.Cast{DepthM: []float64{0, 1000}, TemperatureC: []float64{0, 25 / 1.00024}, Salinity: []float64{35, 35}}
	p, told, err := cast.Profile(medium.Mackenzie, 0.7, acoustics.Linear)
	if err != nil || told.Extended != 1 {
		t.Fatalf("%+v, %v, want 1 row outside the published range", told, err)
	}
	near(t, "Mackenzie1981/1000 m", p.Speed(1000), 1550.744, 0.0005)
	cast = acoustics.Cast{DepthM: []float64{0}, TemperatureC: []float64{0}, Salinity: []float64{0}}
	if _, _, err = cast.Profile(medium.ChenMillero, nan, acoustics.Steps); err == nil {
		t.Error("a latitude that is not a number gave a profile")
	}
	if p, _, err = cast.Profile(medium.ChenMillero, 0, acoustics.Steps); err != nil {
		t.Fatal(err)
	}
	near(t, "ChenMillero1977/fresh", p.Speed(3), 1402.388, 0)
}

func TestCastErrors(t *testing.T) {
	for _, row := range []struct {
		cast acoustics.Cast
		row  int
		want string
	}{
		{acoustics.Cast{}, -1, "sound speed profile has no rows, want at least 1"},
		{acoustics.Cast{DepthM: []float64{0, -0.5}, Speed: []float64{1500, 1500}}, 1, "row 2: depth is -0.5 m, which is above the water, want 0 to 12000"},
		{acoustics.Cast{DepthM: []float64{nan}, Speed: []float64{1500}}, 0, "row 1: depth is NaN m, want 0 to 12000"},
		{acoustics.Cast{DepthM: []float64{0, 1, inf}, Speed: []float64{1500, 1500, 1500}}, 2, "row 3: depth is +Inf m, want 0 to 12000"},
		{acoustics.Cast{DepthM: []float64{0}, Speed: []float64{-1480}}, 0, "row 1: speed of sound is -1480 m/s, want 1000 to 2000"},
		{acoustics.Cast{DepthM: []float64{0, 1}, Speed: []float64{1480, nan}}, 1, "row 2: speed of sound is NaN m/s, want 1000 to 2000"},
		{acoustics.Cast{DepthM: []float64{0}, Speed: []float64{4920}}, 0, "row 1: speed of sound is 4920 m/s, want 1000 to 2000"},
		{acoustics.Cast{DepthM: []float64{0, 1}, TemperatureC: []float64{10, nan}, Salinity: []float64{30, 30}}, 1, "row 2: water temperature is NaN degrees C, want -2 to 40 for chen-millero"},
		{acoustics.Cast{DepthM: []float64{0}, TemperatureC: []float64{10}, Salinity: []float64{60}}, 0, "row 1: salinity is 60, want 0 to 45 for chen-millero"},
	} {
		p, _, err := row.cast.Profile(medium.ChenMillero, 0, acoustics.Linear)
		if p != nil || err == nil || err.Error() != row.want {
			t.Errorf("got %v, want %s", err, row.want)
		}
		if fault := (*acoustics.RowError)(nil); row.row >= 0 && (!errors.As(err, &fault) || fault.Row != row.row) {
			t.Errorf("%v: row is not %d", err, row.row)
		}
	}
}

func TestProfileErrors(t *testing.T) {
	for _, row := range []struct {
		depths, speeds []float64
		want           string
	}{
		{nil, nil, "sound speed profile has no rows, want at least 1"},
		{[]float64{-2, 1}, []float64{1500, 1500}, "row 1: depth is -2 m, which is above the water, want 0 to 12000"},
		{[]float64{0, 2, 1}, []float64{1500, 1500, 1500}, "row 3: depth is 1 m, want more than the 2 m of the row before"},
		{[]float64{1, 1}, []float64{1500, 1500}, "row 2: depth is 1 m, want more than the 1 m of the row before"},
		{[]float64{1, 2}, []float64{1500, 0}, "row 2: speed of sound is 0 m/s, want 1000 to 2000"},
	} {
		if _, err := acoustics.NewProfile(row.depths, row.speeds, acoustics.Linear); err == nil || err.Error() != row.want {
			t.Errorf("got %v, want %s", err, row.want)
		}
	}
}

func TestProfileSpeed(t *testing.T) {
	depths, speeds := []float64{2, 4, 10}, []float64{1500, 1490, 1493}
	linear, steps := profile(t, depths, speeds, acoustics.Linear), profile(t, depths, speeds, acoustics.Steps)
	for _, row := range []struct{ depth, linear, steps float64 }{
		{0, 1500, 1500},
		{2, 1500, 1500},
		{3, 1495, 1500},
		{4, 1490, 1490},
		{8, 1492, 1490},
		{10, 1493, 1493},
		{500, 1493, 1493},
		{-0.1, nan, nan},
		{nan, nan, nan},
	} {
		for _, c := range []struct{ got, want float64 }{{linear.Speed(row.depth), row.linear}, {steps.Speed(row.depth), row.steps}} {
			if math.Abs(c.got-c.want) > 1e-12 || math.IsNaN(c.got) != math.IsNaN(c.want) {
				t.Errorf("%g m: got %g m/s, want %g", row.depth, c.got, c.want)
			}
		}
	}
	if linear.LastM() != 10 || linear.Samples() != 3 {
		t.Errorf("last sample is at %g m of %d", linear.LastM(), linear.Samples())
	}
}

func TestInterpolationNames(t *testing.T) {
	for _, kind := range []acoustics.Interpolation{acoustics.Linear, acoustics.Steps} {
		if got, err := acoustics.ParseInterpolation(kind.String()); err != nil || got != kind {
			t.Errorf("ParseInterpolation(%q) is %v, %v", kind.String(), got, err)
		}
	}
	_, err := acoustics.ParseInterpolation("spline")
	if want := `interpolation is "spline", want one of linear, steps`; err == nil || err.Error() != want {
		t.Errorf("error is %v, want %s", err, want)
	}
	if got := acoustics.Interpolation(7).String(); got != "Interpolation(7)" {
		t.Errorf("unknown interpolation is called %q", got)
	}
}

func TestUnequalLengthsPanic(t *testing.T) {
	for name, call := range map[string]func(){
		"NewProfile": func() { _, _ = acoustics.NewProfile([]float64{1}, nil, acoustics.Linear) },
		"Cast with speeds": func() {
			c := acoustics.Cast{DepthM: []float64{1}, Speed: []float64{}}
			_, _, _ = c.Profile(medium.ChenMillero, 0, acoustics.Linear)
		},
		"Cast without": func() {
			c := acoustics.Cast{DepthM: []float64{1}, TemperatureC: []float64{1}}
			_, _, _ = c.Profile(medium.ChenMillero, 0, acoustics.Linear)
		},
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if got := recover(); got != "acoustics: columns of unequal length" {
					t.Errorf("panic is %v, want one that speaks of columns of unequal length", got)
				}
			}()
			call()
		})
	}
}
