package acoustics

import (
	"slices"
	"sort"
)

// descent returns the rows that the profile of a cast is made of, in order of depth. The rule
// stands at Cast.Profile.
func (c *Cleaning) descent(depths []float64) []int {
	rows := make([]int, len(depths))
	for i := range rows {
		rows[i] = i
	}
	if c.Sorted = isUnordered(depths); c.Sorted {
		sort.SliceStable(rows, func(a, b int) bool { return depths[rows[a]] < depths[rows[b]] })
	} else {
		from, to, gain := deepest(depths, rows)
		backward := slices.Clone(rows)
		slices.Reverse(backward)
		if start, end, more := deepest(depths, backward); more > gain {
			c.Upward = true
			from, to, rows = start, end, backward
		}
		rows = rows[from : to+1]
	}
	rows = records(depths, rows)
	c.Kept = len(rows)
	return rows
}

// isUnordered reports whether more than half of the inner rows are deeper, or shallower, than
// both their neighbours: in rows that were shuffled two thirds are.
func isUnordered(depths []float64) bool {
	turns := 0
	for i := 1; i < len(depths)-1; i++ {
		if (depths[i]-depths[i-1])*(depths[i+1]-depths[i]) < 0 {
			turns++
		}
	}
	return turns > 0 && 2*turns > len(depths)-2
}

// deepest returns the positions of the two rows, the second not before the first, between which the
// depth increases most, and by how much.
func deepest(depths []float64, rows []int) (from, to int, gain float64) {
	top := 0
	for i, row := range rows {
		if depths[row] < depths[rows[top]] {
			top = i
		}
		if more := depths[row] - depths[rows[top]]; more > gain {
			from, to, gain = top, i, more
		}
	}
	return from, to, gain
}

// records returns the rows that are deeper than all before them.
func records(depths []float64, rows []int) []int {
	kept := rows[:1]
	for _, row := range rows[1:] {
		if depths[row] >= depths[kept[len(kept)-1]]+thinnestM {
			kept = append(kept, row)
		}
	}
	return kept
}
