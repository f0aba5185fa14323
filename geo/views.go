package geo

import (
	"fmt"
	"slices"
	"strings"
)

// separates tells a byte that stands between ids: a blank, also a tab or an end of a
// line, or a semicolon.
func separates(b byte) bool {
	return b == ' ' || b == ';' || b == '\t' || b == '\n' || b == '\r'
}

// AppendViews appends the numbers of the cameras that a cell names, ids with any number
// of blanks or ";" around them, and returns the longer slice. What it appends rises
// and names each camera once, also one that the cell has twice; an empty cell appends
// nothing. An id that is no camera's is an error, and nothing is appended.
//
// It costs a look into a map for each id, and allocates only where dst is too short
// or the cell is wrong.
func (c *Cameras) AppendViews(dst []int32, cell []byte) ([]int32, error) {
	n := len(dst)
	for {
		id, rest := nextID(cell)
		if len(id) == 0 {
			break
		}
		k, found := c.known[string(id)]
		if !found {
			return dst[:n], c.unknown(string(id))
		}
		dst, cell = append(dst, k), rest
	}
	slices.Sort(dst[n:])
	return dst[:n+len(slices.Compact(dst[n:]))], nil
}

// CheckViews returns the error of AppendViews for a cell. It allocates nothing where
// there is none.
func (c *Cameras) CheckViews(cell []byte) error {
	for {
		id, rest := nextID(cell)
		if len(id) == 0 {
			return nil
		}
		if _, found := c.known[string(id)]; !found {
			return c.unknown(string(id))
		}
		cell = rest
	}
}

// nextID returns the first id of a cell and what follows it; it is empty where there is
// none.
func nextID(cell []byte) (id, rest []byte) {
	first := 0
	for first < len(cell) && separates(cell[first]) {
		first++
	}
	end := first
	for end < len(cell) && !separates(cell[end]) {
		end++
	}
	return cell[first:end], cell[end:]
}

// unknown says that an id is no camera's, and which one it may mean.
func (c *Cameras) unknown(id string) error {
	if k, found := c.similar[plainID(id)]; found && k != several {
		return fmt.Errorf("camera %.60q is none of the %d known; did you mean %q?", id, len(c.ids), c.ids[k])
	}
	if strings.Contains(id, ",") {
		return fmt.Errorf(`camera %.60q is none of the %d known; commas do not separate ids, want blanks or ";" between`, id, len(c.ids))
	}
	return fmt.Errorf(`camera %.60q is none of the %d known, want their ids, with blanks or ";" between`, id, len(c.ids))
}

// several stands in Cameras.similar for a plain id that more than one camera has.
const several = -1

// plainID returns an id without what programs write in different ways: folders before
// it, an extension, letter case, leading zeros of a number and all but letters and
// digits. Ids of one survey mostly differ in a digit, so the fewest letters to change
// would lead from a wrong id to another image.
func plainID(id string) string {
	id = id[strings.LastIndexAny(id, `/\`)+1:]
	if dot := strings.LastIndexByte(id, '.'); dot > 0 && isExtension(id[dot+1:]) {
		id = id[:dot]
	}
	plain := make([]rune, 0, len(id))
	number := false // whether the letter before is a digit that stays
	for _, r := range strings.ToLower(id) {
		digit := r >= '0' && r <= '9'
		if digit && (number || r != '0') || r >= 'a' && r <= 'z' || r >= 0x80 {
			plain = append(plain, r)
		}
		number = digit && (number || r != '0')
	}
	return string(plain)
}

// isExtension tells whether a text is like jpg, jp2 or tiff: three or four letters and
// digits, the first a letter.
func isExtension(s string) bool {
	letter := func(r rune) bool { return r|0x20 >= 'a' && r|0x20 <= 'z' }
	other := func(r rune) bool { return !letter(r) && (r < '0' || r > '9') }
	return (len(s) == 3 || len(s) == 4) && letter(rune(s[0])) && !strings.ContainsFunc(s, other)
}
