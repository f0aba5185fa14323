package correct_test

import (
	"math"
	"testing"

	"bentray/correct"
)

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
