package main

import (
	"os"

	"golang.org/x/sys/windows"
)

// terminalWidth is the number of columns of a terminal, 0 for what is none.
func terminalWidth(f *os.File) int {
	var info windows.ConsoleScreenBufferInfo
	if windows.GetConsoleScreenBufferInfo(windows.Handle(f.Fd()), &info) != nil {
		return 0
	}
	return int(info.Window.Right-info.Window.Left) + 1
}
