package parquetfile

import (
	"fmt"
	"strings"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// kind says how the stored values of a column become numbers or texts.
type kind uint8

const (
	opaque kind = iota // copied, never read
	doubles
	floats
	int32s
	uint32s
	int64s
	uint64s
	millis
	micros
	nanos
	booleans
	patterns // the bits of what has 64, as they are stored
	texts
)

// kinds holds what can be read, by the name a type has for people.
var kinds = map[string]kind{
	"DOUBLE": doubles, "FLOAT": floats, "BOOLEAN": booleans,
	"INT32": int32s, "INT32 INT_8": int32s, "INT32 INT_16": int32s, "INT32 INT_32": int32s,
	"INT32 UINT_8": uint32s, "INT32 UINT_16": uint32s, "INT32 UINT_32": uint32s,
	"INT64": int64s, "INT64 INT_64": int64s, "INT64 UINT_64": uint64s,
	"INT64 TIMESTAMP_MILLIS": millis, "INT64 TIMESTAMP_MICROS": micros, "INT64 TIMESTAMP_NANOS": nanos,
	"INT64 TIMESTAMP_MILLIS local": millis, "INT64 TIMESTAMP_MICROS local": micros, "INT64 TIMESTAMP_NANOS local": nanos,
	"BYTE_ARRAY": texts, "BYTE_ARRAY UTF8": texts, "BYTE_ARRAY ENUM": texts, "BYTE_ARRAY JSON": texts,
}

// size returns the bytes of one PLAIN value.
func (k kind) size() int {
	switch k {
	case floats, int32s, uint32s:
		return 4
	}
	return 8
}

// leaf is one stored column.
type leaf struct {
	name     string
	typ      string
	path     []string
	physical parquet.Type
	element  int // position in the schema
	kind     kind
	flat     bool // neither repeated nor inside a group
	optional bool
}

// walker collects the leaves of a schema that is a tree in depth-first order.
type walker struct {
	elements []*parquet.SchemaElement
	next     int
	leaves   []leaf
	bytes    int // of all paths
}

// leavesOf lists the stored columns in the order in which row groups hold them.
func leavesOf(elements []*parquet.SchemaElement) ([]leaf, error) {
	if len(elements) == 0 || elements[0].NumChildren == nil {
		return nil, fmt.Errorf("the schema has no root")
	}
	if len(elements) > maxSchemaItems {
		return nil, fmt.Errorf("the schema has %d elements, want at most %d", len(elements), maxSchemaItems)
	}
	w := walker{elements: elements, next: 1}
	if err := w.children(*elements[0].NumChildren, nil, 0, 1); err != nil {
		return nil, err
	}
	if w.next != len(elements) {
		return nil, fmt.Errorf("the schema has %d elements, want %d as its groups say", len(elements), w.next)
	}
	for i := range w.leaves {
		w.leaves[i].name = strings.Join(w.leaves[i].path, ".")
	}
	return w.leaves, nil
}

// children walks through a group's elements. The names of its parents have the
// given bytes, with a dot behind each.
func (w *walker) children(count int32, parents []string, bytes, depth int) error {
	if depth > maxDepth {
		return fmt.Errorf("the schema is nested more than %d deep", maxDepth)
	}
	for range count {
		if w.next >= len(w.elements) {
			return fmt.Errorf("the schema has %d elements, want more as its groups say", len(w.elements))
		}
		e := w.elements[w.next]
		if err := w.checkPath(bytes + len(e.Name)); err != nil {
			return err
		}
		path := append(parents[:len(parents):len(parents)], e.Name)
		w.next++
		if e.Type == nil {
			if err := w.children(e.GetNumChildren(), path, bytes+len(e.Name)+1, depth+1); err != nil {
				return err
			}
			continue
		}
		if t := *e.Type; t < parquet.Type_BOOLEAN || t > parquet.Type_FIXED_LEN_BYTE_ARRAY {
			return fmt.Errorf("column %q is of type %d, which is unknown", clip(e.Name), t)
		}
		w.leaves = append(w.leaves, newLeaf(e, w.next-1, path))
	}
	return nil
}

// checkPath bounds the names that leaves will have: a group's name stands in
// those of all its leaves.
func (w *walker) checkPath(bytes int) error {
	w.bytes += bytes
	switch {
	case bytes > maxPathBytes:
		return fmt.Errorf("the name of a column has %d bytes, want at most %d", bytes, maxPathBytes)
	case w.bytes > maxPathsBytes:
		return fmt.Errorf("the names of the columns have more than %d bytes", maxPathsBytes)
	}
	return nil
}

func newLeaf(e *parquet.SchemaElement, element int, path []string) leaf {
	l := leaf{
		typ:      typeName(e),
		path:     path,
		physical: *e.Type,
		element:  element,
		flat:     len(path) == 1 && e.GetRepetitionType() != parquet.FieldRepetitionType_REPEATED,
		optional: e.GetRepetitionType() == parquet.FieldRepetitionType_OPTIONAL,
	}
	l.kind = kinds[l.typ]
	if !l.flat {
		l.typ, l.kind = "nested "+l.typ, opaque
	}
	return l
}

func columnsOf(leaves []leaf) []cloud.Column {
	columns := make([]cloud.Column, len(leaves))
	for i, l := range leaves {
		columns[i] = cloud.Column{Name: l.name, Type: l.typ}
	}
	return columns
}
