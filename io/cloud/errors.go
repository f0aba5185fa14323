package cloud

import "fmt"

// RowError says where in a file a value is wrong. A Line (CSV) and a Row
// (Parquet) count from 1; the one that does not apply is 0.
type RowError struct {
	Path   string
	Line   int64
	Row    int64
	Column string // empty where the whole row is meant
	Err    error
}

func (e *RowError) Error() string {
	where := fmt.Sprintf("line %d", e.Line)
	if e.Line == 0 {
		where = fmt.Sprintf("row %d", e.Row)
	}
	if e.Column != "" {
		where += ": " + e.Column
	}
	return fmt.Sprintf("%s: %s %v", e.Path, where, e.Err)
}

// Unwrap returns what is wrong.
func (e *RowError) Unwrap() error { return e.Err }
