package quality

import (
	"math/rand/v2"
	"path/filepath"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"sync"
	"testing"
	"unsafe"
)

// scattered are places and heights in a square, in which one in ten repeats the place
// before it.
func scattered(rng *rand.Rand, n int, side float64) (x, y, z []float64) {
	for i := range n {
		if i%10 == 9 {
			x, y = append(x, x[i-1]), append(y, y[i-1])
		} else {
			x, y = append(x, side*rng.Float64()), append(y, side*rng.Float64())
		}
		z = append(z, -10*rng.Float64())
	}
	return x, y, z
}

// TestMatcherKeepsTheNearest compares with a plain sort of all points within reach, of
// points that come from several sides at once.
func TestMatcherKeepsTheNearest(t *testing.T) {
	const seed, reach, sides = 11, 2.0, 4
	rng := rand.New(rand.NewPCG(seed, 1))
	cx, cy, cz := scattered(rng, 200, 60)
	px, py, pz := scattered(rng, 8000, 60)
	for _, most := range []int{1, 8, 24, 500} {
		m := newMatcher(newCheckIndex(cx, cy, cz, reach), MatchPlane)
		m.most = most
		var group sync.WaitGroup
		for side := range sides {
			group.Go(func() {
				for i := side; i < len(px); i += sides {
					m.offer(px[i], py[i], pz[i], 0.5)
				}
			})
		}
		group.Wait()
		for k := range cx {
			var want []neighbour
			for i := range px {
				if n := (neighbour{px[i] - cx[k], py[i] - cy[k], pz[i], 0.5}); n.u*n.u+n.v*n.v <= reach*reach {
					want = append(want, n)
				}
			}
			slices.SortFunc(want, neighbour.compare)
			got := slices.SortedFunc(slices.Values(m.near[k]), neighbour.compare)
			if !slices.Equal(got, want[:min(len(want), most)]) {
				t.Fatalf("seed %d: of check point %d %d neighbours are kept, want the nearest %d of %d", seed, k, len(got), most, len(want))
			}
		}
	}
}

// Whatever the number of check points, neighbours take 64 MB and so do their places.
func TestMatcherIsBounded(t *testing.T) {
	const bound = 64 << 20
	for _, n := range []int{1, 2000, 27_150, 125_000, maxChecks} {
		x, y, z := scattered(rand.New(rand.NewPCG(12, 1)), n, 1e6)
		m := newMatcher(newCheckIndex(x, y, z, 0.5), MatchPlane)
		if bytes := uintptr(n*m.most) * unsafe.Sizeof(neighbour{}); bytes > bound || m.most < 6 {
			t.Errorf("%d check points keep %d neighbours each, %d bytes", n, m.most, bytes)
		}
		for range 5 * m.most {
			m.offer(x[0], y[0], -1, 0.5)
		}
		if c := cap(m.near[0]); c > 2*m.most || len(m.near[0]) != m.most {
			t.Errorf("%d neighbours in room for %d, want %d", len(m.near[0]), c, m.most)
		}
	}
}

// More check points than memory is bounded for are refused.
func TestTooManyCheckPoints(t *testing.T) {
	var b strings.Builder
	b.WriteString("x,y,z\n")
	for i := range maxChecks + 1 {
		b.WriteString(strconv.Itoa(i) + ",1,-1\n")
	}
	_, _, _, _, err := readCheck(writeFile(t, filepath.Join(t.TempDir(), "check.csv"), b.String()))
	if err == nil || !strings.Contains(err.Error(), "check.csv: has 250001 check points, want 250000 at most: thin them") {
		t.Errorf("error %v", err)
	}
}

// BenchmarkMatcher offers points about as many check points as there may be, and says
// how much memory is held in the end.
func BenchmarkMatcher(b *testing.B) {
	rng := rand.New(rand.NewPCG(13, 1))
	x, y, z := scattered(rng, maxChecks, 1000)
	m := newMatcher(newCheckIndex(x, y, z, 1), MatchPlane)
	b.ReportAllocs()
	for b.Loop() {
		m.offer(1000*rng.Float64(), 1000*rng.Float64(), -1, 0.5)
	}
	var held runtime.MemStats
	runtime.GC()
	runtime.ReadMemStats(&held)
	b.ReportMetric(float64(held.HeapAlloc)/(1<<20), "MB-held")
	runtime.KeepAlive(m)
}
