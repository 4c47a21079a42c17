//go:build unix

package main

import (
	"os"

	"golang.org/x/sys/unix"
)

// terminalWidth is the number of columns of a terminal, 0 for what is none.
func terminalWidth(f *os.File) int {
	size, err := unix.IoctlGetWinsize(int(f.Fd()), unix.TIOCGWINSZ)
	if err != nil {
		return 0
	}
	return int(size.Col)
}
