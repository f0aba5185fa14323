package job

import (
	"bytes"
	"errors"
	"strconv"
	"strings"

	"github.com/pelletier/go-toml/v2"
	"github.com/pelletier/go-toml/v2/unstable"
)

// document is a TOML file as values and the lines of its keys.
type document struct {
	values map[string]any
	lines  map[string]int // by key path joined with dots, tables too; in lists of tables with the table's number
	items  map[string]int // number of the last table so far, by the path of its list
}

// readDocument reads TOML. An error is the first fault of TOML, an *Error.
func readDocument(path string, data []byte) (*document, error) {
	data = bytes.TrimPrefix(data, []byte("\ufeff"))
	doc := &document{values: map[string]any{}, lines: map[string]int{}, items: map[string]int{}}
	if err := toml.Unmarshal(data, &doc.values); err != nil {
		return nil, syntaxError(path, err)
	}
	if err := doc.findLines(data); err != nil {
		return nil, syntaxError(path, err)
	}
	return doc, nil
}

func syntaxError(path string, err error) *Error {
	e := &Error{Path: path, Msg: "not valid TOML: " + strings.TrimPrefix(err.Error(), "toml: ")}
	var at *toml.DecodeError
	if errors.As(err, &at) {
		e.Line, _ = at.Position()
	}
	return e
}

// findLines notes the first line of every key and table.
func (d *document) findLines(data []byte) error {
	var p unstable.Parser
	p.Reset(data)
	table := ""
	for p.NextExpression() {
		switch e := p.Expression(); e.Kind {
		case unstable.Table:
			table = d.note(data, "", e.Key())
		case unstable.ArrayTable:
			table = d.note(data, "", e.Key())
			d.noteItem(data, table, d.items[table]+1, e.Child().Raw)
		case unstable.KeyValue:
			d.noteValue(data, table, e)
		}
	}
	return p.Error()
}

// noteValue notes a key and, where its value is an inline table, those inside.
func (d *document) noteValue(data []byte, table string, e *unstable.Node) {
	key := d.note(data, table, e.Key())
	switch value := e.Value(); value.Kind {
	case unstable.InlineTable:
		d.noteTable(data, key, value)
	case unstable.Array:
		item := value.Children()
		for number := 1; item.Next(); number++ {
			if item.Node().Kind == unstable.InlineTable {
				d.noteItem(data, key, number, item.Node().Raw)
				d.noteTable(data, key, item.Node())
			}
		}
	}
}

// noteTable notes the keys of an inline table.
func (d *document) noteTable(data []byte, path string, e *unstable.Node) {
	for in := e.Children(); in.Next(); {
		d.noteValue(data, path, in.Node())
	}
}

// noteItem notes a table of a list by its number.
func (d *document) noteItem(data []byte, list string, number int, at unstable.Range) {
	d.items[list] = number
	d.noteLine(data, d.item(list), at)
}

// item is the path of a list's last table, or the path itself where it is none.
func (d *document) item(path string) string {
	if n := d.items[path]; n > 0 {
		return join(path, strconv.Itoa(n))
	}
	return path
}

// longestPath bounds the bytes of a noted path, so that a key of very many
// parts, which no job has, costs no memory. What lies deeper has no line of its
// own.
const longestPath = 1 << 12

// note notes a dotted key with all tables on its way and returns its path.
func (d *document) note(data []byte, path string, parts unstable.Iterator) string {
	for len(path) < longestPath && parts.Next() {
		path = join(d.item(path), string(parts.Node().Data))
		d.noteLine(data, path, parts.Node().Raw)
	}
	return path
}

// noteLine notes a path's first line.
func (d *document) noteLine(data []byte, path string, at unstable.Range) {
	if d.lines[path] == 0 {
		d.lines[path] = 1 + bytes.Count(data[:at.Offset], []byte("\n"))
	}
}
