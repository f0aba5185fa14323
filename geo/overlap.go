package geo

import (
	"cmp"
	"math"
	"slices"

	"github.com/paulmach/orb"
)

const (
	// beside is how far, in coordinates, left of the middle of a piece of edge a point
	// is looked at: far above the rounding of what is computed there.
	beside = 0x1p-46

	// shortest is the length, in coordinates, of the shortest piece that is looked at,
	// so that beside a piece is nothing that its ends touch.
	shortest = 0x1p-40
)

// Overlaps returns the pairs of zones that have area in common, by their numbers, the
// lesser first, in ascending order and each once. Zones that only touch, or share
// edges, do not overlap. What is common must be wider than 2^-46 and longer than
// 2^-40 of the largest coordinate (0.1 and 6 micrometres at 7e6 m).
//
// The polygons are swept from left to right, and those whose bounds meet are compared
// edge by edge in level bands; so zones spread over an area cost little more than
// reading their edges.
func Overlaps(zones []Zone) [][2]int {
	var found [][2]int
	var open []*region // those that the sweep line may still meet
	var p pieces
	for _, b := range regionsOf(zones) {
		open = slices.DeleteFunc(open, func(a *region) bool { return a.bound.Max[0] < b.bound.Min[0] })
		for _, a := range open {
			if a.zone != b.zone && a.bound.Intersects(b.bound) && p.overlap(a, b) {
				found = append(found, [2]int{min(a.zone, b.zone), max(a.zone, b.zone)})
			}
		}
		open = append(open, b)
	}
	slices.SortFunc(found, func(a, b [2]int) int { return cmp.Or(cmp.Compare(a[0], b[0]), cmp.Compare(a[1], b[1])) })
	return slices.Compact(found)
}

// region is one polygon of a zone.
type region struct {
	*shape
	zone  int
	bound orb.Bound
	far   float64 // largest coordinate
	in    []bool  // by ring
}

// regionsOf returns the polygons of all zones by their left ends.
func regionsOf(zones []Zone) []*region {
	var all []*region
	for k, zone := range zones {
		for _, poly := range zone.Polygons {
			r := &region{shape: newShape(poly), zone: k, bound: poly.Bound(), in: make([]bool, len(poly))}
			r.far = max(math.Abs(r.bound.Min[0]), math.Abs(r.bound.Min[1]), math.Abs(r.bound.Max[0]), math.Abs(r.bound.Max[1]))
			all = append(all, r)
		}
	}
	slices.SortStableFunc(all, func(a, b *region) int { return cmp.Compare(a.bound.Min[0], b.bound.Min[0]) })
	return all
}

// holds tells whether a point is in the region.
func (r *region) holds(x, y float64) bool { return r.against(r.in, x, y) == 0 }

// overlap tells whether two regions have area in common. The right boundary of such
// an area is made of pieces of theirs, and just left of each piece lies the area: so
// a point beside the middle of every piece tells.
func (p *pieces) overlap(a, b *region) bool {
	far := max(a.far, b.far)
	p.noise, p.beside, p.shortest = 4*0x1p-52*far, beside*far, shortest*far
	return p.commonAlong(a, b) || p.commonAlong(b, a)
}

// pieces cuts edges where they meet another region.
type pieces struct {
	sweep
	beside, shortest float64   // lengths (m)
	cuts             []float64 // of an edge, from 0 at its lower end to 1 at its upper end
}

// commonAlong tells whether left of an edge of a there is a point in both a and b.
func (p *pieces) commonAlong(a, b *region) bool {
	first, last := a.rows.cell(b.bound.Min[1]), a.rows.cell(b.bound.Max[1])
	for band := first; band <= last; band++ {
		for _, i := range a.bands.of(band) {
			e := &a.edges[i]
			if band > max(first, a.rows.cell(e.y0)) || !b.nearTo(e) {
				continue // looked at in an earlier band, or too far
			}
			if p.commonBeside(e, a, b) {
				return true
			}
		}
	}
	return false
}

// nearTo tells whether an edge meets the bounds of the region.
func (r *region) nearTo(e *edge) bool {
	return e.y1 >= r.bound.Min[1] && e.y0 <= r.bound.Max[1] &&
		max(e.x0, e.x1) >= r.bound.Min[0] && min(e.x0, e.x1) <= r.bound.Max[0]
}

// commonBeside tells whether left of a piece of an edge of a there is a point in
// both regions.
func (p *pieces) commonBeside(e *edge, a, b *region) bool {
	dx, dy := e.x1-e.x0, e.y1-e.y0
	length := math.Hypot(dx, dy)
	if length <= p.shortest {
		return false
	}
	p.cut(e, b)
	left, up := dy/length*p.beside, dx/length*p.beside
	for k := 1; k < len(p.cuts); k++ {
		if (p.cuts[k]-p.cuts[k-1])*length <= p.shortest {
			continue
		}
		w := (p.cuts[k-1] + p.cuts[k]) / 2
		x, y := e.x0+w*dx-left, e.y0+w*dy+up
		if a.holds(x, y) && b.holds(x, y) {
			return true
		}
	}
	return false
}

// cut fills cuts, in ascending order, with the ends of an edge and the places where
// edges of the region cross it or end on it.
func (p *pieces) cut(e *edge, r *region) {
	p.cuts = append(p.cuts[:0], 0, 1)
	left, right := min(e.x0, e.x1), max(e.x0, e.x1)
	last := r.rows.cell(e.y1 + p.noise)
	for band := r.rows.cell(e.y0 - p.noise); band <= last; band++ {
		for _, i := range r.bands.of(band) {
			if g := &r.edges[i]; max(g.x0, g.x1) >= left-p.noise && min(g.x0, g.x1) <= right+p.noise {
				p.cutBy(e, g)
			}
		}
	}
	slices.Sort(p.cuts)
}

// cutBy appends where one edge cuts another.
func (p *pieces) cutBy(e, g *edge) {
	low, high := p.side(e, g.x0, g.y0), p.side(e, g.x1, g.y1)
	if low == 0 {
		p.add(e, g.x0, g.y0)
	}
	if high == 0 {
		p.add(e, g.x1, g.y1)
	}
	if low*high < 0 {
		x, y := meet(e, g)
		p.add(e, x, y)
	}
}

// add appends the place of a point on the line of an edge, if it is on the edge.
func (p *pieces) add(e *edge, x, y float64) {
	dx, dy := e.x1-e.x0, e.y1-e.y0
	if w := ((x-e.x0)*dx + (y-e.y0)*dy) / (dx*dx + dy*dy); w > 0 && w < 1 {
		p.cuts = append(p.cuts, w)
	}
}
