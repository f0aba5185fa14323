package page

import (
	"bytes"
	_ "embed" // the template and the style
	"fmt"
	"html/template"
	"io"

	"bentray/io/atomicfile"
	"bentray/pipeline/quality"
)

//go:embed page.html
var source string

//go:embed style.css
var style string

var parsed = template.Must(template.New("page").Funcs(template.FuncMap{
	"count": grouped[int64], "number": grouped[int], "length": length, "signed": signed, "span": span, "percent": percent, "bytes": bytesText,
	"slope": slope, "plain": plain[quality.Number],
}).Parse(source))

// Render writes the page of a report. Errors are the writer's.
func Render(w io.Writer, r *quality.Report) error {
	return parsed.Execute(w, newView(r))
}

// Write puts the page into a file, which appears whole or not at all.
func Write(path string, r *quality.Report) error {
	var data bytes.Buffer
	if err := Render(&data, r); err != nil {
		return fmt.Errorf("%s: page: %w", path, err)
	}
	return atomicfile.Write(path, data.Bytes())
}
