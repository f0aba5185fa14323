package geo

import (
	"math"
	"testing"
)

// footOf finds the nearest point of a line by looking at every segment: its
// chainage, distance and segment.
func footOf(lineX, lineY []float64, x, y float64) (chainage, distance float64, segment int) {
	start, distance := 0.0, math.Inf(1)
	for i := 1; i < len(lineX); i++ {
		dx, dy := lineX[i]-lineX[i-1], lineY[i]-lineY[i-1]
		long := math.Hypot(dx, dy)
		along := min(max(((x-lineX[i-1])*dx+(y-lineY[i-1])*dy)/long, 0), long)
		d := math.Hypot(x-lineX[i-1]-dx*along/long, y-lineY[i-1]-dy*along/long)
		if d < distance-1e-9 { // ties: the lower chainage
			chainage, distance, segment = start+along, d, i-1
		}
		start += long
	}
	return chainage, distance, segment
}

// TestNearestAgainstAll compares the search, with any hint, with a look at all
// segments of lines that cross themselves.
func TestNearestAgainstAll(t *testing.T) {
	rng := newRand(t, 94)
	for _, n := range []int{2, 3, 4, 5, 6, 8, 9, 10, 33, 1023} {
		var lineX, lineY []float64
		px, py := 512000.0, 7012000.0
		for range n {
			px, py = px+20*rng.NormFloat64(), py+20*rng.NormFloat64()
			lineX, lineY = append(lineX, px), append(lineY, py)
		}
		line, err := newPolyline(lineX, lineY)
		if err != nil {
			t.Fatal(err)
		}
		for range 300 {
			i := rng.IntN(n)
			x, y := lineX[i]+60*rng.NormFloat64(), lineY[i]+60*rng.NormFloat64()
			f := line.nearest(x, y, 70, rng.IntN(n-1))
			chainage, distance, _ := footOf(lineX, lineY, x, y)
			if (f.segment >= 0) != (distance <= 70) {
				t.Fatalf("n %d: segment %d at distance %v", n, f.segment, distance)
			}
			if f.segment >= 0 && (math.Abs(math.Sqrt(f.distance2)-distance) > 1e-8 || math.Abs(line.chainageOf(f)-chainage) > 1e-6) {
				t.Fatalf("n %d: chainage %v at %v, want %v at %v", n, line.chainageOf(f), math.Sqrt(f.distance2), chainage, distance)
			}
		}
	}
}
