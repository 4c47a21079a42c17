// Package record is the stage that reads a recording and describes it by spectra.
//
// In order: the header is read and columns are chosen, from the job or by generic words (columns.go, words.go, units.go);
// the samples are read and rows without samples are left out (gather.go); times are checked, the window is cut, and the
// spectra, peaks and order bands are computed (describe.go); what was found, guessed and left out is told (outcome.go).
package record
