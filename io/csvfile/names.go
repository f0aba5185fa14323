package csvfile

import (
	"fmt"

	"bentray/io/cloud"
)

// addNames adds a label held by row.
func (f *File) addNames(i int, a cloud.Added) error {
	if len(a.Names) == 0 {
		return fmt.Errorf("column %q is a label held by row without names, want names, or one by class", a.Name)
	}
	p := piece{column: i, names: make([][]byte, len(a.Names))}
	for k, name := range a.Names {
		p.names[k] = f.sep.appendField(nil, name)
	}
	f.pieces = append(f.pieces, p)
	return nil
}

// checkPositions wants every row of the labels held by row to have NaN or a
// position in their names.
func (f *File) checkPositions(c *cloud.Chunk) error {
	for k := range f.pieces {
		p := &f.pieces[k]
		if p.names == nil {
			continue
		}
		for _, v := range c.Added[p.column][:c.Rows] {
			if v == v && !isPosition(v, len(p.names)) {
				return fmt.Errorf("column %q: a row has position %v among the names, want a whole number from 0 to %d, or NaN for none", f.layout.Added[p.column].Name, v, len(p.names)-1)
			}
		}
	}
	return nil
}

// isPosition tells whether v is a place in a list.
func isPosition(v float64, length int) bool {
	return v >= 0 && v < float64(length) && v == float64(int(v))
}
