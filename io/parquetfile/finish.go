package parquetfile

import (
	"encoding/binary"
	"fmt"
	"maps"
	"slices"
	"strings"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// createdBy names the writer in the form that readers take apart: some of them
// judge the statistics of a file by it.
func createdBy(version string) *string {
	name := "bentray"
	if version != "" {
		name += " version " + version
	}
	return &name
}

// stale lists metadata of other writers that describe the columns: they would
// hide the new ones.
var stale = []string{
	"ARROW:schema", "pandas", "org.apache.spark.sql.parquet.row.metadata", "parquet.avro.schema", "avro.schema",
	"iceberg.schema", "parquet.proto.descriptor", // these two from memory
}

var physicalTypes = map[cloud.Type]parquet.Type{
	cloud.Float: parquet.Type_DOUBLE,
	cloud.Count: parquet.Type_INT32,
	cloud.Label: parquet.Type_BYTE_ARRAY,
}

// newElement describes a new column.
func newElement(name string, t cloud.Type) *parquet.SchemaElement {
	physical, optional := physicalTypes[t], parquet.FieldRepetitionType_OPTIONAL
	e := &parquet.SchemaElement{Name: name, Type: &physical, RepetitionType: &optional}
	if t == cloud.Label {
		utf8 := parquet.ConvertedType_UTF8
		e.ConvertedType = &utf8
		e.LogicalType = &parquet.LogicalType{STRING: parquet.NewStringType()}
	}
	return e
}

// makeSchema puts new coordinates in the place of the old ones, and the raw and
// the added columns behind all others.
func (o *output) makeSchema() error {
	f := o.file
	o.schema = slices.Clone(f.meta.Schema)
	for _, l := range f.leaves {
		o.paths = append(o.paths, l.path)
	}
	for _, i := range o.layout.XYZ {
		e := newElement(f.leaves[i].name, cloud.Float)
		e.FieldID = f.meta.Schema[f.leaves[i].element].FieldID
		o.schema[f.leaves[i].element] = e
	}
	for k, i := range o.layout.XYZ {
		raw := *f.meta.Schema[f.leaves[i].element]
		raw.Name, raw.FieldID = o.layout.RawNames[k], nil
		o.appendColumn(&raw)
	}
	for _, a := range o.layout.Added {
		o.appendColumn(newElement(a.Name, a.Type))
	}
	root := *o.schema[0]
	children := root.GetNumChildren() + 3 + int32(len(o.layout.Added))
	root.NumChildren = &children
	o.schema[0] = &root
	return o.checkNames()
}

func (o *output) appendColumn(e *parquet.SchemaElement) {
	o.schema = append(o.schema, e)
	o.paths = append(o.paths, []string{e.Name})
}

// checkNames refuses new columns whose name is taken.
func (o *output) checkNames() error {
	taken := map[string]bool{}
	for i, path := range o.paths {
		if i >= len(o.file.leaves) && taken[path[0]] {
			return fmt.Errorf("has a column %q already, want to add one of that name; rename it or take it out", path[0])
		}
		taken[path[0]] = true
	}
	return nil
}

// keptStats returns what may still be said of an old column under a new
// writer's name. Without a declared order of values min and max mean nothing;
// the older min and max are trusted for plain numbers alone.
func (o *output) keptStats(s *parquet.Statistics, i int) *parquet.Statistics {
	if s == nil {
		return nil
	}
	kept, l := *s, &o.file.leaves[i]
	if !o.ordered(i) {
		kept.MinValue, kept.MaxValue = nil, nil
	}
	switch l.kind {
	case opaque, texts, uint32s, uint64s:
		kept.Min, kept.Max = nil, nil
	}
	return &kept
}

// ordered tells whether the input says that a column's statistics go by the
// order of its type.
func (o *output) ordered(i int) bool {
	orders := o.file.meta.ColumnOrders
	return i < len(orders) && orders[i].TYPE_ORDER != nil && !strings.HasSuffix(o.file.leaves[i].typ, unknownType)
}

// metadata returns the input's entries, without the stale, and the new ones.
func (o *output) metadata() []*parquet.KeyValue {
	own := o.file.options.Metadata
	var list []*parquet.KeyValue
	for _, kv := range o.file.meta.KeyValueMetadata {
		if _, replaced := own[kv.Key]; !replaced && !slices.Contains(stale, kv.Key) {
			list = append(list, kv)
		}
	}
	for _, key := range slices.Sorted(maps.Keys(own)) {
		value := own[key]
		list = append(list, &parquet.KeyValue{Key: key, Value: &value})
	}
	return list
}

// Finish writes the footer.
func (f *File) Finish() error {
	o := f.out
	meta := &parquet.FileMetaData{
		Version:          f.meta.Version,
		Schema:           o.schema,
		NumRows:          f.meta.NumRows,
		RowGroups:        o.groups,
		KeyValueMetadata: o.metadata(),
		CreatedBy:        createdBy(f.options.Version),
	}
	if meta.RowGroups == nil {
		meta.RowGroups = []*parquet.RowGroup{}
	}
	for range o.paths {
		meta.ColumnOrders = append(meta.ColumnOrders, &parquet.ColumnOrder{TYPE_ORDER: parquet.NewTypeDefinedOrder()})
	}
	footer, err := sealed(meta)
	if err != nil {
		return fmt.Errorf("%s: %w", f.path, err)
	}
	if err := o.write(footer); err != nil {
		return err
	}
	return o.writer.Flush()
}

// checkFooter refuses an output whose footer would be too long, before it is
// written: the footer has about what the input's has, and the new chunks' words.
func (o *output) checkFooter() error {
	const chunkBytes = 60 // of a chunk's words without its name
	f := o.file
	chunks := 0
	for _, path := range o.paths[len(f.leaves):] {
		chunks += chunkBytes + len(path[0])
	}
	size := int(f.size-tailBytes-f.footer) + len(f.groups)*chunks
	for key, value := range f.options.Metadata {
		size += len(key) + len(value)
	}
	if size > maxFooterBytes {
		return fmt.Errorf("the output's footer would have about %d bytes, want at most %d; split the file or write larger row groups", size, maxFooterBytes)
	}
	return nil
}

// sealed returns the end of a file: its description, with length and magic.
func sealed(meta *parquet.FileMetaData) ([]byte, error) {
	footer, err := appendThrift(nil, meta)
	if err != nil {
		return nil, fmt.Errorf("the footer cannot be written: %w", err)
	}
	if len(footer) > maxFooterBytes {
		return nil, fmt.Errorf("the footer has %d bytes, want at most %d; split the file or write larger row groups", len(footer), maxFooterBytes)
	}
	footer = binary.LittleEndian.AppendUint32(footer, uint32(len(footer)))
	return append(footer, magic...), nil
}
