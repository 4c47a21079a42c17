package host

import (
	"bufio"
	"context"
	"errors"
	"io"
	"os"
	"os/exec"
	"runtime"
	"strconv"
	"sync"
	"sync/atomic"
	"time"

	"github.com/hashicorp/go-plugin/runner"
)

// child is one process as go-plugin's client sees it. It differs from
// go-plugin's own in what it does with the streams and at the end: the process
// leads a group that is killed as a whole, its standard input is a pipe whose
// end tells it that the host is gone, its exit is noticed even while something
// it started holds its streams open, and whatever it prints after the
// handshake line is kept.
type child struct {
	cmd     *exec.Cmd
	printed *lines
	stdin   *os.File
	stdout  *handshake
	stderr  *drained
	exited  chan struct{}
	state   string // how it ended; valid once exited is closed

	// stopping says that the host wants the end; go-plugin also calls Kill
	// after the process has ended by itself.
	stopping atomic.Bool

	mu      sync.Mutex
	started bool
	killed  bool
}

var _ runner.Runner = (*child)(nil)

func newChild(path string, args []string, printed *lines) (*child, error) {
	inR, inW, err := os.Pipe()
	if err != nil {
		return nil, err
	}
	outR, outW, err := os.Pipe()
	if err != nil {
		return nil, err
	}
	errR, errW, err := os.Pipe()
	if err != nil {
		return nil, err
	}
	cmd := &exec.Cmd{
		Path: path, Args: args,
		Stdin: inR, Stdout: outW, Stderr: errW, SysProcAttr: processAttributes(),
	}
	return &child{
		cmd: cmd, printed: printed, stdin: inW, stderr: &drained{File: errR, end: make(chan struct{})}, exited: make(chan struct{}),
		stdout: &handshake{file: outR, in: bufio.NewReader(outR), printed: printed},
	}, nil
}

// Start starts the process.
func (c *child) Start(context.Context) error {
	c.mu.Lock()
	defer c.mu.Unlock()
	err := context.Canceled
	if !c.killed {
		err = onStarter(c.cmd.Start)
	}
	for _, f := range []any{c.cmd.Stdin, c.cmd.Stdout, c.cmd.Stderr} {
		f.(*os.File).Close()
	}
	if err != nil {
		c.stdin.Close()
		c.stdout.Close()
		c.stderr.Close()
		return err
	}
	c.started = true
	go func() {
		_ = c.cmd.Wait() // the state says it better
		c.state = c.cmd.ProcessState.String()
		killGroup(c.cmd.Process)
		c.stdin.Close()
		close(c.exited)
		// Streams held open from outside the group would keep readers waiting.
		time.AfterFunc(time.Second, func() { c.stdout.Close(); c.stderr.Close() })
	}()
	return nil
}

// Kill ends the process and all it started.
func (c *child) Kill(context.Context) error {
	c.mu.Lock()
	defer c.mu.Unlock()
	c.killed = true
	if c.started {
		killGroup(c.cmd.Process)
	}
	return nil
}

func (c *child) wasStarted() bool {
	c.mu.Lock()
	defer c.mu.Unlock()
	return c.started
}

// Wait waits for the end.
func (c *child) Wait(context.Context) error { <-c.exited; return nil }

// Stdout gives the handshake line, then stays silent until the end.
func (c *child) Stdout() io.ReadCloser { return c.stdout }

// Stderr gives what the process prints until it redirects its streams.
func (c *child) Stderr() io.ReadCloser { return c.stderr }

// Name is the executable.
func (c *child) Name() string { return c.cmd.Path }

// ID is the process number, empty before the start.
func (c *child) ID() string {
	if !c.wasStarted() {
		return ""
	}
	return strconv.Itoa(c.cmd.Process.Pid)
}

// Diagnose has nothing to add: the host words its own faults.
func (c *child) Diagnose(context.Context) string { return "" }

// PluginToHost and HostToPlugin: both live on one machine.
func (c *child) PluginToHost(network, address string) (string, string, error) {
	return network, address, nil
}

// HostToPlugin is the reverse.
func (c *child) HostToPlugin(network, address string) (string, string, error) {
	return network, address, nil
}

// drained is a stream that tells when it has been read to its end.
type drained struct {
	*os.File
	once sync.Once
	end  chan struct{}
}

// Read reads on.
func (d *drained) Read(p []byte) (int, error) {
	n, err := d.File.Read(p)
	if err != nil {
		d.once.Do(func() { close(d.end) })
	}
	return n, err
}

// last waits a moment for the last words of a process that has ended.
func (d *drained) last() {
	select {
	case <-d.end:
	case <-time.After(200 * time.Millisecond): // something it started holds the stream
	}
}

// handshake reads standard output: one line of bounded length for go-plugin,
// the rest into the lines printed.
type handshake struct {
	file    *os.File
	in      *bufio.Reader
	printed *lines
	rest    []byte

	mu   sync.Mutex
	line string
	seen bool
}

// handshakeLength bounds the line: addresses and a certificate fit well.
const handshakeLength = 16 << 10

// Read gives the first line, then blocks until the stream ends.
func (h *handshake) Read(p []byte) (int, error) {
	if !h.seen {
		h.first()
	}
	if len(h.rest) > 0 {
		n := copy(p, h.rest)
		h.rest = h.rest[n:]
		return n, nil
	}
	_, err := io.Copy(h.printed, h.in)
	if err == nil || errors.Is(err, os.ErrClosed) {
		err = io.EOF
	}
	return 0, err
}

func (h *handshake) first() {
	var line []byte
	for len(line) < handshakeLength {
		b, err := h.in.ReadByte()
		if err != nil || b == '\n' {
			break
		}
		line = append(line, b)
	}
	h.mu.Lock()
	defer h.mu.Unlock()
	h.seen, h.line = true, string(line)
	if len(line) > 0 {
		h.rest = append(line, '\n')
	}
}

// First is the first line so far.
func (h *handshake) First() string {
	h.mu.Lock()
	defer h.mu.Unlock()
	return h.line
}

// Close closes the stream.
func (h *handshake) Close() error { return h.file.Close() }

// onStarter runs f on a thread that never ends: on Linux the death signal of
// a process is sent when the thread that started it ends.
func onStarter(f func() error) error {
	starterOnce.Do(func() {
		go func() {
			runtime.LockOSThread()
			for work := range starter {
				work()
			}
		}()
	})
	done := make(chan error)
	starter <- func() { done <- f() }
	return <-done
}

var (
	starterOnce sync.Once
	starter     = make(chan func())
)
