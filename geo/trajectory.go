package geo

import (
	"errors"
	"fmt"
	"math"
	"sort"
	"strconv"
)

// RecordError is a fault in one record of a file: of a trajectory, say. Index counts the records
// from 0, so the caller can name the line of the file; the text counts from 1.
type RecordError struct {
	Index int
	Err   error
}

// Error names the record and what is wrong with it.
func (e *RecordError) Error() string { return fmt.Sprintf("record %d: %v", e.Index+1, e.Err) }

// Unwrap returns what is wrong with the record.
func (e *RecordError) Unwrap() error { return e.Err }

// Trajectory is the path of a sensor: positions at increasing times, linear
// between records. It does not change once made, so goroutines may share it.
type Trajectory struct {
	t, x, y, z []float64
	maxGap     float64
	slots      axis    // equal slots of time, about one a record
	first      []int32 // for each slot, and one beyond, the first record in it or later
}

// NewTrajectory returns the trajectory with positions x, y, z (m) at the times t
// (s, any scale), the four slices of one length (otherwise it panics). It keeps the
// slices, which must not change afterwards. Between records more than maxGap (s)
// apart there is no position; +Inf joins all.
//
// Errors: fewer than 2 records; maxGap not above 0; and, as *RecordError, a value
// that is not finite or a time that repeats or comes before the one above it.
func NewTrajectory(t, x, y, z []float64, maxGap float64) (*Trajectory, error) {
	if len(x) != len(t) || len(y) != len(t) || len(z) != len(t) {
		panic(errLengths)
	}
	if !(maxGap > 0) {
		return nil, fmt.Errorf("maximum gap is %v s, want more than 0", maxGap)
	}
	for i := range t {
		if err := checkRecord(t, x, y, z, i); err != nil {
			return nil, &RecordError{Index: i, Err: err}
		}
	}
	if len(t) < 2 {
		return nil, fmt.Errorf("trajectory has %d records, want at least 2", len(t))
	}
	tr := &Trajectory{t: t, x: x, y: y, z: z, maxGap: maxGap, slots: newAxis(t[0], t[len(t)-1], len(t))}
	tr.fillSlots()
	return tr, nil
}

// fillSlots notes the first record of each slot.
func (tr *Trajectory) fillSlots() {
	tr.first = make([]int32, tr.slots.n+1)
	record := 0
	for slot := range tr.first {
		for record < len(tr.t) && tr.slots.cell(tr.t[record]) < slot {
			record++
		}
		tr.first[slot] = int32(record)
	}
}

// checkRecord returns what is wrong with record i, given that those above it are
// right.
func checkRecord(t, x, y, z []float64, i int) error {
	for _, v := range [...]float64{t[i], x[i], y[i], z[i]} {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return errors.New("a value is not finite, want a time and a position")
		}
	}
	if i == 0 || t[i] > t[i-1] {
		return nil
	}
	if t[i] == t[i-1] {
		return fmt.Errorf("time %s repeats the one above it, want each time once", decimal(t[i]))
	}
	return fmt.Errorf("time %s comes after %s, want records sorted by time", decimal(t[i]), decimal(t[i-1]))
}

// decimal writes a time as a file has it, without an exponent.
func decimal(seconds float64) string { return strconv.FormatFloat(seconds, 'f', -1, 64) }

// At fills x, y, z (m) with the position at each time t (s), linear between the
// records and exact at them. It is NaN where there is none: before the first and
// after the last record, in a gap, and where t is NaN. The four slices have one
// length (otherwise it panics); t may be one of the others.
//
// Ascending times cost a step or none each; times in any order a search among the
// records of a short slot of time.
func (tr *Trajectory) At(x, y, z, t []float64) {
	if len(x) != len(t) || len(y) != len(t) || len(z) != len(t) {
		panic(errLengths)
	}
	i := 0
	for j, at := range t {
		if !(at >= tr.t[0] && at <= tr.t[len(tr.t)-1]) {
			x[j], y[j], z[j] = math.NaN(), math.NaN(), math.NaN()
			continue
		}
		i = tr.record(at, i)
		x[j], y[j], z[j] = tr.between(at, i)
	}
}

// record returns the last record not after the time at, which lies within the
// records; it looks at record i and the next one first.
func (tr *Trajectory) record(at float64, i int) int {
	last := len(tr.t) - 1
	for range 2 {
		if at >= tr.t[i] && (i == last || at < tr.t[i+1]) {
			return i
		}
		i = min(i+1, last)
	}
	slot := tr.slots.cell(at)
	from, next := int(tr.first[slot]), int(tr.first[slot+1])
	return from - 1 + sort.Search(next-from, func(k int) bool { return tr.t[from+k] > at })
}

// between returns the position at a time from record i up to the next one. The
// weight is taken from differences, so a time near 4e8 s loses nothing more.
func (tr *Trajectory) between(at float64, i int) (x, y, z float64) {
	step := at - tr.t[i]
	if step == 0 {
		return tr.x[i], tr.y[i], tr.z[i]
	}
	gap := tr.t[i+1] - tr.t[i]
	if gap > tr.maxGap {
		return math.NaN(), math.NaN(), math.NaN()
	}
	w := step / gap
	return tr.x[i] + w*(tr.x[i+1]-tr.x[i]), tr.y[i] + w*(tr.y[i+1]-tr.y[i]), tr.z[i] + w*(tr.z[i+1]-tr.z[i])
}
