package geo

import (
	"math"
	"runtime"
	"testing"
)

// TestSurfacePointsBounds: finite points make the rectangle, also when they come in
// parts; those left out are counted.
func TestSurfacePointsBounds(t *testing.T) {
	var all, part, none SurfacePoints
	nan := math.NaN()
	part.Add([]float64{5, nan, -3}, []float64{7, 1, 8}, []float64{0, 0, 0}, nil)
	all.Join(&none)
	all.Join(&part)
	all.Add([]float64{-4, 100}, []float64{9, 100}, []float64{0, math.Inf(1)}, []float64{nan, nan})
	if low, high := all.Bounds(); low != [2]float64{-4, 7} || high != [2]float64{5, 9} {
		t.Errorf("bounds %v %v, want -4 7 and 5 9", low, high)
	}
	if all.Given() != 5 || all.held != 3 || part.Given() != 0 {
		t.Errorf("%d given, %d held, %d left in the part, want 5, 3 and 0", all.Given(), all.held, part.Given())
	}
	mustPanic(t, func() { all.Add([]float64{1}, []float64{1, 2}, []float64{1}, nil) })
	mustPanic(t, func() { all.Add([]float64{1}, []float64{1}, []float64{1}, []float64{}) })
}

// TestSurfacePointsMemory: a point takes 32 bytes, and while a grid of 16 points a
// cell is made, 10 more beside the grid itself.
func TestSurfacePointsMemory(t *testing.T) {
	rng := newRand(t, 118)
	x, y, z := scattered(rng, 200_000, 447, func(_, _ float64) float64 { return 1 + 0.02*rng.NormFloat64() })
	perPoint := func(do func()) float64 {
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		do()
		runtime.ReadMemStats(&after)
		return float64(after.TotalAlloc-before.TotalAlloc) / float64(len(x))
	}
	var points SurfacePoints
	if got := perPoint(func() { points.Add(x, y, z, nil) }); got < 32 || got > 35 { // the first block grows
		t.Errorf("a point takes %.1f bytes, want 32", got)
	}
	b := gridBuilder{options: GridOptions{Cell: 4}.withDefaults(), points: &points, grid: &Grid{}}
	if got := perPoint(func() {
		if err := b.sortCells(); err != nil {
			t.Fatal(err)
		}
	}); got > 20 { // slices that grow count each time
		t.Errorf("sorting takes %.1f bytes a point", got)
	}
	held := 4*float64(cap(b.order)) + 32*float64(cap(b.cells)) + 4*float64(cap(b.slots.cells))
	if got := held / float64(len(x)); got > 10 {
		t.Errorf("the order of points and the cells hold %.1f bytes a point, want at most 10", got)
	}
}
