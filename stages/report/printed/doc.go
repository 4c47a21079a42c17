// Package printed draws the charts of the page as still pictures for print and slides, PNG or SVG. It takes the same
// descriptions (package draw), computes nothing, and gives equal bytes for equal data.
package printed
