package correct_test

import (
	"math"
	"testing"

	"bentray/correct"
)

// A point's result does not depend on its neighbours, their number or their order.
func TestMultiviewSizes(t *testing.T) {
	for _, solve := range []correct.Solve{correct.Invert, correct.Intersect, correct.Average} {
		whole := simulatePhotos(33, networks["ring"], correct.Angle, 40, 0.05, true, noOffset)
		whole.bundle.Solve = solve
		whole.solve()
		for _, n := range []int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 31, 32, 33} {
			part := newPhotos(1.000277)
			part.bundle.Residual, part.bundle.Solve = correct.Angle, solve
			part.dst = correct.NewResult(0)
			for i := range n {
				k := 32 - i
				part.add(whole.scenes[k], vec{whole.raw.X[k], whole.raw.Y[k], whole.raw.Z[k]}, noOffset)
			}
			part.solve()
			for i := range n {
				part.same(t, i, whole, 32-i)
			}
		}
	}
}

// So with a warm start.
func TestMultiviewWarmNeighbours(t *testing.T) {
	whole := simulatePhotos(200, networks["ring"], correct.Angle, 40, 0.05, true, noOffset)
	whole.solve()
	warm := simulatePhotos(200, networks["ring"], correct.Angle, 40, 0.05, true, noOffset)
	warm.bundle.Warm, whole.bundle.Warm = true, true
	for i := range warm.out {
		warm.dst.X[i], warm.dst.Y[i], warm.dst.Z[i] = whole.dst.X[i], whole.dst.Y[i], whole.dst.Z[i]-0.3
		whole.dst.Z[i] -= 0.3
	}
	whole.solve()
	for i := len(warm.out) - 1; i >= 0; i-- {
		warm.solver.Solve(&warm.dst, warm.out, []int32{int32(i)}, warm.raw, &warm.bundle)
		warm.same(t, i, whole, i)
	}
}

// same fails the test unless point i has the bits of point k of other.
func (p *photos) same(t *testing.T, i int, other *photos, k int) {
	t.Helper()
	a, b := &p.dst, &other.dst
	for c, pair := range [][2][]float64{
		{a.X, b.X},
		{a.Y, b.Y},
		{a.Z, b.Z},
		{a.Depth, b.Depth},
		{a.WaterLevel, b.WaterLevel},
		{a.EntryLevel, b.EntryLevel},
		{a.IncidenceRad, b.IncidenceRad},
		{a.RefractionRad, b.RefractionRad},
	} {
		if math.Float64bits(pair[0][i]) != math.Float64bits(pair[1][k]) {
			t.Fatalf("seed %d: column %d: point %d has %.17g, want %.17g", seed, c, i, pair[0][i], pair[1][k])
		}
	}
}

// Listed points alone are solved; the others stay as they are, whatever they are.
func TestMultiviewListedPoints(t *testing.T) {
	whole := simulatePhotos(9, networks["side"], correct.Equal, 40, 0.05, true, noOffset)
	whole.solve()
	part := simulatePhotos(9, networks["side"], correct.Equal, 40, 0.05, true, noOffset)
	for i := range part.dst.X {
		part.dst.X[i], part.dst.Depth[i] = 7, 7
	}
	part.out[3] = correct.Grazing
	part.solver.Solve(&part.dst, part.out, []int32{5, 3, 0}, part.raw, &part.bundle)
	part.same(t, 5, whole, 5)
	part.same(t, 0, whole, 0)
	if part.out[3] != correct.Grazing || part.dst.X[3] != part.raw.X[3] || !math.IsNaN(part.dst.Depth[3]) {
		t.Errorf("point 3 is %s at %g, want grazing at its raw position", part.out[3], part.dst.X[3])
	}
	for _, i := range []int{1, 2, 4, 6, 7, 8} {
		if part.dst.X[i] != 7 || part.dst.Depth[i] != 7 {
			t.Errorf("point %d was not listed, but written", i)
		}
	}
	part.solver.Solve(&part.dst, part.out, []int32{}, part.raw, &part.bundle)
	if part.dst.X[1] != 7 {
		t.Error("an empty list took points")
	}
}

// On a level surface there is one level, to the bit, whatever the number of rays.
func TestMultiviewOneLevel(t *testing.T) {
	p := simulatePhotos(30, networks["strip"], correct.Equal, 40, 0, false, noOffset)
	p.solve()
	for i := range p.out {
		if p.dst.WaterLevel[i] != p.planes.Level[i] || p.dst.EntryLevel[i] != p.planes.Level[i] {
			t.Errorf("levels are %g and %g, want %g", p.dst.WaterLevel[i], p.dst.EntryLevel[i], p.planes.Level[i])
		}
	}
}

func TestMultiviewOverRaw(t *testing.T) {
	apart := simulatePhotos(33, networks["ring"], correct.Angle, 40, 0.05, false, noOffset)
	over := simulatePhotos(33, networks["ring"], correct.Angle, 40, 0.05, false, noOffset)
	over.dst.XYZ = over.raw
	apart.solve()
	over.solve()
	for i := range apart.out {
		over.same(t, i, apart, i)
	}
}

func TestMultiviewNoAllocation(t *testing.T) {
	p := simulatePhotos(200, networks["ring"], correct.Image, 30, 0.05, true, noOffset)
	x, y := make([]float64, len(p.bundle.Camera)), make([]float64, len(p.bundle.Camera))
	for name, call := range map[string]func(){
		"Solve":         p.solve,
		"EntryPlan":     func() { p.solver.EntryPlan(x, y, p.out, nil, p.raw, p.dst.XYZ, &p.bundle) },
		"CarryToRaw":    func() { p.bundle.CarryToRaw(p.bundle.Planes, nil, p.raw, x, y) },
		"MarkNoCameras": func() { correct.MarkNoCameras(p.out, p.raw, &p.bundle) },
		"MarkWet":       func() { correct.MarkWet(p.out, &p.dst, p.raw, p.planes) },
		"MeanSlopes":    func() { p.bundle.MeanSlopes(x[:200], y[:200], p.bundle.Planes) },
	} {
		clear(p.out)
		call()
		if got := testing.AllocsPerRun(5, call); got != 0 {
			t.Errorf("%s: %g allocations a call, want 0", name, got)
		}
	}
}

func BenchmarkMultiview(b *testing.B) {
	for rule, residual := range residuals {
		for name, solve := range map[string]correct.Solve{"invert": correct.Invert, "intersect": correct.Intersect, "average": correct.Average} {
			if solve != correct.Invert && residual != correct.Equal {
				continue
			}
			b.Run(name+"/"+rule, func(b *testing.B) {
				p := simulatePhotos(1000, networks["ring"], residual, 30, 0, false, noOffset)
				p.bundle.Solve = solve
				b.ReportAllocs()
				for b.Loop() {
					clear(p.out)
					p.solver.Solve(&p.dst, p.out, nil, p.raw, &p.bundle)
				}
				b.ReportMetric(float64(b.N)*float64(len(p.out))/b.Elapsed().Seconds(), "points/s")
				if math.IsNaN(p.dst.Depth[0]) {
					b.Fatal("not solved")
				}
			})
		}
	}
}
