package demo

import (
	"math"
	"strconv"
	"testing"
	"time"

	"bentray/geo"
)

func TestBed(t *testing.T) {
	near(t, "elevation of the mouth", bedZ(cornerX+mouthX, cornerY+mouthY), levelM-deepestM, 0.2)
	near(t, "elevation of the waterline in the east", bedZ(cornerX+mouthX+halfWidthM, cornerY), levelM, 1e-9)
	near(t, "elevation of the waterline in the north", bedZ(cornerX+mouthX, cornerY+reachM), levelM, 1e-9)
	if z := bedZ(cornerX+rockX, cornerY+rockY); z < levelM+3 {
		t.Errorf("the rock's top is at %g m, want it some metres above the water", z)
	}
	deep, crest := bedZ(cornerX+mouthX, cornerY+60), bedZ(cornerX+mouthX, cornerY+barCrest(mouthX))
	if !(crest > deep+4 && crest < levelM-2) {
		t.Errorf("the sand bar's crest is at %g m and the bed before it at %g m, want it metres above that and under water", crest, deep)
	}
}

func TestRingHolds(t *testing.T) {
	square := ring{{0, 0}, {4, 0}, {4, 4}, {0, 4}, {0, 0}}
	notch := ring{{0, 0}, {4, 0}, {4, 4}, {2, 1}, {0, 4}, {0, 0}}
	for _, c := range []struct {
		name string
		ring ring
		x, y float64
		want bool
	}{
		{"middle", square, 2, 2, true},
		{"east", square, 5, 2, false},
		{"west, across two sides", square, -1, 2, false},
		{"north", square, 2, 5, false},
		{"west, level with corners", square, -1, 4, false},
		{"in the notch", notch, 2, 2, false},
		{"beside the notch", notch, 0.5, 2, true},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := c.ring.holds(c.x, c.y); got != c.want {
				t.Errorf("holds(%g, %g) = %v, want %v", c.x, c.y, got, c.want)
			}
		})
	}
}

// The rings turn as RFC 7946, section 3.1.6, wants: outlines against the clock,
// holes with it; by the sign of the area (shoelace formula).
func TestPolygonTurns(t *testing.T) {
	area := func(r ring) (sum float64) {
		for i := 1; i < len(r); i++ {
			a, b := r[i-1], r[i]
			sum += (a[0]-cornerX)*(b[1]-cornerY) - (b[0]-cornerX)*(a[1]-cornerY)
		}
		return sum / 2
	}
	outline, hole := waterPolygon()
	// Half an ellipse, and a circle: pi/2 a b and pi r^2, less what corners cut off.
	near(t, "area of the outline", area(outline), math.Pi/2*1.06*halfWidthM*1.06*reachM, 600)
	near(t, "area of the hole", area(hole), -math.Pi*24*24, 60)
	polygons, err := geo.ParsePolygons(polygonText())
	if err != nil || len(polygons) != 1 || len(polygons[0]) != 2 {
		t.Errorf("polygons are %v with error %v, want one with one hole", polygons, err)
	}
}

func TestTakeOff(t *testing.T) {
	scale, err := geo.ParseTimeScale("gps-adjusted", 0)
	if err != nil {
		t.Fatal(err)
	}
	want := time.Date(2026, 5, 19, 9, 30, 0, 0, time.UTC)
	if got := scale.Time(takeOffS); !got.Equal(want) {
		t.Errorf("take-off is at %v, want %v", got, want)
	}
}

// The trajectory as a job reads it gives the origins that the pulses had, and
// none where the simulation says so.
func TestTrajectoryGivesOrigins(t *testing.T) {
	var times, x, y, z []float64
	lines := flightLines()
	for _, l := range lines {
		for i, p := range l.position {
			if l.isRecorded(i) {
				times = append(times, float64((takeOffS+l.startS())*recordsPerS+int64(i))/recordsPerS)
				x, y, z = append(x, p.x), append(y, p.y), append(z, p.z)
			}
		}
	}
	trajectory, err := geo.NewTrajectory(times, x, y, z, maxGapS)
	if err != nil {
		t.Fatal(err)
	}
	at, px, py, pz := make([]float64, 1), make([]float64, 1), make([]float64, 1), make([]float64, 1)
	missing := 0
	for _, l := range lines {
		for pulse := 0; pulse < lineS*pulsesPerS; pulse += 50 {
			at[0] = float64(takeOffS+l.startS()) + float64(pulse)/pulsesPerS
			trajectory.At(px, py, pz, at)
			if !l.hasOrigin(pulse) {
				missing++
				if !math.IsNaN(px[0]) {
					t.Errorf("line %d, pulse %d has an origin, want none", l.number, pulse)
				}
				continue
			}
			// Times of 4.6e8 s have steps of 6e-8 s, 4 micrometres at 60 m/s.
			near(t, "distance of the origins", vec{px[0], py[0], pz[0]}.minus(l.origin(pulse)).length(), 0, 1e-5)
		}
	}
	if missing == 0 {
		t.Error("no pulse is in the gap")
	}
}

func number(t *testing.T, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}
