package geo

import "math"

// axis cuts the interval from min to max into n cells of one size.
type axis struct {
	min, max, perUnit float64
	n                 int
}

// newAxis returns an axis of about n cells, at least 1. A cell is never below 256
// roundings of the coordinates, so a 16th of a cell is a safe margin for what is
// computed from them with a few roundings.
func newAxis(low, high float64, n int) axis {
	if !(high > low) {
		return axis{min: low, max: high, n: 1}
	}
	rounding := max(math.Abs(low), math.Abs(high)) * 0x1p-52
	n = int(max(min(float64(n), (high-low)/(256*rounding)), 1))
	return axis{min: low, max: high, perUnit: float64(n) / (high - low), n: n}
}

// holds tells whether v lies on the axis, ends included; NaN does not.
func (a *axis) holds(v float64) bool { return v >= a.min && v <= a.max }

// cell returns the cell of v, the nearest one where v is outside. It never falls
// where v rises, so what spans v lies between the cells of its ends.
func (a *axis) cell(v float64) int {
	at := (v - a.min) * a.perUnit
	if !(at > 0) {
		return 0
	}
	if at >= float64(a.n) {
		return a.n - 1
	}
	return int(at)
}

// at returns the coordinate k cells from the start of the axis.
func (a *axis) at(k float64) float64 { return a.min + k*((a.max-a.min)/float64(a.n)) }

// entry says that a cell's list holds an item.
type entry struct{ cell, item int32 }

// lists holds one list of items for each cell, all in one slice.
type lists struct{ start, items []int32 }

// newLists sorts the entries into the lists of n cells, in the order given.
func newLists(entries []entry, n int) lists {
	l := lists{start: make([]int32, n+2), items: make([]int32, len(entries))}
	for _, e := range entries {
		l.start[e.cell+2]++
	}
	for k := 2; k < len(l.start); k++ {
		l.start[k] += l.start[k-1]
	}
	for _, e := range entries { // start[cell+1] runs from the list's start to its end
		l.items[l.start[e.cell+1]] = e.item
		l.start[e.cell+1]++
	}
	return l
}

// of returns the list of a cell.
func (l *lists) of(cell int) []int32 { return l.items[l.start[cell]:l.start[cell+1]] }
