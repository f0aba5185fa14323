package quality

import "math"

// step is a power of ten as the width of bins, whose edges are its multiples: bin k
// holds the values from edge k up to, but not with, edge k+1.
type step struct{ exponent int }

// edge returns the double nearest to k 10^exponent.
func (s step) edge(k int) float64 {
	if s.exponent < 0 {
		return float64(k) / math.Pow10(-s.exponent)
	}
	return float64(k) * math.Pow10(s.exponent)
}

// index returns the bin of a value.
func (s step) index(v float64) int {
	k := int(math.Floor(v * math.Pow10(-s.exponent)))
	for s.edge(k) > v {
		k--
	}
	for s.edge(k+1) <= v {
		k++
	}
	return k
}

// width is a round one for bands: 1, 2 or 5 times a power of ten.
type width struct {
	step
	times int
}

func (w width) band(v float64) int          { return floorDiv(w.index(v), w.times) }
func (w width) from(band int) float64       { return w.edge(band * w.times) }
func (w width) to(band int) float64         { return w.edge((band + 1) * w.times) }
func (w width) size() float64               { return w.edge(w.times) }
func (w width) count(low, high float64) int { return w.band(high) - w.band(low) + 1 }

// maxBands is the greatest number of bands that a table has.
const maxBands = 10

// chooseWidth returns the smallest round width, not below a step, by which values
// from low to high fall into so many bands at most; 1 where they
// are all the same.
func chooseWidth(low, high float64, most int, finest step) width {
	w := width{finest, 1}
	span := (high - low) / float64(most)
	if span == 0 {
		span = 1
	}
	w.exponent = max(w.exponent, int(math.Floor(math.Log10(span))))
	for ; ; w.exponent++ {
		for _, w.times = range []int{1, 2, 5} {
			if w.count(low, high) <= most {
				return w
			}
		}
	}
}

func floorDiv(a, b int) int {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

// sums is what is added up of the shifts of some points.
type sums struct {
	count          int64
	dz, dz2, maxDZ float64 // maxDZ is a magnitude
	dh, dh2, maxDH float64
	depth          float64
}

func (s *sums) add(dz, dh, depth float64) {
	s.count++
	s.dz += dz
	s.dz2 += dz * dz
	s.maxDZ = max(s.maxDZ, math.Abs(dz))
	s.dh += dh
	s.dh2 += dh * dh
	s.maxDH = max(s.maxDH, dh)
	s.depth += depth
}

func (s *sums) join(o *sums) {
	s.count += o.count
	s.dz += o.dz
	s.dz2 += o.dz2
	s.maxDZ = max(s.maxDZ, o.maxDZ)
	s.dh += o.dh
	s.dh2 += o.dh2
	s.maxDH = max(s.maxDH, o.maxDH)
	s.depth += o.depth
}

// shift is what the sums come to; NaN where there is no point.
func (s *sums) shift() Shift {
	n := float64(s.count)
	if s.count == 0 {
		n = math.NaN()
	}
	return Shift{
		Count: s.count, MeanDZ: Number(s.dz / n), RMSDZ: Number(math.Sqrt(s.dz2 / n)), MaxDZ: Number(s.maxDZ + 0*n),
		MeanDH: Number(s.dh / n), RMSDH: Number(math.Sqrt(s.dh2 / n)), MaxDH: Number(s.maxDH + 0*n),
	}
}

// maxBins bounds the memory of bins, whatever the range of the values.
const maxBins = 4096

// bins adds shifts up by the value of something else. The step grows tenfold where
// the values range too far for it; edges of bands stay edges of bins.
type bins struct {
	step
	first     int // bin of list[0]
	list      []sums
	low, high float64 // of the values
}

func newBins(exponent int) *bins {
	return &bins{step: step{exponent}, low: math.Inf(1), high: math.Inf(-1)}
}

// maxValue is the greatest magnitude that is binned: the finest step is 1e-4, and the
// numbers of its bins stay far within an int.
const maxValue = 1e12

// isBinned tells whether a value is finite and in the range of bins and bands.
func isBinned(v float64) bool { return math.Abs(v) <= maxValue }

// at returns the sums of a value's bin, nil where the value is not finite.
func (b *bins) at(v float64) *sums {
	if !isBinned(v) {
		return nil
	}
	b.low, b.high = min(b.low, v), max(b.high, v)
	k := b.index(v)
	if i := k - b.first; i >= 0 && i < len(b.list) {
		return &b.list[i]
	}
	return b.grow(k, v)
}

// grow makes room for bin k, by a wider step where needed.
func (b *bins) grow(k int, v float64) *sums {
	if len(b.list) == 0 {
		b.first = k
	}
	for max(k, b.first+len(b.list)-1)-min(k, b.first)+1 > maxBins {
		b.coarsen()
		k = b.index(v)
	}
	first, last := min(k, b.first), max(k, b.first+len(b.list)-1)
	list := make([]sums, last-first+1)
	copy(list[b.first-first:], b.list)
	b.first, b.list = first, list
	return &b.list[k-first]
}

// coarsen makes ten bins one.
func (b *bins) coarsen() {
	first := floorDiv(b.first, 10)
	list := make([]sums, floorDiv(b.first+len(b.list)-1, 10)-first+1)
	for i := range b.list {
		list[floorDiv(b.first+i, 10)-first].join(&b.list[i])
	}
	b.exponent++
	b.first, b.list = first, list
}

// join adds other bins, which may lose their finer step by it.
func (b *bins) join(o *bins) {
	if len(o.list) == 0 {
		return
	}
	b.at(o.low) // both ends make room, so that the step stays as it is below
	b.at(o.high)
	for o.exponent < b.exponent {
		o.coarsen()
	}
	for b.exponent < o.exponent {
		b.coarsen()
	}
	for i := range o.list {
		if o.list[i].count > 0 {
			b.list[o.first+i-b.first].join(&o.list[i])
		}
	}
}

// bands joins the bins to bands of a width.
func (b *bins) bands(w width) []sums {
	if len(b.list) == 0 {
		return nil
	}
	list := make([]sums, w.count(b.low, b.high))
	first := w.band(b.low)
	for i := range b.list {
		if b.list[i].count > 0 {
			list[w.band(b.edge(b.first+i))-first].join(&b.list[i])
		}
	}
	return list
}

// histogram counts the values in at most so many bins; nil where there are none.
func (b *bins) histogram(most int) *Histogram {
	if len(b.list) == 0 {
		return nil
	}
	w := chooseWidth(b.low, b.high, most, b.step)
	h := &Histogram{From: Number(w.from(w.band(b.low))), Width: Number(w.size())}
	for _, s := range b.bands(w) {
		h.Counts = append(h.Counts, s.count)
	}
	return h
}
