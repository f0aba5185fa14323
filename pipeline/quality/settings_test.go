package quality

import (
	"maps"
	"math"
	"testing"
)

// What receipts of one run say of their points is put together.
func TestSettingTakesRanges(t *testing.T) {
	s := Setting{Ranges: map[string][2]float64{}}
	s.take(map[string][2]float64{"depth": {1, 4}})
	s.take(map[string][2]float64{"depth": {0.5, 3}, "n_water": {1.33, 1.34}})
	s.take(nil)
	if want := map[string][2]float64{"depth": {0.5, 4}, "n_water": {1.33, 1.34}}; s.Files != 3 || !maps.Equal(s.Ranges, want) {
		t.Errorf("%d files with ranges %v, want 3 with %v", s.Files, s.Ranges, want)
	}
}

// Limits in feet are those in metres (IHO S-44, Edition 6.0.0, 2020, Table 1: 0.25 m
// and 0.0075 of the depth for the special order).
func TestLimitInTheReportsUnit(t *testing.T) {
	for _, c := range []struct {
		unit         string
		metres, want float64
	}{{"m", 10, math.Sqrt(0.25*0.25 + 0.075*0.075)}, {"ft", 10, math.Sqrt(0.25*0.25+0.075*0.075) / 0.3048}} {
		depth := c.metres
		if c.unit == "ft" {
			depth /= 0.3048
		}
		if got := (&Report{VerticalUnit: c.unit}).Limit("special", depth); !(math.Abs(got-c.want) < 1e-12) {
			t.Errorf("%s: limit is %g, want %g", c.unit, got, c.want)
		}
	}
	if got := (&Report{VerticalUnit: "m"}).Limit("none", 1); !math.IsNaN(got) {
		t.Errorf("an order that is not has the limit %g", got)
	}
}
