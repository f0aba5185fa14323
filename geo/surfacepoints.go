package geo

import (
	"cmp"
	"fmt"
	"math"
)

// Points are numbered by their block and their place in it.
const (
	blockBits   = 12
	blockPoints = 1 << blockBits
	maxBlocks   = 1 << (32 - blockBits)
)

// SurfacePoints holds the surface points of a Grid, 32 bytes each. They stay in the
// blocks in which they came, so none is copied or held twice, however many there
// are. The zero value holds none.
type SurfacePoints struct {
	blocks      [][]surfacePoint // each at most blockPoints long
	held, given int
	low, high   [2]float64 // corners of the rectangle around them, m
}

// surfacePoint is a surface point (m) with its time (s, NaN where it has none).
type surfacePoint struct{ x, y, z, t float64 }

// compare orders points by value, so that no sum depends on the order in which
// they came.
func (p *surfacePoint) compare(q *surfacePoint) int {
	return cmp.Or(cmp.Compare(p.x, q.x), cmp.Compare(p.y, q.y), cmp.Compare(p.z, q.z), cmp.Compare(p.t, q.t))
}

// Add takes the points x, y, z (m) with the times t (s, NaN where a point has none;
// nil where none has). The slices have one length, otherwise it panics; they are
// copied. A point with a coordinate that is not finite is counted and left out; a
// time that is not finite is none.
func (p *SurfacePoints) Add(x, y, z, t []float64) {
	if len(y) != len(x) || len(z) != len(x) || t != nil && len(t) != len(x) {
		panic(errLengths)
	}
	p.given += len(x)
	for i := range x {
		if !isFinite(x[i], y[i], z[i]) {
			continue
		}
		one := surfacePoint{x[i], y[i], z[i], math.NaN()}
		if t != nil && isFinite(t[i]) {
			one.t = t[i]
		}
		p.widen([2]float64{one.x, one.y}, [2]float64{one.x, one.y})
		p.held++
		p.put(one)
	}
}

// put appends a point to the last block. The first block grows with its points, so
// that few of them take little.
func (p *SurfacePoints) put(one surfacePoint) {
	last := len(p.blocks) - 1
	if last < 0 || len(p.blocks[last]) == blockPoints {
		last++
		p.blocks = append(p.blocks, make([]surfacePoint, 0, min(last, 1)*blockPoints))
	}
	p.blocks[last] = append(p.blocks[last], one)
}

// widen widens the rectangle. It goes before what it is for is counted.
func (p *SurfacePoints) widen(low, high [2]float64) {
	if p.held == 0 {
		p.low, p.high = low, high
		return
	}
	for k := range low {
		p.low[k], p.high[k] = min(p.low[k], low[k]), max(p.high[k], high[k])
	}
}

// Join takes over the points of another, which holds none afterwards.
func (p *SurfacePoints) Join(o *SurfacePoints) {
	if o.held > 0 {
		p.widen(o.low, o.high)
	}
	p.blocks = append(p.blocks, o.blocks...)
	p.held, p.given = p.held+o.held, p.given+o.given
	*o = SurfacePoints{}
}

// Given returns how many points were given, those left out too.
func (p *SurfacePoints) Given() int { return p.given }

// Bounds returns two opposite corners of the rectangle around the points, those of
// the least and of the greatest coordinates; zeros where there are no points.
func (p *SurfacePoints) Bounds() (low, high [2]float64) { return p.low, p.high }

// at returns a point by its number.
func (p *SurfacePoints) at(number uint32) *surfacePoint {
	return &p.blocks[number>>blockBits][number%blockPoints]
}

// each hands over every point with its number.
func (p *SurfacePoints) each(do func(number uint32, one *surfacePoint)) {
	for k, block := range p.blocks {
		for i := range block {
			do(uint32(k<<blockBits|i), &block[i])
		}
	}
}

// check returns why no grid can be made of the points, whatever its cells.
func (p *SurfacePoints) check() error {
	switch {
	case p.held == 0:
		return fmt.Errorf("none of %d surface points has finite coordinates, want at least %d", p.given, minPlane)
	case len(p.blocks) > maxBlocks:
		return fmt.Errorf("there are %d surface points from many files, want at most some %d million", p.held, maxBlocks*blockPoints/1_000_000)
	}
	return nil
}
