package geo

import (
	"errors"
	"math"
	"sync"
	"testing"
)

// twisted is a surface that a bilinear grid keeps exactly, with its slopes.
func twisted(x, y float64) (z, slopeX, slopeY float64) {
	u, v := (x-7012000)/100, (y-512000)/100
	return 46.5 + 0.01*u - 0.02*v + 0.003*u*v, (0.01 + 0.003*v) / 100, (-0.02 + 0.003*u) / 100
}

// nodes returns a grid of twisted, 100 m by 50 m, without the nodes that skip names,
// in random order.
func nodes(t testing.TB, cols, rows int, skip func(col, row int) bool) (x, y, z []float64) {
	rng := newRand(t, 41)
	for _, k := range rng.Perm(cols * rows) {
		if col, row := k%cols, k/cols; !skip(col, row) {
			nx, ny := 7012000+100*float64(col), 512000+50*float64(row)
			nz, _, _ := twisted(nx, ny)
			x, y, z = append(x, nx), append(y, ny), append(z, nz)
		}
	}
	return x, y, z
}

// mustSeparation returns a separation that is right.
func mustSeparation(t testing.TB, x, y, z []float64) *Separation {
	t.Helper()
	s, err := NewSeparation(x, y, z)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestSeparationBilinear compares with the surface, whose cells are known to be whole
// or not by the nodes left out.
func TestSeparationBilinear(t *testing.T) {
	const cols, rows = 13, 9
	skip := func(col, row int) bool { return col == 4 || row == 0 && col < 3 || col == 9 && row == 5 }
	x, y, z := nodes(t, cols, rows, skip)
	s := mustSeparation(t, x, y, z)
	rng := newRand(t, 42)
	inside := 0
	for range 20000 {
		x, y := 7012000+1300*rng.Float64()-50, 512000+500*rng.Float64()-50
		level, slopeX, slopeY := []float64{1}, []float64{0.5}, []float64{0.25}
		s.Add(level, slopeX, slopeY, []float64{x}, []float64{y})
		col, row := int(math.Floor((x-7012000)/100)), int(math.Floor((y-512000)/50))
		whole := col >= 0 && row >= 0 && col+1 < cols && row+1 < rows
		for k := 0; whole && k < 4; k++ {
			whole = !skip(col+k%2, row+k/2)
		}
		if !whole {
			if !math.IsNaN(level[0]) || !math.IsNaN(slopeX[0]) || !math.IsNaN(slopeY[0]) {
				t.Fatalf("at %v %v: %v %v %v, want NaN", x, y, level, slopeX, slopeY)
			}
			continue
		}
		inside++
		z, dx, dy := twisted(x, y)
		if math.Abs(level[0]-1-z) > 1e-12 || math.Abs(slopeX[0]-0.5-dx) > 1e-14 || math.Abs(slopeY[0]-0.25-dy) > 1e-14 {
			t.Fatalf("at %v %v: %v %v %v, want %v %v %v more", x, y, level, slopeX, slopeY, z, dx, dy)
		}
	}
	if inside < 5000 {
		t.Errorf("%d points inside, want thousands", inside)
	}
}

// first3 makes a call's three columns a list.
func first3(x, y, z []float64) [][]float64 { return [][]float64{x, y, z} }

func TestSeparationEdges(t *testing.T) {
	x, y, z := nodes(t, 4, 7, func(int, int) bool { return false })
	s := mustSeparation(t, x, y, z)
	slope := make([]float64, len(x))
	level := make([]float64, len(x))
	s.Add(level, slope, slope, x, y) // every node, those on the rim too
	for i := range x {
		if math.Abs(level[i]-z[i]) > 1e-14*50 {
			t.Errorf("node %v %v: %v, want %v", x[i], y[i], level[i], z[i])
		}
	}
	for _, p := range [][2]float64{
		{math.Nextafter(7012000, 0), 512000},
		{math.Nextafter(7012300, 8e6), 512000},
		{7012000, math.Nextafter(512000, 0)},
		{7012000, math.Nextafter(512300, 1e6)},
		{math.NaN(), 512000},
		{7012000, math.NaN()},
		{math.Inf(1), 512000},
	} {
		one, sx, sy := []float64{0}, []float64{0}, []float64{0}
		s.Add(one, sx, sy, []float64{p[0]}, []float64{p[1]})
		if !math.IsNaN(one[0]) || !math.IsNaN(sx[0]) || !math.IsNaN(sy[0]) {
			t.Errorf("at %v: %v %v %v, want NaN", p, one, sx, sy)
		}
	}
}

// TestSeparationRoundedNodes has steps of a third of 100 m in whole centimetres, and two
// columns in a row missing.
func TestSeparationRoundedNodes(t *testing.T) {
	var x, y, z []float64
	for k := range 60 * 60 {
		col, row := k%60, k/60
		if col == 30 || col == 31 {
			continue
		}
		nx, ny := 500000+float64(col)*100/3, 7e6+float64(row)*100/3
		x, y, z = append(x, math.Round(nx*100)/100), append(y, math.Round(ny*100)/100), append(z, 1e-4*(nx-500000)-2e-4*(ny-7e6))
	}
	x, y, z = append(x, x[0]), append(y, y[0]), append(z, z[0]) // a node twice, alike
	s := mustSeparation(t, x, y, z)
	if s.cols.n != 60 || s.rows.n != 60 {
		t.Fatalf("%d by %d nodes, want 60 by 60", s.cols.n, s.rows.n)
	}
	level, slope := []float64{0}, []float64{0}
	s.Add(level, slope, slope, []float64{501500}, []float64{7000700})
	if want := 1e-4*1500 - 2e-4*700; math.Abs(level[0]-want) > 2e-6 { // 1 cm times the slopes
		t.Errorf("level %v, want %v", level[0], want)
	}
}

func TestNewSeparationRefuses(t *testing.T) {
	rng := newRand(t, 43)
	scatter := func(unit float64) [][]float64 {
		var x, y []float64
		for range 300 {
			x, y = append(x, math.Round(1000*rng.Float64()/unit)*unit), append(y, math.Round(1000*rng.Float64()/unit)*unit)
		}
		return [][]float64{x, y, make([]float64, 300)}
	}
	bent := first3(nodes(t, 5, 5, func(int, int) bool { return false }))
	bent[0][7] += 0.2
	turned := first3(nodes(t, 5, 5, func(int, int) bool { return false }))
	for i := range turned[0] {
		turned[0][i], turned[1][i] = 0.8*turned[0][i]-0.6*turned[1][i], 0.6*turned[0][i]+0.8*turned[1][i]
	}
	for _, tc := range []struct {
		name    string
		columns [][]float64
		index   int // of the record, -1 for the whole
		want    string
	}{
		{"empty", [][]float64{nil, nil, nil}, -1, "0 columns and 0 rows"},
		{"one row", [][]float64{{1, 2, 3}, {5, 5, 5}, {0, 0, 0}}, -1, "3 columns and 1 rows, want at least 2"},
		{"one column", [][]float64{{1, 1}, {5, 6}, {0, 0}}, -1, "1 columns and 2 rows"},
		{"scattered", scatter(0x1p-30), -1, "want a regular grid"},
		{"scattered on whole metres", scatter(1), -1, "want a regular grid"},
		{"node off its place", bent, -1, "want a regular grid"},
		{"turned grid", turned, -1, "want a regular grid"},
		{"a quarter of a step off", [][]float64{{0, 1, 2, 3.25, 0, 1}, {0, 0, 0, 0, 1, 1}, make([]float64, 6)}, 1, "is off a grid"},
		{"no whole cell", [][]float64{{0, 1, 0}, {0, 0, 1}, {0, 0, 0}}, -1, "no cell with four nodes"},
		{"z NaN", [][]float64{{0, 1}, {0, 1}, {0, math.NaN()}}, 1, "not finite"},
		{"x infinite", [][]float64{{math.Inf(1), 1}, {0, 1}, {0, 1}}, 0, "not finite"},
		{"node twice", [][]float64{{0, 1, 0, 1, 0}, {0, 0, 1, 1, 0}, {4, 4, 4, 4, 5}}, 4, "z at node 0 0 is 5, before 4"},
	} {
		_, err := NewSeparation(tc.columns[0], tc.columns[1], tc.columns[2])
		if err == nil {
			t.Errorf("%s: no error", tc.name)
			continue
		}
		wantError(t, err, tc.want)
		var at *RecordError
		if errors.As(err, &at) != (tc.index >= 0) || at != nil && at.Index != tc.index {
			t.Errorf("%s: %#v, want record index %d", tc.name, err, tc.index)
		}
	}
	mustPanic(t, func() { _, _ = NewSeparation(make([]float64, 3), make([]float64, 2), make([]float64, 3)) })
}

func TestSeparationShared(t *testing.T) {
	x, y, z := nodes(t, 20, 20, func(int, int) bool { return false })
	s := mustSeparation(t, x, y, z)
	mustPanic(t, func() { s.Add(z, z[1:], z, x, y) })
	var wait sync.WaitGroup
	for range 4 {
		wait.Go(func() {
			level, sx, sy := make([]float64, len(x)), make([]float64, len(x)), make([]float64, len(x))
			s.Add(level, sx, sy, x, y)
			for i := range level {
				if math.Abs(level[i]-z[i]) > 1e-12 {
					t.Errorf("node %d: %v, want %v", i, level[i], z[i])
				}
			}
		})
	}
	wait.Wait()
	c := make([]float64, len(x))
	if n := testing.AllocsPerRun(10, func() { s.Add(c, c, c, x, y) }); n != 0 {
		t.Errorf("%v allocations a chunk, want 0", n)
	}
}
