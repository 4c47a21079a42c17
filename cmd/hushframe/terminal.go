package main

import (
	"io"
	"os"
	"strconv"
)

// plainWidth is how many columns a table takes where nothing says how many there are.
const plainWidth = 120

// tableWidth is how many columns a table takes at most, if wrapping can do it:
// those of the terminal, else what COLUMNS says.
func tableWidth(out io.Writer) int {
	if f, ok := out.(*os.File); ok {
		if n := terminalWidth(f); n > 0 {
			return n
		}
	}
	if n, err := strconv.Atoi(os.Getenv("COLUMNS")); err == nil && n > 0 {
		return n
	}
	return plainWidth
}
