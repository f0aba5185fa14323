package job

import (
	"cmp"
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// Error is one fault of a job file.
type Error struct {
	Path string // the job file, as it was given
	Line int    // from 1; 0 where the fault is that something is not there
	Msg  string
}

// Error returns `path:line: message`.
func (e *Error) Error() string {
	if e.Line == 0 {
		return e.Path + ": " + e.Msg
	}
	return fmt.Sprintf("%s:%d: %s", e.Path, e.Line, e.Msg)
}

// faults collects what is wrong with a job file. Keys are named by their path,
// such as "water.temperature".
type faults struct {
	path  string
	lines map[string]int  // by key and table of the file
	told  map[string]bool // keys that have a fault, so that one mistake is told once
	list  []*Error
}

func newFaults(path string, lines map[string]int) *faults {
	return &faults{path: path, lines: lines, told: map[string]bool{}}
}

// has tells whether the file has the key or table.
func (f *faults) has(key string) bool { return f.lines[key] > 0 }

// add reports a fault of a key, unless the key or a table it is in has one.
// The message goes on after the key's name.
func (f *faults) add(key, format string, args ...any) {
	if f.isTold(key) {
		return
	}
	f.told[key] = true
	f.addAt(f.line(key), label(key)+" "+fmt.Sprintf(format, args...))
}

// addTable reports a fault of a table as a whole, whose keys may have others.
func (f *faults) addTable(key, format string, args ...any) {
	if !f.isTold(key) {
		f.addAt(f.line(key), label(key)+" "+fmt.Sprintf(format, args...))
	}
}

// addAt reports a fault at a line.
func (f *faults) addAt(line int, msg string) {
	f.list = append(f.list, &Error{Path: f.path, Line: line, Msg: msg})
}

// isTold tells whether a fault of the key or of a table around it is reported.
func (f *faults) isTold(key string) bool {
	for ; key != ""; key = parent(key) {
		if f.told[key] {
			return true
		}
	}
	return false
}

// line is where the key stands, or else the table that should have it.
func (f *faults) line(key string) int {
	for ; key != ""; key = parent(key) {
		if line := f.lines[key]; line > 0 {
			return line
		}
	}
	return 0
}

// err joins the faults in line order, those without a line last.
func (f *faults) err() error {
	slices.SortStableFunc(f.list, func(a, b *Error) int {
		return cmp.Or(cmp.Compare(noLineLast(a), noLineLast(b)), cmp.Compare(a.Line, b.Line))
	})
	errs := make([]error, len(f.list))
	for i, e := range f.list {
		errs[i] = e
	}
	return errors.Join(errs...)
}

func noLineLast(e *Error) int {
	if e.Line == 0 {
		return 1
	}
	return 0
}

// parent is the table that a key or table is in, "" for the top.
func parent(key string) string {
	return key[:max(0, strings.LastIndexByte(key, '.'))]
}

// join is the path of a key in a table.
func join(table, key string) string {
	if table == "" {
		return key
	}
	return table + "." + key
}

// cutItem cuts the path of a sensor's key, such as "sensor.2.rays.model", into
// that of the sensor, "sensor.2", and the rest.
func cutItem(key string) (item, rest string, ok bool) {
	after, ok := strings.CutPrefix(key, sensorTable+".")
	number, rest, _ := strings.Cut(after, ".")
	if _, err := strconv.Atoi(number); !ok || err != nil {
		return "", key, false
	}
	return join(sensorTable, number), rest, true
}

// plain is a path without a sensor's number, as the schema has it.
func plain(key string) string {
	item, rest, ok := cutItem(key)
	switch {
	case !ok:
		return key
	case rest == "":
		return parent(item)
	}
	return join(parent(item), rest)
}

// label is a key's name in messages: `title`, `[water] salinity`, `[surface]`.
func label(key string) string {
	key = plain(key)
	if schema.has(key) {
		return place(key)
	}
	for table := parent(key); table != ""; table = parent(table) {
		if schema.has(table) {
			return place(table) + " " + key[len(table)+1:]
		}
	}
	return key
}
