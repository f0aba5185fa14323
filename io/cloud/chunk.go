package cloud

// Chunk is a run of consecutive rows on its way from the input to the output.
// Its owner is whoever holds it: Next, Decode, Encode and Put pass it on. Its
// slices are reused for later rows, so nothing of it may be kept after Put.
type Chunk struct {
	Rows     int         // rows decoded; rejected rows do not count
	Consumed int64       // bytes of the input file that this chunk took, for progress
	Numbers  [][]float64 // by Request.Numbers, each Rows long; NaN for empty or null
	Texts    []Texts     // by Request.Texts, each Rows long
	Stored   []Texts     // by Request.Stored, each Rows long: equal bytes are equal values; CSV has the field as it stands, Parquet a 1 and the value's bits, or nothing for null
	Rejects  []Reject    // rows that could not be read, in file order

	Class []uint8      // by row, set by the caller before Encode
	XYZ   [3][]float64 // new coordinates by row, in the file's unit; used where Layout.Moved says so
	Added [][]float64  // by Layout.Added; nil where the column goes by class

	Format any // what the format keeps with the chunk
}

// Resize sets the number of rows and makes room for the results of the layout.
// Contents are undefined.
func (c *Chunk) Resize(rows int, write Layout) {
	c.Rows = rows
	c.Class = Grow(c.Class, rows)
	for i := range c.XYZ {
		c.XYZ[i] = Grow(c.XYZ[i], rows)
	}
	c.Added = Grow(c.Added, len(write.Added))
	for i, a := range write.Added {
		if a.ByClass == nil {
			c.Added[i] = Grow(c.Added[i], rows)
		}
	}
}

// Grow returns a slice of the given length, reusing s where it is large enough.
// Contents are undefined.
func Grow[T any](s []T, length int) []T {
	if cap(s) < length {
		return make([]T, length, length+length/8)
	}
	return s[:length]
}

// Texts is a column of byte strings: row i ends at Ends[i] in Bytes and begins
// where row i-1 ends.
type Texts struct {
	Bytes []byte
	Ends  []int
}

// At returns the text of row i. It stays valid until the chunk is reused.
func (t *Texts) At(i int) []byte {
	begin := 0
	if i > 0 {
		begin = t.Ends[i-1]
	}
	return t.Bytes[begin:t.Ends[i]]
}

// Append adds one row.
func (t *Texts) Append(s []byte) {
	t.Bytes = append(t.Bytes, s...)
	t.Ends = append(t.Ends, len(t.Bytes))
}

// Reset empties the column and keeps its memory.
func (t *Texts) Reset() {
	t.Bytes, t.Ends = t.Bytes[:0], t.Ends[:0]
}

// Cut keeps the first rows.
func (t *Texts) Cut(rows int) {
	end := 0
	if rows > 0 {
		end = t.Ends[rows-1]
	}
	t.Bytes, t.Ends = t.Bytes[:end], t.Ends[:rows]
}

// Reject is a row that could not be read.
type Reject struct {
	Line   int64  // first line of the row in the file, from 1
	Reason string // what is wrong with it, naming the column
	Text   []byte // the row as it stands, without its line end
}
