package geo

import (
	"cmp"
	"fmt"
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

// fillOne asks for the water at one point.
func fillOne(s *Stations, x, y, utc, depth float64) (temperature, salinity float64) {
	t, c := []float64{0}, []float64{0}
	s.Fill(t, c, []float64{x}, []float64{y}, []float64{utc}, []float64{depth})
	return t[0], c[0]
}

// plainWater is the water at a point, written out: of every station whose record
// reaches the time, the profile is interpolated in time depth by depth and integrated
// between all the depths that occur; all stations are then sorted by distance.
func plainWater(r StationRecords, maxGap, x, y, utc, depth float64) (temperature, salinity float64) {
	type near struct {
		d2   float64
		rows []int
	}
	rows := map[string][]int{}
	var order []string
	for i := range r.X {
		name := fmt.Sprint(r.X[i], r.Y[i])
		if rows[name] == nil {
			order = append(order, name)
		}
		rows[name] = append(rows[name], i)
	}
	var stations []near
	for _, name := range order {
		of := rows[name]
		first, last := plainSpan(r, of)
		if r.UTC != nil && !(utc >= first-maxGap && utc <= last+maxGap) {
			continue
		}
		dx, dy := x-r.X[of[0]], y-r.Y[of[0]]
		stations = append(stations, near{d2: dx*dx + dy*dy, rows: of})
	}
	slices.SortStableFunc(stations, func(a, b near) int { return cmp.Compare(a.d2, b.d2) })
	if len(stations) > 8 {
		stations = stations[:8]
	}
	var t, s, weights float64
	for _, n := range stations {
		oneT, oneS := plainMean(r, n.rows, r.Temperature, utc, depth), plainMean(r, n.rows, r.Salinity, utc, depth)
		if math.Sqrt(n.d2) < 0.001 {
			return oneT, oneS
		}
		t, s, weights = t+oneT/n.d2, s+oneS/n.d2, weights+1/n.d2
	}
	return t / weights, s / weights
}

// plainSpan returns the first and the last time of some rows.
func plainSpan(r StationRecords, of []int) (first, last float64) {
	first, last = math.Inf(1), math.Inf(-1)
	for _, row := range of {
		if r.UTC != nil {
			first, last = min(first, r.UTC[row]), max(last, r.UTC[row])
		}
	}
	return first, last
}

// plainMean integrates a station's profile at a time from 0 to a depth.
func plainMean(r StationRecords, of []int, value []float64, utc, depth float64) float64 {
	before, after := math.Inf(-1), math.Inf(1) // the times of the casts on either side
	for _, row := range of {
		if r.UTC != nil && r.UTC[row] <= utc {
			before = max(before, r.UTC[row])
		}
		if r.UTC != nil && r.UTC[row] >= utc {
			after = min(after, r.UTC[row])
		}
	}
	at := func(d float64) float64 {
		a, okA := plainValue(r, of, value, before, d)
		b, okB := plainValue(r, of, value, after, d)
		switch {
		case !okA:
			return b
		case !okB || r.UTC == nil || before == after:
			return a
		}
		return (a*(after-utc) + b*(utc-before)) / (after - before)
	}
	if r.Depth == nil || depth <= 0 {
		return at(0)
	}
	cuts := []float64{0, depth}
	for _, row := range of {
		if r.Depth[row] < depth {
			cuts = append(cuts, r.Depth[row])
		}
	}
	slices.Sort(cuts)
	sum := 0.0
	for k := 1; k < len(cuts); k++ {
		sum += (cuts[k] - cuts[k-1]) * (at(cuts[k-1]) + at(cuts[k])) / 2
	}
	return sum / depth
}

// plainValue returns the value at a depth of the cast with a time.
func plainValue(r StationRecords, of []int, value []float64, utc, depth float64) (float64, bool) {
	up, down := -1, -1 // rows on either side
	for _, row := range of {
		if r.UTC != nil && r.UTC[row] != utc {
			continue
		}
		d := r.depth(row)
		if d <= depth && (up < 0 || d > r.depth(up)) {
			up = row
		}
		if d >= depth && (down < 0 || d < r.depth(down)) {
			down = row
		}
	}
	switch {
	case up < 0 && down < 0:
		return 0, false
	case up < 0:
		return value[down], true
	case down < 0 || up == down:
		return value[up], true
	}
	w := (depth - r.Depth[up]) / (r.Depth[down] - r.Depth[up])
	return value[up] + w*(value[down]-value[up]), true
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
		s.Fill(temperature, salinity, x, y, utc, depth)
		for i := range x {
			if oneT, oneS := fillOne(s, x[i], y[i], utc[i], depth[i]); !same(temperature[i], oneT) || !same(salinity[i], oneS) {
				t.Fatalf("timed %v, casts %v, lattice %v: point %d: %v %v, alone %v %v",
					timed, casts, lattice, i, temperature[i], salinity[i], oneT, oneS)
			}
		}
	}
}

// TestStationTimesByHand holds a station to its records and to maxGap beyond them.
func TestStationTimesByHand(t *testing.T) {
	s := mustStations(t, StationRecords{
		X: []float64{0, 0, 0}, Y: []float64{0, 0, 0}, Name: []string{"a", "a", "a"},
		Temperature: []float64{14, 10, 12}, Salinity: []float64{31, 30, 34}, UTC: []float64{1000, 100, 200},
	}, 50)
	none := math.NaN()
	for _, tc := range []struct {
		name                       string
		utc, temperature, salinity float64
	}{
		{"held before", 50, 10, 30},
		{"too early", math.Nextafter(50, 0), none, none},
		{"first", 100, 10, 30},
		{"between", 125, 10.5, 31},
		{"second", 200, 12, 34},
		{"between, farther apart than the gap", 600, 13, 32.5},
		{"held after", 1050, 14, 31},
		{"too late", math.Nextafter(1050, 2000), none, none},
		{"NaN", none, none, none},
	} {
		gotT, gotS := fillOne(s, 3, 4, tc.utc, 0)
		if !same(gotT, tc.temperature) || !same(gotS, tc.salinity) {
			t.Errorf("%s: %v %v, want %v %v", tc.name, gotT, gotS, tc.temperature, tc.salinity)
		}
	}
}

// TestCastMeanClosedForm has a cast of T = 20 - d between 1 and 5 m, in steps of no
// consequence: the integral of a straight line is known.
func TestCastMeanClosedForm(t *testing.T) {
	depths := []float64{5, 1, 2.25, 4, 3.5}
	r := StationRecords{Depth: depths, X: make([]float64, 5), Y: make([]float64, 5), Salinity: []float64{35, 35, 35, 35, 35}}
	for _, d := range depths {
		r.Temperature = append(r.Temperature, 20-d)
	}
	s := mustStations(t, r, 3600)
	for depth := -1.0; depth < 12; depth += 1.0 / 64 {
		want := 19.0 // held up to the surface
		if depth > 1 {
			to := min(depth, 5)
			want = (19 + 20*(to-1) - (to*to-1)/2 + 15*(depth-to)) / depth
		}
		gotT, gotS := fillOne(s, 10, 10, 0, depth)
		if math.Abs(gotT-want) > 1e-13 || math.Abs(gotS-35) > 1e-13 {
			t.Fatalf("to %v m: %v %v, want %v 35", depth, gotT, gotS, want)
		}
	}
	if gotT, gotS := fillOne(s, 10, 10, 0, math.NaN()); !math.IsNaN(gotT) || !math.IsNaN(gotS) {
		t.Errorf("to NaN: %v %v, want NaN", gotT, gotS)
	}
}

// TestCastMeanIsContinuous crosses every level of a cast by one rounding.
func TestCastMeanIsContinuous(t *testing.T) {
	rng := newRand(t, 62)
	r := randomStations(rng, 1, false, true, func(int) (float64, float64) { return 0, 0 })
	s := mustStations(t, r, 1)
	for _, d := range r.Depth {
		for _, side := range []float64{math.Inf(-1), math.Inf(1)} {
			at, _ := fillOne(s, 1, 1, 0, d)
			beside, _ := fillOne(s, 1, 1, 0, math.Nextafter(d, side))
			if math.Abs(at-beside) > 1e-13 {
				t.Errorf("at %v m: %v, beside it %v", d, at, beside)
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
	s.Fill(wantT, wantS, x, y, utc, depth)
	var wait sync.WaitGroup
	for range 4 {
		wait.Go(func() {
			gotT, gotS := make([]float64, n), make([]float64, n)
			s.Fill(gotT, gotS, x, y, utc, depth)
			if !slices.Equal(gotT, wantT) || !slices.Equal(gotS, wantS) {
				t.Error("goroutines differ")
			}
		})
	}
	wait.Wait()
	if n := testing.AllocsPerRun(10, func() { s.Fill(wantT, wantS, x, y, utc, depth) }); n != 0 {
		t.Errorf("%v allocations a chunk, want 0", n)
	}
}
