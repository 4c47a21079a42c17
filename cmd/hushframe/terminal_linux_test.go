package main

import (
	"os"
	"testing"

	"golang.org/x/sys/unix"
)

func TestTerminalWidth(t *testing.T) {
	f, err := os.OpenFile("/dev/ptmx", os.O_RDWR|unix.O_NOCTTY, 0)
	if err != nil {
		t.Skip(err)
	}
	defer f.Close()
	if err := unix.IoctlSetWinsize(int(f.Fd()), unix.TIOCSWINSZ, &unix.Winsize{Row: 24, Col: 97}); err != nil {
		t.Skip(err)
	}
	t.Setenv("COLUMNS", "80")
	if got := tableWidth(f); got != 97 {
		t.Errorf("%d columns, want those of the terminal", got)
	}
	null, err := os.Open(os.DevNull)
	if err != nil {
		t.Fatal(err)
	}
	defer null.Close()
	if got := tableWidth(null); got != 80 {
		t.Errorf("%d columns for what is no terminal", got)
	}
}
