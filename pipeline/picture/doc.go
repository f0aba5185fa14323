// Package picture draws what other packages report: a water surface as PNG, and the
// figures of a comparison of clouds as SVG that stands in a page.
//
// A surface is a column of panels, 24 cm wide. Which ones there are depends on what
// a surveyor would look at: a map for a level that differs from place to place, the
// level along the centreline for a profile, residuals for a plane, the level over
// time for a gauge. A comparison has one figure for each question, of panels side by
// side, and at most some hundred points of a kind.
//
// Maps have one scale on both axes and north up. Colours run from dark blue to light
// yellow with rising lightness, so that they keep their order for the colour-blind
// and in grey print; marks differ in shape and lines in their dashes, not in colour
// alone.
//
// Lengths and heights are those of the report, in its units; nothing is computed
// here but places on paper. Equal reports give equal bytes.
package picture
