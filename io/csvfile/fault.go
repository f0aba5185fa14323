package csvfile

import "bentray/io/cloud"

// Fault says why a row of the file cannot be read where columns are wanted as numbers,
// in the words of Reject.Reason; it is empty where the row can be read. The row's line
// and text are taken, whatever the file is read for.
func (f *File) Fault(row cloud.Reject, numbers ...int) string {
	alone := &File{path: f.path, head: f.head, columns: f.columns, read: cloud.Request{Numbers: numbers}}
	b := &block{text: row.Text, line: row.Line, quoted: true, fields: make([]span, len(f.columns))}
	c := &cloud.Chunk{Numbers: make([][]float64, len(numbers))}
	for k := range c.Numbers {
		c.Numbers[k] = make([]float64, 1)
	}
	if bad := alone.decodeRow(c, b, row.Text, 0, hasLoneReturns(row.Text)); bad != nil {
		return reason(bad)
	}
	return ""
}
