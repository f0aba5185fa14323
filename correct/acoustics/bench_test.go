package acoustics_test

import (
	"fmt"
	"math"
	"testing"

	"bentray/correct/acoustics"
)

// summer returns a profile of n samples down to 50 m, with a thermocline and ripples.
func summer(tb testing.TB, n int, kind acoustics.Interpolation) *acoustics.Profile {
	tb.Helper()
	depths, speeds := make([]float64, n), make([]float64, n)
	for i := range depths {
		z := 50 * float64(i) / float64(n-1)
		depths[i] = z
		speeds[i] = 1500 - 12*math.Tanh((z-14)/4) + 0.016*z + 0.02*math.Sin(7*z)
	}
	return profile(tb, depths, speeds, kind)
}

// Rays from 0.5 m to beyond the profile's end: all layers are crossed.
func BenchmarkTrace(b *testing.B) {
	for _, n := range []int{40, 500} {
		for _, kind := range []acoustics.Interpolation{acoustics.Linear, acoustics.Steps} {
			b.Run(fmt.Sprintf("%s/%d", kind, n), func(b *testing.B) {
				p := summer(b, n, kind)
				b.ReportAllocs()
				sum := 0.0
				for b.Loop() {
					a := p.Trace(0.5, 0.6, 0.8, 0.043)
					sum += a.DepthM
				}
				if !(sum/float64(b.N) > 50) {
					b.Fatalf("mean depth is %g m, want more than 50", sum/float64(b.N))
				}
			})
		}
	}
}

func BenchmarkBetween(b *testing.B) {
	for _, n := range []int{40, 500} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			p := summer(b, n, acoustics.Linear)
			b.ReportAllocs()
			for b.Loop() {
				if _, ok := p.Between(0.5, 51, 40); !ok {
					b.Fatal("no path")
				}
			}
		})
	}
}

func TestNoAllocation(t *testing.T) {
	p := summer(t, 40, acoustics.Linear)
	sum := 0.0
	for name, call := range map[string]func(){
		"Trace":            func() { sum += p.Trace(0.5, 0.6, 0.8, 0.043).DepthM },
		"Trace, turning":   func() { sum += p.Trace(22, 1, 0, 0.1).DepthM },
		"Between":          func() { path, _ := p.Between(0.5, 51, 40); sum += path.TimeS },
		"Between, turning": func() { path, _ := p.Between(22, 22, 30); sum += path.TimeS },
	} {
		if got := testing.AllocsPerRun(100, call); got != 0 {
			t.Errorf("%s: %g allocations, want 0", name, got)
		}
	}
	if !(sum > 0) {
		t.Errorf("sum is %g", sum)
	}
}
