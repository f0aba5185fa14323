package geo

import (
	"errors"
	"math"
	"math/big"
	"sync"
	"testing"
)

// flight returns n records of a made-up flight at about 200 records a second.
func flight(t testing.TB, n int) (times, x, y, z []float64) {
	rng := newRand(t, 21)
	at := 4.1e8
	for i := range n {
		at += 0.004 + 0.002*rng.Float64()
		times = append(times, at)
		x = append(x, 512000+0.3*float64(i)+rng.Float64())
		y = append(y, 7012000+40*math.Sin(float64(i)/500))
		z = append(z, 500+rng.Float64())
	}
	return times, x, y, z
}

func TestTrajectoryByHand(t *testing.T) {
	tr, err := NewTrajectory([]float64{10, 11, 13, 13.5}, []float64{0, 4, 8, 8}, []float64{1, 1, 3, 5}, []float64{9, 7, 7, 6}, 1)
	if err != nil {
		t.Fatal(err)
	}
	none := math.NaN()
	for _, tc := range []struct {
		name        string
		at, x, y, z float64
	}{
		{"first record", 10, 0, 1, 9},
		{"a quarter on, gap as long as the limit", 10.25, 1, 1, 8.5},
		{"record before a gap", 11, 4, 1, 7},
		{"in the gap", 12, none, none, none},
		{"just in the gap", math.Nextafter(11, 12), none, none, none},
		{"record after the gap", 13, 8, 3, 7},
		{"half way", 13.25, 8, 4, 6.5},
		{"last record", 13.5, 8, 5, 6},
		{"after", math.Nextafter(13.5, 14), none, none, none},
		{"before", math.Nextafter(10, 9), none, none, none},
		{"NaN", none, none, none, none},
		{"infinite", math.Inf(1), none, none, none},
	} {
		var x, y, z [1]float64
		tr.At(x[:], y[:], z[:], []float64{tc.at})
		if !same(x[0], tc.x) || !same(y[0], tc.y) || !same(z[0], tc.z) {
			t.Errorf("%s: %v %v %v, want %v %v %v", tc.name, x[0], y[0], z[0], tc.x, tc.y, tc.z)
		}
	}
}

// same tells whether two numbers are equal or both NaN.
func same(a, b float64) bool { return a == b || math.IsNaN(a) && math.IsNaN(b) }

// TestTrajectoryPrecision compares times in any order with a plain search and an
// interpolation in 200-bit numbers.
func TestTrajectoryPrecision(t *testing.T) {
	times, x, y, z := flight(t, 3000)
	tr, err := NewTrajectory(times, x, y, z, 1)
	if err != nil {
		t.Fatal(err)
	}
	rng := newRand(t, 22)
	const n = 4000
	at, gotX, gotY, gotZ := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range at {
		at[i] = times[0] + (times[len(times)-1]-times[0])*rng.Float64()
	}
	tr.At(gotX, gotY, gotZ, at)
	for i := range at {
		k := 0
		for times[k+1] <= at[i] {
			k++
		}
		for _, c := range []struct{ got, want, within float64 }{
			{gotX[i], exactBetween(at[i], times[k:], x[k:]), 0x1p-33}, // one rounding of 5e5 m
			{gotY[i], exactBetween(at[i], times[k:], y[k:]), 0x1p-30}, // one rounding of 7e6 m
			{gotZ[i], exactBetween(at[i], times[k:], z[k:]), 0x1p-43}, // one rounding of 500 m
		} {
			if math.Abs(c.got-c.want) > c.within {
				t.Fatalf("at %v: %.12f, want %.12f", at[i], c.got, c.want)
			}
		}
	}
}

// exactBetween interpolates between the first two records in 200-bit numbers.
func exactBetween(at float64, t, v []float64) float64 {
	exact := func(v float64) *big.Float { return new(big.Float).SetPrec(200).SetFloat64(v) }
	w := exact(at)
	w.Sub(w, exact(t[0]))
	gap := exact(t[1])
	w.Quo(w, gap.Sub(gap, exact(t[0])))
	step := exact(v[1])
	w.Mul(w, step.Sub(step, exact(v[0])))
	got, _ := w.Add(w, exact(v[0])).Float64()
	return got
}

// TestTrajectoryExactAtRecords asks for the records themselves in several orders,
// with every interval a gap.
func TestTrajectoryExactAtRecords(t *testing.T) {
	times, x, y, z := flight(t, 1025)
	tr, err := NewTrajectory(times, x, y, z, 1e-6)
	if err != nil {
		t.Fatal(err)
	}
	n := len(times)
	rng := newRand(t, 23)
	orders := [][]int{make([]int, n), make([]int, n), rng.Perm(n)}
	for i := range n {
		orders[0][i], orders[1][i] = i, n-1-i
	}
	for k, order := range orders {
		at, gx, gy, gz := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
		for i, r := range order {
			at[i] = times[r]
		}
		tr.At(gx, gy, gz, at)
		for i, r := range order {
			if gx[i] != x[r] || gy[i] != y[r] || gz[i] != z[r] {
				t.Fatalf("order %d, record %d: %v %v %v, want %v %v %v", k, r, gx[i], gy[i], gz[i], x[r], y[r], z[r])
			}
		}
	}
}

func TestNewTrajectoryRefuses(t *testing.T) {
	good := []float64{1, 2, 3, 4}
	bad := func(i int, v float64) []float64 { c := append([]float64(nil), good...); c[i] = v; return c }
	for _, tc := range []struct {
		name       string
		t, x, y, z []float64
		index      int
		want       string
	}{
		{"out of order", bad(2, 1.5), good, good, good, 2, "record 3: time 1.5 comes after 2"},
		{"repeat", bad(3, 3), good, good, good, 3, "record 4: time 3 repeats"},
		{"long time", []float64{1, 410000000.25, 410000000.125, 410000001}, good, good, good, 2, "410000000.125 comes after 410000000.25"},
		{"time NaN", bad(0, math.NaN()), good, good, good, 0, "not finite"},
		{"x infinite", good, bad(1, math.Inf(-1)), good, good, 1, "not finite"},
		{"y NaN", good, good, bad(2, math.NaN()), good, 2, "not finite"},
		{"z NaN", good, good, good, bad(3, math.NaN()), 3, "record 4"},
	} {
		_, err := NewTrajectory(tc.t, tc.x, tc.y, tc.z, 1)
		wantError(t, err, tc.want)
		var at *RecordError
		if !errors.As(err, &at) || at.Index != tc.index || errors.Unwrap(err) != at.Err {
			t.Errorf("%s: %#v, want a RecordError with index %d", tc.name, err, tc.index)
		}
	}
	_, err := NewTrajectory(good[:1], good[:1], good[:1], good[:1], 1)
	wantError(t, err, "has 1 records", "at least 2")
	_, err = NewTrajectory(nil, nil, nil, nil, 1)
	wantError(t, err, "has 0 records")
	for _, gap := range []float64{0, -1, math.NaN()} {
		_, err = NewTrajectory(good, good, good, good, gap)
		wantError(t, err, "maximum gap", "more than 0")
	}
	mustPanic(t, func() { _, _ = NewTrajectory(good, good[:3], good, good, 1) })
}

func TestTrajectoryShared(t *testing.T) {
	times, x, y, z := flight(t, 500)
	tr, err := NewTrajectory(times, x, y, z, math.Inf(1))
	if err != nil {
		t.Fatal(err)
	}
	mustPanic(t, func() { tr.At(x, y, z, times[1:]) })
	var wait sync.WaitGroup
	for range 4 {
		wait.Go(func() {
			at := append([]float64(nil), times...)
			gx, gy := make([]float64, len(at)), make([]float64, len(at))
			tr.At(gx, gy, at, at) // z over the times
			for i := range at {
				if gx[i] != x[i] || gy[i] != y[i] || at[i] != z[i] {
					t.Errorf("record %d differs", i)
				}
			}
		})
	}
	wait.Wait()
	gx := make([]float64, len(x))
	if n := testing.AllocsPerRun(10, func() { tr.At(gx, gx, gx, times) }); n != 0 {
		t.Errorf("%v allocations a chunk, want 0", n)
	}
}

func BenchmarkTrajectory(b *testing.B) {
	times, x, y, z := flight(b, 1_000_000)
	tr, err := NewTrajectory(times, x, y, z, 1)
	if err != nil {
		b.Fatal(err)
	}
	rng := newRand(b, 24)
	const n = 1 << 16
	sorted, shuffled := make([]float64, n), make([]float64, n)
	for i := range n {
		sorted[i] = times[1000] + 2e-6*float64(i)
		shuffled[i] = times[0] + rng.Float64()*(times[len(times)-1]-times[0])
	}
	for _, bench := range []struct {
		name string
		at   []float64
	}{{"sorted", sorted}, {"shuffled", shuffled}} {
		b.Run(bench.name, func(b *testing.B) {
			gx, gy, gz := make([]float64, n), make([]float64, n), make([]float64, n)
			b.SetBytes(n * 8)
			b.ReportAllocs()
			for b.Loop() {
				tr.At(gx, gy, gz, bench.at)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n), "ns/point")
		})
	}
}
