package geo

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// levelsIn returns n levels that fall by chance, and their weights.
func levelsIn(rng *rand.Rand, n int) (chainage, level, weight []float64) {
	for i := range n {
		chainage = append(chainage, float64(i)+rng.Float64())
		level = append(level, 5-0.3*float64(i)+2*rng.NormFloat64())
		weight = append(weight, 0.1+rng.Float64())
	}
	return chainage, level, weight
}

// TestPoolDown compares with the formula of Brunk (1955): the value of point i is
// the least, over the starts up to i, of the greatest, over the ends from i, of the
// weighted means between.
func TestPoolDown(t *testing.T) {
	rng := newRand(t, 101)
	for n := range 34 {
		chainage, level, weight := levelsIn(rng, n)
		blocks := poolDown(nil, chainage, level, weight)
		for i := range n {
			want := math.Inf(1)
			for a := 0; a <= i; a++ {
				most := math.Inf(-1)
				for b := i; b < n; b++ {
					sum, w := 0.0, 0.0
					for k := a; k <= b; k++ {
						sum, w = sum+weight[k]*level[k], w+weight[k]
					}
					most = max(most, sum/w)
				}
				want = min(want, most)
			}
			near := slices.MinFunc(blocks, func(a, b block) int {
				return int(math.Copysign(1, math.Abs(a.level-want)-math.Abs(b.level-want)))
			})
			if math.Abs(near.level-want) > 1e-12 {
				t.Errorf("n %d, point %d: no block at %v", n, i, want)
			}
		}
		for k := 1; k < len(blocks); k++ {
			if !(blocks[k].level < blocks[k-1].level && blocks[k].chainage > blocks[k-1].chainage) {
				t.Errorf("n %d: blocks %v do not fall", n, blocks)
			}
		}
	}
}

// TestPoolDownTies: two levels at one chainage are one, and what has no weight is not there.
func TestPoolDownTies(t *testing.T) {
	got := poolDown(nil, []float64{5, 5, 7}, []float64{1, 0, -3}, []float64{1, 1, 0})
	if len(got) != 1 || got[0].level != 0.5 || got[0].count != 2 {
		t.Errorf("two levels at one chainage: %v, want their mean", got)
	}
}

// TestMedianDown compares the sum of absolute differences with the least possible
// one, found step by step over all levels that occur.
func TestMedianDown(t *testing.T) {
	rng := newRand(t, 102)
	for n := 1; n < 34; n++ {
		_, level, _ := levelsIn(rng, n)
		r := make([]float64, n)
		medianDown(r, level)
		got := 0.0
		for i := range r {
			got += math.Abs(r[i])
			if i > 0 && level[i]-r[i] > level[i-1]-r[i-1]+1e-12 {
				t.Errorf("n %d: rises at point %d", n, i)
			}
		}
		values := slices.Sorted(slices.Values(level))
		best := make([]float64, n) // least sum so far with a last value of values[k] or above
		for _, z := range level {
			least := math.Inf(1)
			for k := n - 1; k >= 0; k-- {
				least = min(least, best[k]+math.Abs(z-values[k]))
				best[k] = least
			}
		}
		if math.Abs(got-best[0]) > 1e-9 {
			t.Errorf("n %d: sum %v, want %v", n, got, best[0])
		}
	}
}

func TestMedian(t *testing.T) {
	rng := newRand(t, 103)
	for n := 1; n < 40; n++ {
		v := make([]float64, n)
		for i := range v {
			v[i] = math.Floor(10 * rng.Float64())
		}
		sorted := slices.Sorted(slices.Values(v))
		want := (sorted[(n-1)/2] + sorted[n/2]) / 2
		if got := median(v); got != want {
			t.Errorf("%v: %v, want %v", sorted, got, want)
		}
	}
}

// TestRobustSigma: a quarter of wrong values leaves the sigma of the rest nearly as
// it is; the median of normal errors is 0.67449 sigma.
func TestRobustSigma(t *testing.T) {
	rng := newRand(t, 104)
	r := make([]float64, 4000)
	for i := range r {
		r[i] = 0.02 * rng.NormFloat64()
	}
	if s := robustSigma(r, make([]float64, 4000), 0); math.Abs(s-0.02) > 0.0016 { // 4 sigma of the estimate
		t.Errorf("sigma %v, want 0.02", s)
	}
	for i := range 1000 {
		r[i] = 5
	}
	if s := robustSigma(r, make([]float64, 4000), 0); s > 0.032 { // 0.9674 of 2/3: 0.0286
		t.Errorf("sigma %v with a quarter wrong, want below 0.032", s)
	}
}
