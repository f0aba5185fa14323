// Package picture draws what other packages report, as PNG.
//
// A picture is a column of panels, 24 cm wide. Which ones there are depends on what
// a surveyor would look at: a map for a level that differs from place to place, the
// level along the centreline for a profile, residuals for a plane, the level over
// time for a gauge. Maps have one scale on both axes and north up. Colours run from
// dark blue to light yellow with rising lightness, so that they keep their order for
// the colour-blind and in grey print; marks differ in shape, not in colour alone.
//
// Lengths and heights are those of the report, in its units; nothing is computed
// here but places on paper. Equal reports give equal bytes.
package picture
