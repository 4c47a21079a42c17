package host

import (
	"os"
	"syscall"
)

// processAttributes makes the process lead a group of its own, which a Ctrl-C
// at the terminal does not reach, and die with the host, however that ends.
func processAttributes() *syscall.SysProcAttr {
	return &syscall.SysProcAttr{Setpgid: true, Pdeathsig: syscall.SIGKILL}
}

func killGroup(p *os.Process) { _ = syscall.Kill(-p.Pid, syscall.SIGKILL) }
