// Package record is the stage that reads a recording and describes it by spectra.
//
// The samples come from package gather; the spectra, peaks and order bands are computed (describe.go), and what was found
// is told (outcome.go).
package record
