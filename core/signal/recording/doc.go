// Package recording is the contract between a recording and what is computed from it: the interface of recording
// readers, and the checks on time columns and values that come before any spectrum.
//
// Terms
//
//	recording  time series logged in flight or on the bench, a table of columns over rows
//	row        one line of the table, counted from 1 for the first that holds samples
//	column     one measured quantity, in the unit of the recording
//	series     the samples of some columns that share their rows, with their times in seconds
//	run        a stretch of a series without a gap
//	gap        two neighbouring samples whose times lie more than one and a half regular steps apart
//	rate       samples per second within runs; never rows over duration, which gaps lower
//
// Readers deliver numbers as they are logged. Units and axes are given their meaning by the caller.
package recording
