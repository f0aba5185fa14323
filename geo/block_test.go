package geo

import (
	"math"
	"slices"
	"testing"
)

// TestBlockJoined compares with the sums of least squares over all points at once
// (Gauss 1809), whatever the order in which blocks were joined.
func TestBlockJoined(t *testing.T) {
	rng := newRand(t, 121)
	for n := 1; n < 34; n++ {
		chainage, level, weight := levelsIn(rng, n)
		blocks := make([]block, n)
		var w, s, z float64
		for i := range n {
			blocks[i] = newBlock(chainage[i], level[i], weight[i])
			w, s, z = w+weight[i], s+weight[i]*chainage[i], z+weight[i]*level[i]
		}
		s, z = s/w, z/w
		for len(blocks) > 1 {
			k := rng.IntN(len(blocks) - 1)
			blocks[k] = blocks[k].joined(blocks[k+1])
			blocks = append(blocks[:k+1], blocks[k+2:]...)
		}
		var ss, sz float64
		for i := range n {
			ss, sz = ss+weight[i]*(chainage[i]-s)*(chainage[i]-s), sz+weight[i]*(chainage[i]-s)*(level[i]-z)
		}
		slope := 0.0
		if n > 1 {
			slope = min(sz/ss, 0)
		}
		misfit := 0.0
		for i := range n {
			r := level[i] - z - slope*(chainage[i]-s)
			misfit += weight[i] * r * r
		}
		b := &blocks[0]
		if !near(b.slope(), slope, 1e-12) || !near(b.at(7), z+slope*(7-s), 1e-10) || !near(b.misfit(), misfit, 1e-9) {
			t.Errorf("n %d: slope %v, level %v, misfit %v, want %v, %v, %v", n, b.slope(), b.at(7), b.misfit(), slope, z+slope*(7-s), misfit)
		}
		variance := 1 / w
		if n > 1 {
			variance += (7 - s) * (7 - s) / ss
		}
		if !near(b.variance(7), variance, 1e-9) || b.first != chainage[0] || b.last != chainage[n-1] || b.count != n {
			t.Errorf("n %d: variance %v, want %v; block %+v", n, b.variance(7), variance, b)
		}
	}
}

// TestJoinBlocksOrder: at each stage the two neighbours are joined that add least,
// compared with a plain search through all.
func TestJoinBlocksOrder(t *testing.T) {
	rng := newRand(t, 122)
	for n := 2; n < 34; n++ {
		chainage, level, weight := levelsIn(rng, n)
		plain := poolDown(nil, chainage, level, weight)
		j := newJoining(slices.Clone(plain))
		for stage := 1; len(plain) > 1; stage++ {
			best, least := 0, math.Inf(1)
			for k := range len(plain) - 1 {
				both := plain[k].joined(plain[k+1])
				if cost := both.misfit() - plain[k].misfit() - plain[k+1].misfit(); cost < least {
					best, least = k, cost
				}
			}
			plain[best] = plain[best].joined(plain[best+1])
			plain = append(plain[:best+1], plain[best+2:]...)
			if cost := j.next(stage); !near(cost, least, 1e-12) {
				t.Fatalf("n %d, stage %d: cost %v, want %v", n, stage, cost, least)
			}
			got := j.at(stage)
			if len(got) != len(plain) {
				t.Fatalf("n %d, stage %d: %d blocks, want %d", n, stage, len(got), len(plain))
			}
			for k := range got {
				if got[k].first != plain[k].first || got[k].last != plain[k].last || !near(got[k].level, plain[k].level, 1e-12) {
					t.Errorf("n %d, stage %d: block %+v, want %+v", n, stage, got[k], plain[k])
				}
			}
		}
	}
}

// TestJoinBlocks has as many blocks as a course has straight parts, by hand.
func TestJoinBlocks(t *testing.T) {
	for _, tc := range []struct {
		name   string
		level  []float64
		blocks int
	}{
		{"none", nil, 0},
		{"one point", []float64{3}, 1},
		{"slope", []float64{9, 8, 7, 6, 5, 4}, 1},
		{"pools", []float64{9, 9, 9, 9, 5, 5, 5, 5}, 2},
		{"bend", []float64{9, 8.99, 8.98, 8.97, 8.96, 8, 7, 6, 5, 4}, 2},
		{"pool, rapids, pool", []float64{9, 9, 9, 9, 8, 7, 6, 5, 4, 4, 4, 4}, 3},
	} {
		n := len(tc.level)
		ones, at := make([]float64, n), make([]float64, n)
		for i := range n {
			ones[i], at[i] = 1, float64(10*i)
		}
		if got := joinBlocks(poolDown(nil, at, tc.level, ones)); len(got) != tc.blocks {
			t.Errorf("%s: %d blocks, want %d", tc.name, len(got), tc.blocks)
		}
	}
}
