package job

import (
	"fmt"
	"reflect"
	"slices"
	"strings"
)

// table is a table of the job file with its keys, sub-tables not among them.
// Tables whose keys are the user's own have none here.
type table struct {
	name string // such as "input.csv"; "" is the top of the file
	keys []string
}

// tables are all tables of the job file, in the order of their fields.
type tables []table

// schema is what a job file may hold, read from the tags of file.
var schema = tablesOf(reflect.TypeFor[file](), "")

func tablesOf(t reflect.Type, name string) tables {
	own, below := table{name: name}, tables{}
	for _, f := range reflect.VisibleFields(t) {
		key, field := f.Tag.Get("toml"), f.Type
		if field.Kind() == reflect.Pointer || isTables(field) {
			field = field.Elem()
		}
		switch {
		case f.Anonymous || key == "-":
		case field.Kind() == reflect.Struct:
			below = append(below, tablesOf(field, join(name, key))...)
		case field.Kind() == reflect.Map:
			below = append(below, table{name: join(name, key)})
		default:
			own.keys = append(own.keys, key)
		}
	}
	return append(tables{own}, below...)
}

// isTables tells whether a type stands for a list of tables.
func isTables(t reflect.Type) bool {
	return t.Kind() == reflect.Slice && t.Elem().Kind() == reflect.Struct
}

// field returns the field of a struct that a key fills.
func field(t reflect.Type, key string) (reflect.StructField, bool) {
	for _, f := range reflect.VisibleFields(t) {
		if tag := f.Tag.Get("toml"); tag == key && tag != "-" && !f.Anonymous {
			return f, true
		}
	}
	return reflect.StructField{}, false
}

// has tells whether there is a table of this name below the top.
func (ts tables) has(name string) bool {
	return name != "" && slices.ContainsFunc(ts, func(t table) bool { return t.name == name })
}

// keys returns the keys of a table.
func (ts tables) keys(name string) []string {
	return ts[slices.IndexFunc(ts, func(t table) bool { return t.name == name })].keys
}

// owners returns the tables that have the key.
func (ts tables) owners(key string) (names []string) {
	for _, t := range ts {
		if slices.Contains(t.keys, key) {
			names = append(names, t.name)
		}
	}
	return names
}

// names returns the tables below the top.
func (ts tables) names() (names []string) {
	for _, t := range ts[1:] {
		names = append(names, t.name)
	}
	return names
}

// standing says where a key of a table stands, for messages.
func standing(table string) string {
	if table == "" {
		return "at " + place(table)
	}
	return "in " + place(table)
}

// place names a table, for messages.
func place(table string) string {
	switch table {
	case "":
		return "the top of the file"
	case sensorTable:
		return "[[" + table + "]]"
	}
	return "[" + table + "]"
}

// anyOf lists words for messages: `a, b or c`.
func anyOf(words []string) string {
	last := len(words) - 1
	if last < 1 {
		return strings.Join(words, "")
	}
	return fmt.Sprintf("%s or %s", strings.Join(words[:last], ", "), words[last])
}

// each applies a function to every word.
func each(words []string, f func(string) string) []string {
	out := make([]string, len(words))
	for i, w := range words {
		out[i] = f(w)
	}
	return out
}
