package quality

import (
	"math"
	"testing"
)

// By hand: of two lines in one cell the one has 9 points at 10 degrees, the other 3 at 20.
// The incidence of a difference is the mean of both lines, 15, however many points each has.
func TestOverlapIncidenceIsTheMeanOfLines(t *testing.T) {
	o := newOverlap(4)
	for i := range 9 {
		o.add([]byte("1"), 0.5+float64(i%3), 0.5+float64(i/3), -3.25, 3.5, 10)
	}
	for i := range 3 {
		o.add([]byte("2"), 0.5+float64(i), 0.5+float64(i*i)/2, -3, 3.5, 20)
	}
	list := o.differences()
	if len(list) != 1 || math.Abs(list[0].incidence-15) > 1e-12 || math.Abs(list[0].height+0.25) > 1e-12 {
		t.Fatalf("differences are %+v, want one of -0.25 at 15 degrees", list)
	}
	r := new(OverlapReport)
	o.report(r)
	if len(r.ByIncidence) != 1 || !(float64(r.ByIncidence[0].From) <= 15 && float64(r.ByIncidence[0].To) > 15) {
		t.Errorf("bands of incidence are %+v, want one about 15", r.ByIncidence)
	}
}
