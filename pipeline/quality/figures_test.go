package quality

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat"
)

// TestShiftFigures holds the shift by depth and incidence, the map and the histograms to
// plain loops over the columns and to gonum's means.
func TestShiftFigures(t *testing.T) {
	raw, corrected, _ := checkedCloud(5000, 0)
	column := func(name string) []float64 { return corrected.numbers(t, name) }
	x, y, z, depth, incidence := column("x"), column("y"), column("z"), column("depth"), column("incidence_deg")
	rawX, rawY, rawZ := column("x_raw"), column("y_raw"), column("z_raw")
	dz, dh := make([]float64, len(x)), make([]float64, len(x))
	for i := range x {
		dz[i], dh[i] = z[i]-rawZ[i], math.Hypot(x[i]-rawX[i], y[i]-rawY[i])
	}
	for _, format := range formats {
		r := diffSheets(t, format, raw, corrected, Options{})
		checkShift(t, format, r.Shift, dz, dh)
		if n := len(r.ByDepth); n < 5 || n > maxBands {
			t.Errorf("%s: %d bands of depth", format, n)
		}
		for _, b := range r.ByDepth {
			checkShift(t, format+" depth", b.Shift, within(dz, depth, b.From, b.To), within(dh, depth, b.From, b.To))
		}
		for _, b := range r.ByIncidence {
			checkShift(t, format+" incidence", b.Shift, within(dz, incidence, b.From, b.To), within(dh, incidence, b.From, b.To))
			if mean := stat.Mean(within(depth, incidence, b.From, b.To), nil); !isNear(b.MeanDepth, mean, 1e-9) {
				t.Errorf("%s: mean depth %v, want %v", format, b.MeanDepth, mean)
			}
		}
		checkHistogram(t, r.Histograms.DZ, dz)
		checkHistogram(t, r.Histograms.DH, dh)
		checkHistogram(t, r.Histograms.Depth, depth)
		checkMap(t, r.Map, x, y, dz)
		checkSections(t, r.Sections)
	}
}

func checkShift(t *testing.T, what string, s Shift, dz, dh []float64) {
	t.Helper()
	if int(s.Count) != len(dz) {
		t.Errorf("%s: %d points, want %d", what, s.Count, len(dz))
		return
	}
	if len(dz) == 0 {
		return
	}
	squares, greatest := 0.0, 0.0
	for _, v := range dz {
		squares += v * v
		greatest = max(greatest, math.Abs(v))
	}
	if !isNear(s.MeanDZ, stat.Mean(dz, nil), 1e-9) || !isNear(s.MeanDH, stat.Mean(dh, nil), 1e-9) ||
		!isNear(s.RMSDZ, math.Sqrt(squares/float64(len(dz))), 1e-9) || !isNear(s.MaxDZ, greatest, 0) || !isNear(s.MaxDH, slices.Max(dh), 0) {
		t.Errorf("%s: %+v, want means %v and %v, greatest %v and %v", what, s, stat.Mean(dz, nil), stat.Mean(dh, nil), greatest, slices.Max(dh))
	}
}

func checkHistogram(t *testing.T, h *Histogram, values []float64) {
	t.Helper()
	total := int64(0)
	for i, n := range h.Counts {
		from := float64(h.From) + float64(i)*float64(h.Width)
		want := len(within(values, values, Number(from-1e-9), Number(from+float64(h.Width)-1e-9)))
		if int(n) != want {
			t.Errorf("from %g: %d, want %d", from, n, want)
		}
		total += n
	}
	if int(total) != len(values) || len(h.Counts) > histogramBins {
		t.Errorf("%d values in %d bins, want %d", total, len(h.Counts), len(values))
	}
}

func checkMap(t *testing.T, m *Map, x, y, dz []float64) {
	t.Helper()
	if m.Cols > MapSide || m.Rows > MapSide || m.Cols < MapSide/2 && m.Rows < MapSide/2 {
		t.Errorf("the map has %d by %d cells", m.Cols, m.Rows)
	}
	sums, counts := make([]float64, m.Cols*m.Rows), make([]int64, m.Cols*m.Rows)
	for i := range x {
		at := int((y[i]-m.Y)/m.Cell)*m.Cols + int((x[i]-m.X)/m.Cell)
		sums[at] += dz[i]
		counts[at]++
	}
	for i, n := range counts {
		if m.Count[i] != n || n > 0 && math.Abs(m.MeanDZ[i]-sums[i]/float64(n)) > 1e-9 || (n == 0) != math.IsNaN(m.MeanDZ[i]) {
			t.Fatalf("cell %d: %d points of mean %v, want %d of %v", i, m.Count[i], m.MeanDZ[i], n, sums[i]/float64(n))
		}
	}
}

// Sections run along the cloud and twice across; their corrected points lie on the bed,
// which is a plane, within the strip.
func checkSections(t *testing.T, sections []Section) {
	t.Helper()
	if len(sections) != 3 {
		t.Fatalf("%d sections, want 3", len(sections))
	}
	for _, s := range sections {
		length := math.Hypot(s.X1-s.X0, s.Y1-s.Y0)
		if len(s.Points) < 100 || len(s.Points) > sectionPoints || length < 90 {
			t.Errorf("%s: %d points over %g m", s.Name, len(s.Points), length)
		}
		for _, p := range s.Points {
			share := p.At / length
			want := bed(s.X0+share*(s.X1-s.X0), s.Y0+share*(s.Y1-s.Y0))
			if p.At < 0 || p.At > length+1e-6 || math.Abs(p.Corrected-want) > 0.06*s.Halfwidth+1e-6 || math.Abs(p.Level-sceneLevel) > 1e-9 || p.Raw > p.Corrected {
				t.Fatalf("%s: %+v, want height %v", s.Name, p, want)
			}
		}
	}
}

// Edges are the decimals that people write: 0.3 is in [0.3, 0.4).
func TestStepEdges(t *testing.T) {
	for _, c := range []struct {
		exponent int
		v        float64
		want     int
	}{{-1, 0.3, 3}, {-1, 0.7, 7}, {-2, 0.29, 29}, {-2, 0.57, 57}, {-1, -0.3, -3}, {-1, -0.31, -4}, {0, 5, 5}, {1, 29.999, 2}, {1, 30, 3}, {-3, 1.001, 1001}} {
		if got := (step{c.exponent}).index(c.v); got != c.want {
			t.Errorf("%g in steps of 1e%d is in bin %d, want %d", c.v, c.exponent, got, c.want)
		}
	}
}

func TestChooseWidth(t *testing.T) {
	for _, c := range []struct {
		low, high, want float64
		bands           int
	}{{0.3, 11.6, 2, 6}, {0, 9.99, 1, 10}, {0, 10, 2, 6}, {-1, 38, 5, 9}, {2.5, 2.5, 1, 1}, {0, 0.004, 0.01, 1}} {
		w := chooseWidth(c.low, c.high, maxBands, step{-2})
		if w.size() != c.want || w.count(c.low, c.high) != c.bands {
			t.Errorf("%g to %g: width %g, %d bands, want %g and %d", c.low, c.high, w.size(), w.count(c.low, c.high), c.want, c.bands)
		}
	}
}

// Gathered in parts that range far apart, bins and rasters stay within their bounds, and
// hold what they hold gathered at once.
func TestJoinedInParts(t *testing.T) {
	const seed1, seed2 = 12, 5
	rng := rand.New(rand.NewPCG(seed1, seed2))
	for range 15 {
		whole, whole2 := newFigures(nil, nil), newFigures(nil, nil)
		for range 4 {
			part := newFigures(nil, nil)
			middle, spread := 1e4*rng.NormFloat64(), math.Pow(10, 4*rng.Float64()-1)
			for range 200 {
				x, y, v := middle+spread*rng.NormFloat64(), spread*rng.Float64(), spread*rng.NormFloat64()
				for _, f := range []*figures{part, whole2} {
					f.raster.add(x, y, v, 1)
					f.depth.at(x).add(v, 1, 0)
				}
			}
			whole.join(part)
		}
		a, b := whole.raster.report(), whole2.raster.report()
		if a.Cell != b.Cell || a.X != b.X || a.Y != b.Y || a.Cols != b.Cols || a.Rows != b.Rows || !slices.Equal(a.Count, b.Count) || a.Cols > MapSide || a.Rows > MapSide {
			t.Fatalf("seed %d %d: maps of %g (%d by %d) and %g (%d by %d) cells", seed1, seed2, a.Cell, a.Cols, a.Rows, b.Cell, b.Cols, b.Rows)
		}
		bandsA, bandsB := whole.byDepth(), whole2.byDepth()
		for i := range bandsB {
			if bandsA[i].From != bandsB[i].From || bandsA[i].Count != bandsB[i].Count || !isNear(bandsA[i].MeanDH, 1, 1e-12) && bandsA[i].Count > 0 {
				t.Fatalf("seed %d %d: band %+v, want %+v", seed1, seed2, bandsA[i], bandsB[i])
			}
		}
		if len(whole.depth.list) > maxBins {
			t.Fatalf("%d bins", len(whole.depth.list))
		}
	}
}

// A sample keeps a known share, whatever the order of the points.
func TestSample(t *testing.T) {
	gather := func(from, to, by int) *sample {
		s := &sample{}
		for i := from; i != to; i += by {
			if p := (sampled{hash: mix(uint64(i)), x: float64(i)}); s.takes(p.hash) {
				s.add(p)
			}
		}
		return s
	}
	const n = 1_000_000
	up, down := gather(0, n, 1), gather(n-1, -1, -1)
	slices.Reverse(down.list)
	if !slices.Equal(up.list, down.list) || len(up.list) > maxSample || len(up.list) < maxSample/3 {
		t.Errorf("%d and %d points", len(up.list), len(down.list))
	}
	if share := float64(len(up.list)) / n; math.Abs(share-up.share()) > 0.003 {
		t.Errorf("share %g, want %g", share, up.share())
	}
	half := gather(0, n/2, 1)
	half.join(gather(n/2, n, 1))
	if !slices.Equal(half.list, up.list) {
		t.Errorf("in two halves %d points, want %d", len(half.list), len(up.list))
	}
}

// Two lines over a plane differ by what one of them is lifted, whatever their points and
// the width of the cells.
func TestOverlap(t *testing.T) {
	raw, corrected, _ := checkedCloud(6000, 0)
	lift := 0.0625
	z, depth, line := corrected.column("z"), corrected.column("depth"), corrected.column("point_source_id")
	for i, v := range corrected.numbers(t, "z") {
		if corrected[1+i][line] == "11" {
			corrected[1+i][z], corrected[1+i][depth] = exact(v+lift), exact(sceneLevel-v-lift)
		}
	}
	for _, format := range formats {
		for _, reach := range []float64{0.5, 3} {
			o := diffSheets(t, format, raw, corrected, Options{Overlap: true, Reach: reach}).Overlap
			if o.Lines != 2 || o.Count < enoughCells || len(o.Pairs) != 1 || o.Pairs[0].A != "10" || o.Pairs[0].B != "11" || o.Column != "point_source_id" {
				t.Fatalf("%s: %+v", format, o)
			}
			if !isNear(o.Difference.Bias, -lift, 1e-9) || !isNear(o.Difference.Std, 0, 1e-9) || !isNear(o.Difference.P95, lift, 1e-9) {
				t.Errorf("%s, cells of %v: %+v, want -%g throughout", format, o.Cell, o.Difference, lift)
			}
			count := 0
			for _, b := range o.ByDepth {
				count += b.Count
			}
			for _, b := range o.ByIncidence {
				count += b.Count
			}
			if count != 2*o.Count || len(o.Warnings) > 0 {
				t.Errorf("%s: %d in bands, want %d twice; %q", format, count, o.Count, o.Warnings)
			}
		}
	}
}

func TestOverlapIsBounded(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 8))
	o := newOverlap(1)
	for i := range 400_000 {
		o.add([]byte{byte('a' + i%2)}, 1000*rng.Float64(), 1000*rng.Float64(), 0, 1, 0)
	}
	if len(o.cells) > maxLineCells || len(o.cells) < maxLineCells/4 {
		t.Errorf("%d cells", len(o.cells))
	}
	if _, list := o.widened(); len(list) < enoughCells {
		t.Errorf("%d differences", len(list))
	}
}
