package correct_test

import (
	"fmt"
	"math"
	"testing"

	"bentray/correct"
)

var residuals = map[string]correct.Residual{"image": correct.Image, "angle": correct.Angle, "equal": correct.Equal}

// checkTruth fails the test unless all points are corrected to their truth.
func (p *photos) checkTruth(t *testing.T, tol float64) {
	t.Helper()
	for i, o := range p.out {
		if o != correct.Corrected {
			t.Fatalf("seed %d: point %d is %s", seed, i, o)
		}
		near(t, "x", p.dst.X[i], p.truth.X[i], tol)
		near(t, "y", p.dst.Y[i], p.truth.Y[i], tol)
		near(t, "z", p.dst.Z[i], p.truth.Z[i], tol)
		if t.Failed() {
			t.Fatalf("seed %d: point %d", seed, i)
		}
	}
}

func TestInvertReturnsTruth(t *testing.T) {
	for kind, cameras := range networks {
		for rule, residual := range residuals {
			for _, row := range []struct {
				name      string
				slope     float64
				ownPlanes bool
				offset    vec
			}{
				{"level", 0, false, noOffset},
				{"tilted", 0.1, false, noOffset},
				{"each ray its plane", 0.05, true, noOffset},
				{"7 million metres north", 0.05, false, vec{5e5, 7e6, 0}},
			} {
				t.Run(fmt.Sprint(kind, "/", rule, "/", row.name), func(t *testing.T) {
					p := simulatePhotos(60, cameras, residual, 45, row.slope, row.ownPlanes, row.offset)
					p.solve()
					p.checkTruth(t, 1e-6)
				})
			}
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
