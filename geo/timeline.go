package geo

import (
	"fmt"
)

// timeline finds the records on either side of a time. Equal slots of time, about
// one a record, know their first record, so a look costs the same for times in any
// order. It does not change once made.
type timeline struct {
	utc   []float64 // strictly rising
	slots axis
	first []int32 // for each slot, and one beyond, the first record in it or later
}

// newTimeline returns the timeline of at least one strictly rising time, which it
// keeps.
func newTimeline(utc []float64) timeline {
	l := timeline{utc: utc, slots: newAxis(utc[0], utc[len(utc)-1], len(utc))}
	l.first = make([]int32, l.slots.n+1)
	record := 0
	for slot := range l.first {
		for record < len(utc) && l.slots.cell(utc[record]) < slot {
			record++
		}
		l.first[slot] = int32(record)
	}
	l.first[l.slots.n] = int32(len(utc))
	return l
}

// holds tells whether a time lies within the records, ends included.
func (l *timeline) holds(utc float64) bool {
	return utc >= l.utc[0] && utc <= l.utc[len(l.utc)-1]
}

// before returns the last record not after a time that the records hold.
func (l *timeline) before(utc float64) int {
	slot := l.slots.cell(utc)
	low, high := int(l.first[slot]), int(l.first[slot+1])
	for low < high { // records below low are not after the time, those from high on are
		middle := (low + high) / 2
		if l.utc[middle] <= utc {
			low = middle + 1
		} else {
			high = middle
		}
	}
	return low - 1
}

// checkRise returns what is wrong with a time that follows another.
func checkRise(before, utc float64) error {
	switch {
	case utc > before:
		return nil
	case utc == before:
		return fmt.Errorf("time %s repeats the one before it, want each time once", decimal(utc))
	}
	return fmt.Errorf("time %s comes after %s, want records sorted by time", decimal(utc), decimal(before))
}

// checkMaxGap returns what is wrong with a longest gap in seconds.
func checkMaxGap(seconds float64) error {
	if !(seconds > 0) {
		return fmt.Errorf("maximum gap is %v s, want more than 0", seconds)
	}
	return nil
}
