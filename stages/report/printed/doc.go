// Package printed draws charts as still pictures for print and slides, PNG or SVG, beside the page that moves. It takes the
// same data as the charts of the page (package draw), computes nothing, and gives equal bytes for equal data.
//
// Frequencies are in Hz, rotor speeds in rpm, densities in the unit that the chart names.
package printed
