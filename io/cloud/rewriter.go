package cloud

import "io"

// Column is one column of a file as its format found it.
type Column struct {
	Name string
	Type string // for people: "text" in CSV, the stored type in Parquet
}

// Request names the columns to decode, by their position in Rewriter.Columns.
// Chunk.Numbers, Chunk.Texts and Chunk.Stored have the same order.
type Request struct {
	Numbers []int
	Steps   []float64 // by Numbers, or nil: the coarsest step in which a binary format may store them, in their own unit; 0 is any
	Texts   []int
	Checks  []func(text []byte) error // by Texts, or nil: what a text must hold, where it is not nil; an error makes the row one that cannot be read. Called side by side
	Stored  []int                     // columns whose values are wanted as they are stored, to compare files
}

// Rewriter copies one file, with other coordinates and more columns.
// Columns may be asked for before Begin. Decode and Encode may run at the same
// time for different chunks; Next, Put and Finish are called in order, each by
// one goroutine at a time.
type Rewriter interface {
	// Columns lists the columns of the input in file order.
	Columns() []Column

	// Begin fixes what is decoded and what is written. With a nil writer the
	// file is only read: then Encode, Put and Finish are not called.
	Begin(read Request, write Layout, out io.Writer) error

	// Next takes the next rows of the input into the chunk; io.EOF after the
	// last. The chunk's slices may be reused from an earlier call.
	Next(*Chunk) error

	// Decode fills Rows, Numbers, Texts and Rejects. Row errors are *RowError.
	Decode(*Chunk) error

	// Encode makes the output's bytes from Class, XYZ and Added.
	Encode(*Chunk) error

	// Put appends the chunk to the output.
	Put(*Chunk) error

	// Finish writes what stands behind the last row. The writer stays open.
	Finish() error

	// Close releases the input.
	Close() error
}
