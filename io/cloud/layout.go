package cloud

import "math"

// Type is the kind of value in an added column.
type Type uint8

// The types of added columns.
const (
	Float Type = iota // a number; CSV: fixed decimals, Parquet: DOUBLE
	Count             // a whole number; Parquet: INT32
	Label             // a text
)

// Layout says what the output has beyond a copy of the input: new coordinates,
// their raw copies, and the added columns behind all others. The raw copies
// come first among the added columns and keep the bytes of the input.
type Layout struct {
	XYZ      [3]int    // positions of the columns x, y, z in Rewriter.Columns
	RawNames [3]string // names of their raw copies
	Decimals int       // CSV decimals of new coordinates
	Moved    []bool    // by class: rows whose coordinates are replaced; the others repeat the raw text or value
	Added    []Added   // in output order, behind the raw copies
}

// Added is a column that the output gains. It holds one value a row
// (Chunk.Added; NaN where there is none), or, where ByClass is set, one value a
// class: rows of a class then share it.
type Added struct {
	Name     string
	Type     Type
	Decimals int      // CSV decimals of a Float held by row
	Names    []string // of a Label held by row: Chunk.Added holds positions in it
	ByClass  []Value  // by class; nil for a column held by row
}

// Value is what the rows of one class have in a column. The zero Value is no
// value: empty in CSV, null in Parquet.
type Value struct {
	Set    bool
	Number float64 // Float and Count
	Text   string  // what CSV writes; the value of a Label
}

// MaxDecimal is the largest magnitude that is written with fixed decimals from
// a scaled integer: beyond it the scaled value would not be exact.
func MaxDecimal(decimals int) float64 {
	return float64(1<<53) / math.Pow10(decimals)
}
