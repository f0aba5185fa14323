package picture

import (
	"bytes"
	"fmt"
	"html"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgsvg"
)

const (
	figureWidth = 19 * vg.Centimeter // somewhat more than the text on A4, which it is scaled to
	panelAside  = 6 * vg.Millimeter  // between panels side by side
	rightRoom   = 4 * vg.Millimeter  // of a number at the right end of an axis
	mostPoints  = 500                // of one kind in a figure
)

// SVG is one svg element, to stand in HTML as it is: it holds no text but numbers,
// units and words of this package, refers to nothing outside, and has a label for
// readers who do not see it.
type SVG string

// figure draws panels side by side, each of the same width.
func figure(label string, panels ...panel) SVG {
	var height vg.Length
	for _, p := range panels {
		height = max(height, p.height)
	}
	canvas := vgsvg.New(figureWidth, height)
	whole := draw.New(canvas)
	width := (figureWidth + panelAside) / vg.Length(len(panels))
	for i, p := range panels {
		left := vg.Length(i) * width
		p.draw(draw.Crop(whole, left, left+width-panelAside-figureWidth, 0, 0))
	}
	var b bytes.Buffer
	_, _ = canvas.WriteTo(&b) // to memory
	return inline(label, height, b.String())
}

// fontStyle is what the canvas writes at each text; a page says it once for all.
const fontStyle = "font-family:Liberation Sans;font-variant:normal;font-weight:normal;font-style:normal;"

// inline makes an element of a document: it drops the prologue, takes its size from
// the page, and calls images what they are.
func inline(label string, height vg.Length, document string) SVG {
	_, rest, _ := strings.Cut(document, "<svg")
	_, body, _ := strings.Cut(rest, ">")
	body = strings.ReplaceAll(body, fontStyle, "")
	body = strings.ReplaceAll(body, "data:image/jpg;", "data:image/png;")
	return SVG(fmt.Sprintf(`<svg viewBox="0 0 %.5g %.5g" role="img" aria-label="%s">%s`,
		figureWidth.Points(), height.Points(), html.EscapeString(label), body))
}

// thinned takes at most so many of a list, evenly.
func thinned[T any](list []T, most int) []T {
	every := max(1, (len(list)+most-1)/most)
	kept := make([]T, 0, most)
	for i := 0; i < len(list); i += every {
		kept = append(kept, list[i])
	}
	return kept
}
