package geo

import (
	"errors"
	"fmt"
	"math"
)

// leafSegments is the number of segments below which the search looks at each.
const leafSegments = 4

// polyline finds the nearest point of a line, by a tree of the rectangles around
// its halves, their halves and so on. It does not change once made.
type polyline struct {
	x, y, chainage []float64 // vertices, m; chainage from the first one
	boxes          []rect    // of node k; its halves are 2k+1 and 2k+2
}

// rect is a rectangle in the plan.
type rect struct{ x0, y0, x1, y1 float64 }

// distance2 returns the squared distance of a position, 0 inside.
func (r *rect) distance2(x, y float64) float64 {
	dx, dy := max(r.x0-x, x-r.x1, 0), max(r.y0-y, y-r.y1, 0)
	return dx*dx + dy*dy
}

// newPolyline returns the line through vertices x, y; equal ones in a row count as
// one.
func newPolyline(x, y []float64) (*polyline, error) {
	p := &polyline{}
	for i := range x {
		if !isFinite(x[i], y[i]) {
			return nil, fmt.Errorf("vertex %d of the centreline is not finite, want x and y", i+1)
		}
		n := len(p.x)
		if n > 0 && x[i] == p.x[n-1] && y[i] == p.y[n-1] {
			continue
		}
		along := 0.0
		if n > 0 {
			along = p.chainage[n-1] + math.Hypot(x[i]-p.x[n-1], y[i]-p.y[n-1])
		}
		p.x, p.y, p.chainage = append(p.x, x[i]), append(p.y, y[i]), append(p.chainage, along)
	}
	if len(p.x) < 2 {
		return nil, errors.New("centreline has less than 2 different vertices, want a line along the water")
	}
	p.bound(0, 0, len(p.x)-1)
	return p, nil
}

// bound makes the rectangles of node k over the segments first to end-1.
func (p *polyline) bound(k, first, end int) rect {
	if k >= len(p.boxes) {
		p.boxes = append(p.boxes, make([]rect, k+1-len(p.boxes))...)
	}
	r := rect{math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)}
	if end-first <= leafSegments {
		for i := first; i <= end; i++ {
			r = rect{min(r.x0, p.x[i]), min(r.y0, p.y[i]), max(r.x1, p.x[i]), max(r.y1, p.y[i])}
		}
	} else {
		mid := (first + end) / 2
		a, b := p.bound(2*k+1, first, mid), p.bound(2*k+2, mid, end)
		r = rect{min(a.x0, b.x0), min(a.y0, b.y0), max(a.x1, b.x1), max(a.y1, b.y1)}
	}
	p.boxes[k] = r
	return r
}

// foot is the nearest point of a line, in the search for it.
type foot struct {
	x, y      float64 // the position that looks for it
	segment   int     // -1: none yet
	along     float64 // m from the segment's start
	distance2 float64 // m^2; before there is one, the greatest allowed
}

// nearest returns the nearest point of the line within reach (m); its segment is -1
// where there is none. Of points equally near, it is the one at the lower chainage,
// and at a vertex it belongs to the segment before. hint is a segment to begin with:
// it takes part in the time only.
func (p *polyline) nearest(x, y, reach float64, hint int) foot {
	f := foot{x: x, y: y, segment: -1, distance2: reach * reach}
	p.try(&f, hint)
	p.search(&f, 0, 0, len(p.x)-1)
	return f
}

// search looks through node k, over the segments first to end-1.
func (p *polyline) search(f *foot, k, first, end int) {
	if end-first <= leafSegments {
		for i := first; i < end; i++ {
			p.try(f, i)
		}
		return
	}
	mid := (first + end) / 2
	a, b := p.boxes[2*k+1].distance2(f.x, f.y), p.boxes[2*k+2].distance2(f.x, f.y)
	if a <= b && a <= f.distance2 {
		p.search(f, 2*k+1, first, mid)
	}
	if b <= f.distance2 {
		p.search(f, 2*k+2, mid, end)
	}
	if a > b && a <= f.distance2 {
		p.search(f, 2*k+1, first, mid)
	}
}

// try takes segment i if it is nearer.
func (p *polyline) try(f *foot, i int) {
	dx, dy := p.x[i+1]-p.x[i], p.y[i+1]-p.y[i]
	u, v := f.x-p.x[i], f.y-p.y[i]
	length := p.chainage[i+1] - p.chainage[i]
	share := (u*dx + v*dy) / (dx*dx + dy*dy)
	switch {
	case share >= 1: // from the vertex, so that both its segments find the same distance
		share, u, v = 1, f.x-p.x[i+1], f.y-p.y[i+1]
	case share > 0:
		u, v = u-share*dx, v-share*dy
	default:
		share = 0
	}
	d2 := u*u + v*v
	if d2 < f.distance2 || d2 == f.distance2 && (f.segment < 0 || i < f.segment) {
		f.segment, f.along, f.distance2 = i, share*length, d2
	}
}

// chainageOf returns the chainage (m) of a foot.
func (p *polyline) chainageOf(f foot) float64 { return p.chainage[f.segment] + f.along }
