package acoustics

import (
	"errors"
	"fmt"
)

const errLengths = "acoustics: columns of unequal length"

var errNoRows = errors.New("sound speed profile has no rows, want at least 1")

// RowError says which row of a cast or of a profile's samples is wrong.
type RowError struct {
	Row int // from 0
	Err error
}

// Error counts rows from 1, as in "row 3: speed of sound is -1480 m/s, want 1000 to 2000".
func (e *RowError) Error() string { return fmt.Sprintf("row %d: %v", e.Row+1, e.Err) }

// Unwrap returns what is wrong, without the row.
func (e *RowError) Unwrap() error { return e.Err }

func rowError(row int, format string, args ...any) error {
	return &RowError{Row: row, Err: fmt.Errorf(format, args...)}
}

// What a row may hold. Water carries sound at 1400 to 1800 m/s, so that other speeds are of
// something else or in another unit; no ocean is deeper. Samples nearer to each other than
// thinnestM are repeats.
const (
	deepestM  = 12000
	slowest   = 1000 // m/s
	fastest   = 2000 // m/s
	thinnestM = 1e-6
)

func checkRow(row int, depth, speed float64) error {
	if err := checkDepth(row, depth); err != nil {
		return err
	}
	return checkSpeed(row, speed)
}

func checkDepth(row int, depth float64) error {
	switch {
	case depth < 0:
		return rowError(row, "depth is %g m, which is above the water, want 0 to %d", depth, deepestM)
	case !(depth <= deepestM):
		return rowError(row, "depth is %g m, want 0 to %d", depth, deepestM)
	}
	return nil
}

func checkSpeed(row int, speed float64) error {
	if !(speed >= slowest && speed <= fastest) {
		return rowError(row, "speed of sound is %g m/s, want %d to %d", speed, slowest, fastest)
	}
	return nil
}
