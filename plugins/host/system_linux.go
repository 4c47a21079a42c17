package host

import (
	"bufio"
	"fmt"
	"os"
	"strings"
	"syscall"
)

// processAttributes makes the process lead a group of its own, which a Ctrl-C
// at the terminal does not reach, and die with the host, however that ends.
func processAttributes() *syscall.SysProcAttr {
	return &syscall.SysProcAttr{Setpgid: true, Pdeathsig: syscall.SIGKILL}
}

func killGroup(p *os.Process) { _ = syscall.Kill(-p.Pid, syscall.SIGKILL) }

// memoryOf gives the memory a process has for itself, in bytes; 0 when it
// cannot be known.
func memoryOf(pid int) int64 {
	f, err := os.Open(fmt.Sprintf("/proc/%d/status", pid))
	if err != nil {
		return 0
	}
	defer f.Close()
	for lines := bufio.NewScanner(f); lines.Scan(); {
		if value, ok := strings.CutPrefix(lines.Text(), "RssAnon:"); ok {
			var kib int64
			_, _ = fmt.Sscan(value, &kib)
			return kib << 10
		}
	}
	return 0
}
