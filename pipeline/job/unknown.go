package job

import (
	"fmt"
	"strconv"
	"strings"
)

// unknown reports a key or table that a job file does not have, with what was
// probably meant.
func unknown(f *faults, table, key string, v any) {
	name := join(table, key)
	msg, meant := "", ""
	if isTable(v) {
		msg, meant = unknownTable(plain(name))
	} else {
		msg, meant = unknownKey(plain(table), key)
	}
	if item, _, ok := cutItem(table); ok && strings.HasPrefix(meant, sensorTable+".") {
		meant = join(item, meant[len(sensorTable)+1:])
	}
	if meant != "" && !f.has(meant) {
		f.told[meant] = true // not also as missing
	}
	f.addAt(f.line(name), msg)
}

// isTable tells whether a value is a table or a list of tables.
func isTable(v any) bool {
	if list, ok := v.([]any); ok && len(list) > 0 {
		v = list[0]
	}
	_, ok := v.(map[string]any)
	return ok
}

func unknownTable(name string) (msg, meant string) {
	last := name[strings.LastIndexByte(name, '.')+1:]
	for _, known := range schema.names() {
		if strings.HasSuffix("."+known, "."+last) {
			return fmt.Sprintf("unknown table [%s]; did you mean [%s]?", name, known), known
		}
	}
	if near := nearest(name, schema.names()); near != "" {
		return fmt.Sprintf("unknown table [%s]; did you mean [%s]?", name, near), near
	}
	return fmt.Sprintf("unknown table [%s], want %s", name, anyOf(each(schema.names(), place))), ""
}

func unknownKey(table, key string) (msg, meant string) {
	what := fmt.Sprintf("unknown key %q %s", key, standing(table))
	if owners := schema.owners(key); len(owners) > 0 {
		meant = join(owners[0], key)
		return fmt.Sprintf("%s; it belongs to %s", what, anyOf(each(owners, place))), meant
	}
	keys := schema.keys(table)
	if near := nearest(key, keys); near != "" {
		return fmt.Sprintf("%s; did you mean %q?", what, near), join(table, near)
	}
	for _, other := range schema {
		if near := nearest(key, other.keys); near != "" {
			return fmt.Sprintf("%s; did you mean %q %s?", what, near, standing(other.name)), join(other.name, near)
		}
	}
	return fmt.Sprintf("%s, want %s", what, anyOf(each(keys, strconv.Quote))), ""
}

// nearest returns the word closest to what was written, the first of several
// that are, or "" where none is close: more than two fifths of the letters, and
// more than one, differ (two letters exchanged count as two of five). Letter
// case does not count.
func nearest(written string, words []string) string {
	best, least := "", 0
	for _, w := range words {
		d := editDistance(strings.ToLower(written), w)
		if limit := max(1, 2*max(len(written), len(w))/5); d <= limit && (best == "" || d < least) {
			best, least = w, d
		}
	}
	return best
}

// editDistance is the least number of single letters to insert, delete or
// replace that turns a into b (Levenshtein 1966), by bytes.
func editDistance(a, b string) int {
	row := make([]int, len(b)+1) // distances of a[:i] to every b[:k]
	for k := range row {
		row[k] = k
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for k := range len(b) {
			replaced := diagonal
			if a[i] != b[k] {
				replaced++
			}
			diagonal = row[k+1]
			row[k+1] = min(replaced, row[k]+1, row[k+1]+1)
		}
	}
	return row[len(b)]
}
