package pipeline

import "fmt"

// CallError is a wrong call or job: nothing was written.
type CallError struct{ Err error }

func (e *CallError) Error() string { return e.Err.Error() }

// Unwrap returns what is wrong.
func (e *CallError) Unwrap() error { return e.Err }

func callErrorf(format string, args ...any) error {
	return &CallError{fmt.Errorf(format, args...)}
}
