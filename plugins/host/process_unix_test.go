//go:build unix

package host

import (
	"os"
	"os/exec"
	"strconv"
	"strings"
	"syscall"
	"testing"
)

// children lists the processes of this one that have not ended.
func children(t testing.TB) []int {
	t.Helper()
	out, err := exec.Command("ps", "-A", "-o", "pid=,ppid=,stat=,comm=").Output()
	if err != nil {
		t.Skip("there is no ps")
	}
	var pids []int
	for line := range strings.Lines(string(out)) {
		f := strings.Fields(line)
		if len(f) < 4 || f[1] != strconv.Itoa(os.Getpid()) || strings.HasPrefix(f[2], "Z") || f[3] == "ps" {
			continue
		}
		pid, _ := strconv.Atoi(f[0])
		pids = append(pids, pid)
	}
	return pids
}

func freeze(pids []int) {
	for _, p := range pids {
		_ = syscall.Kill(p, syscall.SIGSTOP)
	}
}
