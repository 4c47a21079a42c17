// Package draw makes the pictures of a report as SVG: line charts over
// frequency and mode shapes of a mesh.
//
// Colours are left to the page, which knows whether it is light, dark or on
// paper: every mark has a class (see Style) and no colour of its own. Nothing
// is told by colour alone: curves carry their name, bands are hatched, marks
// have shapes. Every picture has a text that says what it shows.
//
// Text is escaped here, so that the result can be put into a page as it is.
// Equal input gives equal bytes.
package draw
