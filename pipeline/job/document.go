package job

import (
	"bytes"
	"errors"
	"strings"

	"github.com/pelletier/go-toml/v2"
	"github.com/pelletier/go-toml/v2/unstable"
)

// document is a TOML file as values and the lines of its keys.
type document struct {
	values map[string]any
	lines  map[string]int // by key path joined with dots, tables too
}

// readDocument reads TOML. An error is the first fault of TOML, an *Error.
func readDocument(path string, data []byte) (*document, error) {
	data = bytes.TrimPrefix(data, []byte("\ufeff"))
	doc := &document{values: map[string]any{}, lines: map[string]int{}}
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
		case unstable.Table, unstable.ArrayTable:
			table = d.note(data, "", e.Key())
		case unstable.KeyValue:
			d.noteValue(data, table, e)
		}
	}
	return p.Error()
}

// noteValue notes a key and, where its value is an inline table, those inside.
func (d *document) noteValue(data []byte, table string, e *unstable.Node) {
	key := d.note(data, table, e.Key())
	if e.Value().Kind != unstable.InlineTable {
		return
	}
	for in := e.Value().Children(); in.Next(); {
		d.noteValue(data, key, in.Node())
	}
}

// longestPath bounds the bytes of a noted path, so that a key of very many
// parts, which no job has, costs no memory. What lies deeper has no line of its
// own.
const longestPath = 1 << 12

// note notes a dotted key with all tables on its way and returns its path.
func (d *document) note(data []byte, path string, parts unstable.Iterator) string {
	for len(path) < longestPath && parts.Next() {
		path = join(path, string(parts.Node().Data))
		if d.lines[path] == 0 {
			d.lines[path] = 1 + bytes.Count(data[:parts.Node().Raw.Offset], []byte("\n"))
		}
	}
	return path
}
