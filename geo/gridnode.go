package geo

import (
	"cmp"
	"math"
	"slices"
	"sort"
)

// addNodes fits the patches of every cell near points.
func (b *gridBuilder) addNodes() {
	for _, run := range b.cells {
		for row := run.row - patchRadius; row <= run.row+patchRadius; row++ {
			for col := run.col - patchRadius; col <= run.col+patchRadius; col++ {
				if at := b.grid.table.at(col, row); *at == 0 {
					*at = gap // looked at
					b.addNode(at, col, row)
				}
			}
		}
	}
}

// addNode fits the patches of one cell.
func (b *gridBuilder) addNode(at *int32, col, row int) {
	b.gather(col, row)
	g := b.grid
	before := len(g.patches)
	timed := sortByTime(b.near)
	nd := node{all: b.addPatch(b.near), loose: -1}
	switch timed {
	case 0:
		nd.loose = nd.all
	case len(b.near):
	default:
		nd.loose = b.addPatch(b.near[timed:])
	}
	nd.first, nd.end = nd.all, nd.all+1
	if nd.all < 0 || timed < len(b.near) || b.near[timed-1].t-b.near[0].t > b.options.Window/2 {
		nd.first = int32(len(g.patches))
		b.addTimes(b.near[:timed], b.near[timed:])
		nd.end = int32(len(g.patches))
	}
	if len(g.patches) > before {
		g.nodes = append(g.nodes, nd)
		b.places = append(b.places, [2]int{col, row})
		*at = int32(len(g.nodes))
	}
}

// sortByTime sorts samples by time, those without one last, and returns how many
// have one.
func sortByTime(samples []sample) int {
	timed := 0
	for i, s := range samples {
		if !math.IsNaN(s.t) {
			samples[i], samples[timed] = samples[timed], s
			timed++
		}
	}
	slices.SortFunc(samples[:timed], func(a, b sample) int { return cmp.Compare(a.t, b.t) })
	return timed
}

// addTimes fits the patches at times, given the samples with times, sorted, and
// those without: part by part between pauses longer than the window.
func (b *gridBuilder) addTimes(timed, loose []sample) {
	for first := 0; first < len(timed); {
		end := first + 1
		for end < len(timed) && timed[end].t-timed[end-1].t <= b.options.Window {
			end++
		}
		b.addPart(timed[first:end], loose)
		first = end
	}
}

// addPart fits the patches of one part: one where it is no longer than half a window,
// else several, the first at its start, the last at its end, at most half a window
// apart.
func (b *gridBuilder) addPart(timed, loose []sample) {
	half := b.options.Window / 2
	start, length := timed[0].t, timed[len(timed)-1].t-timed[0].t
	if !(length > half) {
		b.part = append(append(b.part[:0], timed...), loose...)
		b.addPatch(b.part)
		return
	}
	steps := math.Ceil(length / half)
	for k := 0.0; k <= steps; k++ {
		at := start + length*(k/steps)
		first := sort.Search(len(timed), func(i int) bool { return timed[i].t >= at-half })
		end := sort.Search(len(timed), func(i int) bool { return timed[i].t > at+half })
		b.part = append(append(b.part[:0], timed[first:end]...), loose...)
		b.addPatch(b.part)
	}
}

// addPatch fits a patch and returns its number, -1 where there is none.
func (b *gridBuilder) addPatch(samples []sample) int32 {
	p, ok := b.fitter.fit(samples)
	if !ok {
		return -1
	}
	b.grid.patches = append(b.grid.patches, p)
	return int32(len(b.grid.patches) - 1)
}

// gather takes the points within the radius of a cell's centre.
func (b *gridBuilder) gather(col, row int) {
	b.near = b.near[:0]
	x, y := (float64(col)+0.5)*b.options.Cell, (float64(row)+0.5)*b.options.Cell
	for r := row - patchRadius; r <= row+patchRadius; r++ {
		for c := col - patchRadius; c <= col+patchRadius; c++ {
			slot := b.slots.get(c, r)
			if slot == 0 {
				continue
			}
			run := &b.cells[slot-1]
			for _, number := range b.order[run.first:run.end] {
				p := b.points.at(number)
				u, v := p.x-x, p.y-y
				if u*u+v*v < b.fitter.radius*b.fitter.radius {
					b.near = append(b.near, sample{u, v, p.z, p.t})
				}
			}
		}
	}
}
