package geo

import (
	"math"
	"testing"
)

// TestStationTimesByHand holds a station to its records and to maxGap beyond them.
func TestStationTimesByHand(t *testing.T) {
	s := mustStations(t, StationRecords{
		X: []float64{0, 0, 0}, Y: []float64{0, 0, 0}, Name: []string{"a", "a", "a"},
		Temperature: []float64{14, 10, 12}, Salinity: []float64{31, 30, 34}, UTC: []float64{1000, 100, 200},
	}, 50)
	none := math.NaN()
	for _, tc := range []struct {
		name                       string
		utc, temperature, salinity float64
	}{
		{"held before", 50, 10, 30},
		{"too early", math.Nextafter(50, 0), none, none},
		{"first", 100, 10, 30},
		{"between", 125, 10.5, 31},
		{"second", 200, 12, 34},
		{"between, farther apart than the gap", 600, 13, 32.5},
		{"held after", 1050, 14, 31},
		{"too late", math.Nextafter(1050, 2000), none, none},
		{"NaN", none, none, none},
	} {
		gotT, gotS := fillOne(s, 3, 4, tc.utc, 0)
		if !same(gotT, tc.temperature) || !same(gotS, tc.salinity) {
			t.Errorf("%s: %v %v, want %v %v", tc.name, gotT, gotS, tc.temperature, tc.salinity)
		}
	}
}

// TestCastMeanClosedForm has a cast of T = 20 - d between 1 and 5 m, in steps of no
// consequence: the integral of a straight line is known.
func TestCastMeanClosedForm(t *testing.T) {
	depths := []float64{5, 1, 2.25, 4, 3.5}
	r := StationRecords{Depth: depths, X: make([]float64, 5), Y: make([]float64, 5), Salinity: []float64{35, 35, 35, 35, 35}}
	for _, d := range depths {
		r.Temperature = append(r.Temperature, 20-d)
	}
	s := mustStations(t, r, 3600)
	for depth := -1.0; depth < 12; depth += 1.0 / 64 {
		want := 19.0 // held up to the surface
		if depth > 1 {
			to := min(depth, 5)
			want = (19 + 20*(to-1) - (to*to-1)/2 + 15*(depth-to)) / depth
		}
		gotT, gotS := fillOne(s, 10, 10, 0, depth)
		if math.Abs(gotT-want) > 1e-13 || math.Abs(gotS-35) > 1e-13 {
			t.Fatalf("to %v m: %v %v, want %v 35", depth, gotT, gotS, want)
		}
	}
	if gotT, gotS := fillOne(s, 10, 10, 0, math.NaN()); !math.IsNaN(gotT) || !math.IsNaN(gotS) {
		t.Errorf("to NaN: %v %v, want NaN", gotT, gotS)
	}
}

// TestCastMeanIsContinuous crosses every level of a cast by one rounding.
func TestCastMeanIsContinuous(t *testing.T) {
	rng := newRand(t, 62)
	r := randomStations(rng, 1, false, true, func(int) (float64, float64) { return 0, 0 })
	s := mustStations(t, r, 1)
	for _, d := range r.Depth {
		for _, side := range []float64{math.Inf(-1), math.Inf(1)} {
			at, _ := fillOne(s, 1, 1, 0, d)
			beside, _ := fillOne(s, 1, 1, 0, math.Nextafter(d, side))
			if math.Abs(at-beside) > 1e-13 {
				t.Errorf("at %v m: %v, beside it %v", d, at, beside)
			}
		}
	}
}
