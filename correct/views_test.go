package correct_test

import (
	"math"
	"testing"

	"bentray/correct"
)

func TestMeanSlopes(t *testing.T) {
	v := correct.Views{Start: []int32{0, 3, 3, 5}, Camera: []int32{0, 1, 2, 0, 1}}
	s := correct.Planes{
		Level:  make([]float64, 5),
		SlopeX: []float64{0.1, 0.1, 0.1, -0.5, 0.25}, SlopeY: []float64{1, 2, 6, 0.5, 0.5},
	}
	x, y := make([]float64, 3), make([]float64, 3)
	v.MeanSlopes(x, y, s)
	// Three times 0.1 over 3 is not 0.1 in floating point; the mean of equal slopes is.
	if x[0] != 0.1 || y[0] != 3 || x[2] != -0.125 || y[2] != 0.5 {
		t.Errorf("mean slopes are %g and %g", x, y)
	}
	if !math.IsNaN(x[1]) || !math.IsNaN(y[1]) {
		t.Errorf("mean slopes without rays are %g and %g, want NaN", x[1], y[1])
	}
}

func TestViewsUnequalLengthsPanic(t *testing.T) {
	const lengths = "correct: columns of unequal length"
	x := make([]float64, 24)
	solve := func(p *photos) { p.solver.Solve(&p.dst, p.out, nil, p.raw, &p.bundle) }
	for name, row := range map[string]struct {
		call func(p *photos, b *correct.Bundle)
		want string
	}{
		"result":        {func(p *photos, b *correct.Bundle) { p.dst.Depth = nil; solve(p) }, lengths},
		"raw":           {func(p *photos, b *correct.Bundle) { p.raw.X = nil; solve(p) }, lengths},
		"starts":        {func(p *photos, b *correct.Bundle) { b.Start = b.Start[1:]; solve(p) }, lengths},
		"rays":          {func(p *photos, b *correct.Bundle) { b.Camera = b.Camera[1:]; solve(p) }, lengths},
		"planes":        {func(p *photos, b *correct.Bundle) { b.Planes.SlopeY = nil; solve(p) }, lengths},
		"cameras":       {func(p *photos, b *correct.Bundle) { b.Cameras.Y = nil; solve(p) }, lengths},
		"water":         {func(p *photos, b *correct.Bundle) { b.Light.Water = nil; solve(p) }, lengths},
		"no rotations":  {func(p *photos, b *correct.Bundle) { b.Cameras.Rotation = nil; solve(p) }, "correct: the image residual and a port need the rotation of each camera"},
		"marks":         {func(p *photos, b *correct.Bundle) { correct.MarkNoCameras(p.out, correct.XYZ{}, b) }, lengths},
		"MarkWet":       {func(p *photos, b *correct.Bundle) { correct.MarkWet(p.out, &p.dst, p.raw, b.Planes) }, lengths},
		"MeanSlopes":    {func(p *photos, b *correct.Bundle) { b.MeanSlopes(x[:3], x[:2], b.Planes) }, lengths},
		"entries":       {func(p *photos, b *correct.Bundle) { p.solver.EntryPlan(x, x[1:], p.out, nil, p.raw, p.dst.XYZ, b) }, lengths},
		"entries' ends": {func(p *photos, b *correct.Bundle) { p.solver.EntryPlan(x, x, p.out, nil, p.raw, correct.XYZ{}, b) }, lengths},
		"carry":         {func(p *photos, b *correct.Bundle) { b.CarryToRaw(b.Planes, nil, p.raw, x, nil) }, lengths},
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if got := recover(); got != row.want {
					t.Errorf("panic is %v, want %q", got, row.want)
				}
			}()
			p := simulatePhotos(3, networks["ring"], correct.Image, 30, 0, false, noOffset)
			row.call(p, &p.bundle)
		})
	}
}
