// Package copied holds the tests that run a copy of the demo again and again: by the command, and with
// one thing changed after another.
package copied
