//go:build unix && !linux

package host

import (
	"os"
	"syscall"
)

// processAttributes makes the process lead a group of its own, which a Ctrl-C
// at the terminal does not reach.
func processAttributes() *syscall.SysProcAttr {
	return &syscall.SysProcAttr{Setpgid: true}
}

func killGroup(p *os.Process) { _ = syscall.Kill(-p.Pid, syscall.SIGKILL) }

// memoryOf cannot be known here: a stage keeps to its share by itself.
func memoryOf(int) int64 { return 0 }
