package host

import (
	"os"
	"syscall"
)

// processAttributes makes the process lead a group of its own, which a Ctrl-C
// at the terminal does not reach.
func processAttributes() *syscall.SysProcAttr {
	return &syscall.SysProcAttr{CreationFlags: syscall.CREATE_NEW_PROCESS_GROUP}
}

// killGroup ends the process; what it started ends with its standard input.
func killGroup(p *os.Process) { _ = p.Kill() }

// memoryOf cannot be known here: a stage keeps to its share by itself.
func memoryOf(int) int64 { return 0 }
