package geo

import (
	"math"
	"math/rand/v2"
	"slices"
	"sync"
	"testing"
)

// mustStations returns stations that are right.
func mustStations(t testing.TB, r StationRecords, maxGap float64) *Stations {
	t.Helper()
	s, err := NewStations(r, maxGap)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// rowsTo are the first n rows.
func rowsTo(n int) []int32 {
	rows := make([]int32, n)
	for i := range rows {
		rows[i] = int32(i)
	}
	return rows
}

// fillOne asks for the water at one point.
func fillOne(s *Stations, x, y, utc, depth float64) (temperature, salinity float64) {
	t, c := []float64{0}, []float64{0}
	s.Fill(t, c, rowsTo(1), []float64{x}, []float64{y}, []float64{utc}, []float64{depth})
	return t[0], c[0]
}

// randomStations returns n stations with up to 6 times and 7 depths each.
func randomStations(rng *rand.Rand, n int, timed, casts bool, place func(k int) (x, y float64)) StationRecords {
	var r StationRecords
	for k := range n {
		x, y := place(k)
		start, times, depths := 1.7e9+86400*rng.Float64(), 1, 1
		if timed {
			times = 1 + rng.IntN(6)
		}
		for range times {
			start += 60 + 20000*rng.Float64()
			if casts {
				depths = 1 + rng.IntN(7)
			}
			down := 2 * rng.Float64() * float64(rng.IntN(2))
			for range depths {
				r.X, r.Y = append(r.X, x), append(r.Y, y)
				r.Temperature, r.Salinity = append(r.Temperature, 5+20*rng.Float64()), append(r.Salinity, 36*rng.Float64())
				if timed {
					r.UTC = append(r.UTC, start)
				}
				if casts {
					r.Depth = append(r.Depth, down)
				}
				down += 0.1 + 4*rng.Float64()
			}
		}
	}
	order := rng.Perm(len(r.X)) // rows in any order
	for _, c := range []*[]float64{&r.X, &r.Y, &r.Temperature, &r.Salinity, &r.UTC, &r.Depth} {
		if *c != nil {
			shuffled := make([]float64, len(order))
			for i, k := range order {
				shuffled[i] = (*c)[k]
			}
			*c = shuffled
		}
	}
	return r
}

// TestStationsPlain compares every point with the plain computation: in and far
// outside the stations, on lattices where distances are equal, with stations that drop
// out, at stations and beside them.
func TestStationsPlain(t *testing.T) {
	rng := newRand(t, 61)
	const x0, y0 = 512000, 7012000
	scattered := func(int) (float64, float64) { return x0 + 9000*rng.Float64(), y0 + 4000*rng.Float64() }
	lattice := func(k int) (float64, float64) { return x0 + 500*float64(k%11), y0 + 500*float64(k/11) }
	line := func(k int) (float64, float64) { return x0 + 100*float64(k), y0 }
	clumps := func(k int) (float64, float64) {
		return x0 + 8000*float64(k%2) + 10*rng.Float64(), y0 + 10*rng.Float64()
	}
	for _, n := range []int{1, 2, 7, 8, 9, 60, 200} {
		for kind := range 4 {
			timed, casts := kind&1 == 1, kind&2 == 2
			for name, place := range map[string]func(int) (float64, float64){"scattered": scattered, "lattice": lattice, "line": line, "clumps": clumps} {
				r := randomStations(rng, n, timed, casts, place)
				s := mustStations(t, r, 3600)
				if s.HasTimes() != timed || s.HasDepths() != casts {
					t.Fatalf("HasTimes %v, HasDepths %v, want %v %v", s.HasTimes(), s.HasDepths(), timed, casts)
				}
				for i := range 60 {
					x, y := x0+12000*rng.Float64()-2000, y0+9000*rng.Float64()-2000
					switch {
					case i%4 == 1: // on the lattice and half way between
						x, y = x0+250*math.Round((x-x0)/250), y0+250*math.Round((y-y0)/250)
					case i%20 == 2:
						x, y = x0+40*(x-x0), y0-90*(y-y0)
					case i%10 == 3: // at a station or a little beside it
						x, y = r.X[i%len(r.X)]+0.0008*float64(i%3), r.Y[i%len(r.X)]
					}
					utc, depth := 1.7e9+200000*rng.Float64()-10000, max(25*rng.Float64()-2, 0)
					if timed && i%5 == 0 {
						utc = r.UTC[rng.IntN(len(r.UTC))]
					}
					gotT, gotS := fillOne(s, x, y, utc, depth)
					wantT, wantS := plainWater(r, 3600, x, y, utc, depth)
					if math.IsNaN(gotT) != math.IsNaN(wantT) || math.Abs(gotT-wantT) > 1e-10 || math.Abs(gotS-wantS) > 1e-10 {
						t.Fatalf("%d %s, timed %v, casts %v: at %v %v %v %v: %v %v, want %v %v",
							n, name, timed, casts, x, y, utc, depth, gotT, gotS, wantT, wantS)
					}
				}
			}
		}
	}
}

// TestStationsChunk walks in steps of all sizes through place and time, where the search
// is reused from point to point, and wants the very numbers of each point alone.
func TestStationsChunk(t *testing.T) {
	rng := newRand(t, 66)
	for kind := range 8 {
		timed, casts, lattice := kind&1 == 1, kind&2 == 2, kind&4 == 4
		s := mustStations(t, randomStations(rng, 121, timed, casts, func(k int) (float64, float64) {
			if lattice {
				return 7e6 + 500*float64(k%11), 500 * float64(k/11)
			}
			return 7e6 + 5000*rng.Float64(), 5000 * rng.Float64()
		}), 3600)
		const n = 6000
		c := [6][]float64{}
		for k := range c {
			c[k] = make([]float64, n)
		}
		temperature, salinity, x, y, utc, depth := c[0], c[1], c[2], c[3], c[4], c[5]
		x[0], y[0], utc[0] = 7e6+2500, 2500, 1.7e9+50000
		for i := 1; i < n; i++ {
			step := 300 * math.Pow(rng.Float64(), 6)
			x[i], y[i] = x[i-1]+step*(rng.Float64()-0.5), y[i-1]+step*(rng.Float64()-0.5)
			if i%50 == 0 { // on the lattice and its middle lines
				x[i], y[i] = 7e6+250*math.Round((x[i]-7e6)/250), 250*math.Round(y[i]/250)
			}
			utc[i], depth[i] = utc[i-1]+100*step*(rng.Float64()-0.4), 10*rng.Float64()
			if timed && i%7 == 0 { // to where a station begins or ends, and back
				utc[i] = s.changes[rng.IntN(len(s.changes))]
				utc[i-1] = utc[i] + 0.5
				if i%2 == 0 {
					utc[i-1] = utc[i] - 0.5
				}
			}
		}
		s.Fill(temperature, salinity, rowsTo(n), x, y, utc, depth)
		for i := range x {
			if oneT, oneS := fillOne(s, x[i], y[i], utc[i], depth[i]); !same(temperature[i], oneT) || !same(salinity[i], oneS) {
				t.Fatalf("timed %v, casts %v, lattice %v: point %d: %v %v, alone %v %v",
					timed, casts, lattice, i, temperature[i], salinity[i], oneT, oneS)
			}
		}
	}
}

// TestStationsAgree wants what all stations say exactly, so a limit of a formula is not
// passed by a rounding.
func TestStationsAgree(t *testing.T) {
	rng := newRand(t, 63)
	r := randomStations(rng, 50, false, false, func(int) (float64, float64) { return 1000 * rng.Float64(), 1000 * rng.Float64() })
	for i := range r.X {
		r.Temperature[i], r.Salinity[i] = 35, 0.1+0.2
	}
	s := mustStations(t, r, 1)
	for range 2000 {
		gotT, gotS := fillOne(s, 1000*rng.Float64(), 1000*rng.Float64(), 0, 0)
		if gotT != 35 || gotS != 0.1+0.2 {
			t.Fatalf("%v %v, want 35 and %v", gotT, gotS, 0.1+0.2)
		}
	}
}

func TestStationsNotFinite(t *testing.T) {
	rng := newRand(t, 64)
	for _, n := range []int{1, 20} {
		s := mustStations(t, randomStations(rng, n, false, false, func(int) (float64, float64) { return rng.Float64(), rng.Float64() }), 1)
		for _, p := range [][2]float64{{math.NaN(), 0}, {0, math.NaN()}, {math.Inf(1), 0}, {0, math.Inf(-1)}, {math.Inf(1), math.Inf(1)}} {
			if gotT, gotS := fillOne(s, p[0], p[1], 0, 0); !math.IsNaN(gotT) || !math.IsNaN(gotS) {
				t.Errorf("%d stations at %v: %v %v, want NaN", n, p, gotT, gotS)
			}
		}
	}
}

func TestStationsShared(t *testing.T) {
	rng := newRand(t, 65)
	r := randomStations(rng, 100, true, true, func(int) (float64, float64) { return 1000 * rng.Float64(), 1000 * rng.Float64() })
	s := mustStations(t, r, 1e6)
	const n = 1000
	x, y, utc, depth := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		x[i], y[i], utc[i], depth[i] = 1000*rng.Float64(), 1000*rng.Float64(), 1.7e9+1e5*rng.Float64(), 9*rng.Float64()
	}
	wantT, wantS := make([]float64, n), make([]float64, n)
	rows := rowsTo(n)
	s.Fill(wantT, wantS, rows, x, y, utc, depth)
	var wait sync.WaitGroup
	for range 4 {
		wait.Go(func() {
			gotT, gotS := make([]float64, n), make([]float64, n)
			s.Fill(gotT, gotS, rows, x, y, utc, depth)
			if !slices.Equal(gotT, wantT) || !slices.Equal(gotS, wantS) {
				t.Error("goroutines differ")
			}
		})
	}
	wait.Wait()
	if n := testing.AllocsPerRun(10, func() { s.Fill(wantT, wantS, rows, x, y, utc, depth) }); n != 0 {
		t.Errorf("%v allocations a chunk, want 0", n)
	}
}
