// Package trial makes sparse symmetric matrices whose answers are known, or whose shape is that of the real work, for
// the tests and benchmarks of the numeric packages.
package trial
