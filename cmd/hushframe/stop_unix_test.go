//go:build unix

package main

import (
	"bytes"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"
)

// start runs the program as a process of its own.
func (w *tower) start(args ...string) (*exec.Cmd, *bytes.Buffer) {
	w.t.Helper()
	cmd := exec.Command(os.Args[0], args...)
	cmd.Env = append(os.Environ(), "HUSHFRAME_TEST_PROGRAM=1")
	var err bytes.Buffer
	cmd.Stderr = &err
	if e := cmd.Start(); e != nil {
		w.t.Fatal(e)
	}
	return cmd, &err
}

// stuck waits until the stubborn step runs and gives its process.
func (w *tower) stuck() int {
	w.t.Helper()
	for range 500 {
		if data, err := os.ReadFile(filepath.Join(w.dir, "pid")); err == nil && len(data) > 0 {
			pid, _ := strconv.Atoi(string(data))
			return pid
		}
		time.Sleep(20 * time.Millisecond)
	}
	w.t.Fatal("the stubborn step never ran")
	return 0
}

// gone waits for the end of a process that is not a child of this one.
func gone(pid int) bool {
	for range 100 {
		if errors.Is(syscall.Kill(pid, 0), syscall.ESRCH) {
			return true
		}
		// One that nobody waits for stays as a zombie until init does.
		if out, err := exec.Command("ps", "-o", "stat=", "-p", strconv.Itoa(pid)).Output(); err == nil && strings.HasPrefix(string(out), "Z") {
			return true
		}
		time.Sleep(20 * time.Millisecond)
	}
	return false
}

// A step that ignores everything does not keep Ctrl-C from ending all within
// two seconds; what had finished is reused by the next run, nothing else is.
func TestInterrupt(t *testing.T) {
	for _, signal := range []os.Signal{os.Interrupt, syscall.SIGTERM} {
		t.Run(signal.String(), func(t *testing.T) {
			w := newTower(t)
			w.write("bells.hcl", strings.Replace(bellJob, `"small.txt"`, `"small.txt"`+"\n  after = [stage.great]\n  mood = \"stubborn\"", 1))
			cmd, err := w.start("run", w.job)
			pid := w.stuck()
			began := time.Now()
			if e := cmd.Process.Signal(signal); e != nil {
				t.Fatal(e)
			}
			cmd.Wait()
			took := time.Since(began)
			t.Logf("stopped in %v", took)
			if took > 2*time.Second {
				t.Errorf("it took %v to stop", took)
			}
			if code := cmd.ProcessState.ExitCode(); code != exitStopped {
				t.Errorf("exit %d: %s", code, err)
			}
			if !gone(pid) {
				t.Errorf("process %d still runs", pid)
			}
			if !strings.Contains(err.String(), "small  stopped") {
				t.Errorf("it says\n%s", err)
			}
			w.write("bells.hcl", bellJob)
			code, out, errs := w.call("run", w.job, "--verify")
			if code != exitHeld || !strings.Contains(out, "3 steps: 2 ran, 1 as before") {
				t.Errorf("the next run: exit %d\n%s%s", code, out, errs)
			}
		})
	}
}

// A program that is killed outright takes its processes with it and leaves a
// store that the next run trusts.
func TestKilled(t *testing.T) {
	w := newTower(t)
	w.write("bells.hcl", strings.Replace(bellJob, `"small.txt"`, `"small.txt"`+"\n  after = [stage.great]\n  mood = \"stubborn\"", 1))
	cmd, _ := w.start("run", w.job)
	pid := w.stuck()
	if err := cmd.Process.Kill(); err != nil {
		t.Fatal(err)
	}
	cmd.Wait()
	if !gone(pid) {
		t.Errorf("process %d still runs", pid)
	}
	w.write("bells.hcl", bellJob)
	code, out, errs := w.call("run", w.job, "--verify")
	if code != exitHeld || !strings.Contains(out, "3 steps: 2 ran, 1 as before") {
		t.Errorf("the next run: exit %d\n%s%s", code, out, errs)
	}
	left, _ := filepath.Glob(filepath.Join(w.dir, ".hushframe", "scratch", "*"))
	if len(left) != 0 {
		t.Errorf("scratch of the killed run is left: %v", left)
	}
}
