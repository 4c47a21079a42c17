package host

import (
	"context"
	"fmt"
	"sort"
	"sync"
	"time"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// Options say what a host offers. The zero value of each field works.
type Options struct {
	// Self runs the built-in stages: it is started with the name of one.
	Self Executable
	// Builtin are the stages that Self offers; they are described in process.
	Builtin []stage.Stage
	// Extensions are executables from outside.
	Extensions []Executable
	// Output takes each line a process prints; process is "stage solve".
	Output func(process, line string)
	// StartTimeout is how long a process may take to be ready; 30 s.
	StartTimeout time.Duration
	// Grace is how long a cancelled call may take to end; 1 s.
	Grace time.Duration
	// Silence is how long a process may leave a sign of life unanswered while
	// a call runs; 30 s.
	Silence time.Duration
}

// Host owns the processes of one run. Its methods may be called at once.
type Host struct {
	options Options
	stages  map[string]*proxy
	tools   map[string]tool // by kind and name

	mu        sync.Mutex
	processes map[string]*slot
	closed    bool
}

// tool is an element type or reader from outside.
type tool struct {
	about      stage.Extension
	executable Executable
}

// slot holds the process of one executable and kind, once it is there.
type slot struct {
	mu      sync.Mutex // held while one starts
	process *process
}

// Open makes a host and asks each extension what it offers. Built-in stages
// start no process before their first call. Close ends all of them.
func Open(ctx context.Context, o Options) (*Host, error) {
	if o.StartTimeout == 0 {
		o.StartTimeout = 30 * time.Second
	}
	if o.Grace == 0 {
		o.Grace = time.Second
	}
	if o.Silence == 0 {
		o.Silence = 30 * time.Second
	}
	h := &Host{options: o, stages: map[string]*proxy{}, tools: map[string]tool{}, processes: map[string]*slot{}}
	for _, s := range o.Builtin {
		if err := h.addStage(s.Describe(), o.Self); err != nil {
			return nil, err
		}
	}
	for _, e := range o.Extensions {
		if err := h.addExtension(ctx, e); err != nil {
			h.Close()
			return nil, err
		}
	}
	return h, nil
}

func (h *Host) addStage(d stage.Description, e Executable) error {
	if old, dup := h.stages[d.Name]; dup {
		return fault.New(fault.Input, "two executables offer the stage %q: %s and %s", d.Name, old.executable.Path, e.Path).
			Do("remove one of them")
	}
	h.stages[d.Name] = &proxy{host: h, description: d, executable: e}
	return nil
}

// addExtension starts an executable to hear what it offers, and ends it: the
// processes that do the work are one per kind.
func (h *Host) addExtension(ctx context.Context, e Executable) error {
	p, err := h.start(ctx, "extension "+e.Path, e, "describe")
	if err != nil {
		return err
	}
	defer p.stop(h.options.Grace)
	stages, tools, err := p.describe(ctx)
	if err != nil {
		return err
	}
	for _, d := range stages {
		if err := h.addStage(d, e); err != nil {
			return err
		}
	}
	for _, x := range tools {
		key := x.Kind + " " + x.Name
		if old, dup := h.tools[key]; dup {
			return fault.New(fault.Input, "two executables offer the %s %q: %s and %s", x.Kind, x.Name, old.executable.Path, e.Path).
				Do("remove one of them")
		}
		x.Hash = e.SHA256
		h.tools[key] = tool{x, e}
	}
	return nil
}

// Stage finds a stage by the name used in jobs.
func (h *Host) Stage(name string) (stage.Stage, bool) {
	p, ok := h.stages[name]
	return p, ok
}

// Descriptions lists the stages, sorted by name.
func (h *Host) Descriptions() []stage.Description {
	var out []stage.Description
	for _, p := range h.stages {
		out = append(out, p.description)
	}
	sort.Slice(out, func(i, j int) bool { return out[i].Name < out[j].Name })
	return out
}

// Checksum is the SHA-256 of the executable that runs a stage; "" for an
// unknown one.
func (h *Host) Checksum(name string) string {
	if p, ok := h.stages[name]; ok {
		return p.executable.SHA256
	}
	return ""
}

// Extensions lists element types and readers from outside, sorted.
func (h *Host) Extensions() []stage.Extension {
	var out []stage.Extension
	for _, t := range h.tools {
		out = append(out, t.about)
	}
	sort.Slice(out, func(i, j int) bool {
		if out[i].Kind != out[j].Kind {
			return out[i].Kind < out[j].Kind
		}
		return out[i].Name < out[j].Name
	})
	return out
}

// Call runs a method of an element type or reader in its process.
func (h *Host) Call(ctx context.Context, kind, name string, request stage.ExtensionRequest) error {
	t, ok := h.tools[kind+" "+name]
	if !ok {
		return fault.New(fault.Missing, "no extension offers the %s %q", kind, name)
	}
	p, err := h.process(ctx, kind+" "+name, t.executable, name)
	if err != nil {
		return err
	}
	s := p.service.enter(ctx, nil, request.Memory)
	defer p.service.end(s)
	line, hangUp := context.WithCancel(context.WithoutCancel(ctx))
	defer hangUp()
	_, err = watch(ctx, h.options, p, s.id, func() (struct{}, error) { return struct{}{}, p.relay(line, s.id, kind, name, request) })
	return err
}

// process gives the running process of a kind, and starts it if needed.
func (h *Host) process(ctx context.Context, label string, e Executable, argument string) (*process, error) {
	h.mu.Lock()
	if h.closed {
		h.mu.Unlock()
		return nil, fault.New(fault.Cancelled, "stopped on request")
	}
	key := e.SHA256 + " " + label
	s, ok := h.processes[key]
	if !ok {
		s = &slot{}
		h.processes[key] = s
	}
	h.mu.Unlock()
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.process != nil && s.process.alive() {
		return s.process, nil
	}
	p, err := h.start(ctx, label, e, argument)
	if err != nil {
		return nil, err
	}
	h.mu.Lock()
	closed := h.closed
	h.mu.Unlock()
	if closed {
		p.stop(0)
		return nil, fault.New(fault.Cancelled, "stopped on request")
	}
	s.process = p
	return p, nil
}

// Close ends every process: politely, then after half the grace by force.
// Calls that still run fail.
func (h *Host) Close() {
	h.mu.Lock()
	h.closed = true
	var slots []*slot
	for _, s := range h.processes {
		slots = append(slots, s)
	}
	h.mu.Unlock()
	var wg sync.WaitGroup
	for _, s := range slots {
		wg.Go(func() {
			s.mu.Lock()
			defer s.mu.Unlock()
			if s.process != nil {
				s.process.stop(h.options.Grace / 2)
			}
		})
	}
	wg.Wait()
}

func (h *Host) String() string { return fmt.Sprintf("host of %d stages", len(h.stages)) }
