package host

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"reflect"
	"runtime"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/serve"
)

// The test binary is its own extension: started by a host it serves the
// stages below, or misbehaves at its start as its argument says.
func TestMain(m *testing.M) {
	if serve.Started() {
		misbehave(os.Args[1])
		serve.Main(serve.Offer{Stages: testStages, Tools: []stage.Tool{doubler{}}})
	}
	if host := os.Getenv("HUSHFRAME_TEST_HOST"); host != "" {
		beHost(host)
	}
	os.Exit(m.Run())
}

func misbehave(argument string) {
	switch argument {
	case "crash-at-start":
		fmt.Fprintln(os.Stderr, "cannot find the library of everything")
		os.Exit(7)
	case "babble-at-start":
		fmt.Println("Welcome to the stage of the future!")
		time.Sleep(time.Minute)
	case "silent-at-start":
		time.Sleep(time.Minute)
	case "old-at-start":
		fmt.Println("1|99|unix|/nowhere|grpc|")
		time.Sleep(time.Minute)
	case "deaf-at-start":
		fmt.Println("1|1|unix|/nowhere|grpc|")
		time.Sleep(time.Minute)
	case "flood-at-start":
		for {
			fmt.Print(strings.Repeat("x", 1<<16))
		}
	}
}

// staged is a stage made of a function.
type staged struct {
	name string
	run  func(ctx context.Context, c *stage.Call) (*stage.Outcome, error)
}

func (s staged) Describe() stage.Description {
	return stage.Description{Name: s.name, About: "a stage of the tests"}
}

func (s staged) Run(ctx context.Context, c *stage.Call) (*stage.Outcome, error) { return s.run(ctx, c) }

var testStages = []stage.Stage{
	staged{"echo", echo},
	staged{"crash", func(context.Context, *stage.Call) (*stage.Outcome, error) {
		fmt.Fprintln(os.Stderr, "about to divide by the moon")
		os.Exit(9)
		return nil, nil
	}},
	staged{"runtime-crash", func(context.Context, *stage.Call) (*stage.Outcome, error) {
		go func() { panic("in a goroutine") }()
		select {}
	}},
	staged{"panic", func(context.Context, *stage.Call) (*stage.Outcome, error) { panic("index out of luck") }},
	staged{"fail", func(context.Context, *stage.Call) (*stage.Outcome, error) {
		return nil, fault.New(fault.Input, "a gap of 2 mm").In("read cut file", "arm.dxf").At("line %d", 12).Of("outline").Do("close it").
			With([]string{"a line"})
	}},
	staged{"polite", func(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
		c.Report.Progress("waiting", -1)
		<-ctx.Done()
		return nil, ctx.Err()
	}},
	staged{"stubborn", func(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
		c.Report.Progress("waiting", -1)
		select {}
	}},
	staged{"large", func(context.Context, *stage.Call) (*stage.Outcome, error) {
		return &stage.Outcome{Notes: []string{strings.Repeat("x", 40<<20)}}, nil
	}},
	staged{"babble", func(_ context.Context, c *stage.Call) (*stage.Outcome, error) {
		fmt.Println(`{"@message": 5, "@level": true}`)
		fmt.Println(strings.Repeat("y", 1<<20))
		c.Report.Log(stage.Info, strings.Repeat("z", 40<<20))
		fmt.Fprintln(os.Stderr, `{"@message": {"a": 1}}`)
		return nil, nil
	}},
	staged{"hungry", func(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
		var eaten [][]byte
		for {
			b := make([]byte, 8<<20)
			for i := 0; i < len(b); i += 4096 {
				b[i] = 1
			}
			if eaten = append(eaten, b); len(eaten) > 64 {
				return &stage.Outcome{Notes: []string{fmt.Sprint(len(eaten))}}, nil
			}
			time.Sleep(20 * time.Millisecond)
		}
	}},
	staged{"services", useServices},
	staged{"family", func(_ context.Context, c *stage.Call) (*stage.Outcome, error) {
		child := exec.Command("sleep", "100")
		child.Stdout, child.Stderr = os.Stdout, os.Stderr
		if err := child.Start(); err != nil {
			return nil, err
		}
		return &stage.Outcome{Figures: map[string]any{"child": float64(child.Process.Pid), "own": float64(os.Getpid())}}, nil
	}},
}

func echo(_ context.Context, c *stage.Call) (*stage.Outcome, error) {
	c.Report.Progress("reading", 0.25)
	c.Report.Log(stage.Info, "found", "holes", 4)
	if _, err := c.Files.Read("there.txt"); err != nil {
		return nil, err
	}
	if _, err := c.Files.Read("absent.txt"); err == nil {
		return nil, errors.New("absent.txt is there")
	}
	c.Report.Progress("reading", 1)
	figures := map[string]any{"pid": float64(os.Getpid()), "threads": float64(c.Threads), "memory": float64(c.Memory),
		"scratch": c.Scratch, "out": c.Outputs["mesh"], "procs": float64(runtime.GOMAXPROCS(0))}
	for k, v := range c.Arguments {
		figures[k] = v
	}
	for k, v := range c.Inputs {
		data, _ := json.Marshal(v)
		figures["input "+k] = string(data)
	}
	return &stage.Outcome{Figures: figures, Notes: []string{"merged 2"}, Warnings: []stage.Warning{{ID: "a.b", Text: "t"}}}, nil
}

// doubler is an element type from outside: it doubles the bytes of a file.
type doubler struct{}

func (doubler) Describe() stage.Extension {
	return stage.Extension{Kind: "element", Name: "doubler", About: "doubles", Arguments: []stage.Argument{{Name: "n", Default: 2.0}}}
}

func (doubler) Call(_ context.Context, r stage.ExtensionRequest) error {
	data, err := os.ReadFile(r.In)
	if err != nil {
		return fault.From(err)
	}
	if r.Method == "crash" {
		os.Exit(5)
	}
	return os.WriteFile(r.Out, []byte(strings.Repeat(string(data), int(r.Arguments["n"].(float64)))), 0o644)
}

func useServices(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
	figures := map[string]any{}
	for range 2 {
		folder, found, err := c.Services.Keep(ctx, "factor", func(folder string) error {
			return os.WriteFile(filepath.Join(folder, "l"), []byte("factor"), 0o644)
		})
		if err != nil {
			return nil, err
		}
		data, err := os.ReadFile(filepath.Join(folder, "l"))
		if err != nil {
			return nil, err
		}
		figures[fmt.Sprintf("kept found=%v", found)] = string(data)
	}
	_, _, err := c.Services.Keep(ctx, "broken", func(string) error { return fault.New(fault.Numeric, "no factor") })
	figures["broken"] = fault.From(err).Text
	list, err := c.Services.Extensions(ctx)
	if err != nil {
		return nil, err
	}
	data, _ := json.Marshal(list)
	figures["extensions"] = string(data)
	in, out := filepath.Join(c.Scratch, "in"), filepath.Join(c.Scratch, "out")
	if err := os.WriteFile(in, []byte("ab"), 0o644); err != nil {
		return nil, err
	}
	request := stage.ExtensionRequest{Method: "matrices", In: in, Out: out, Arguments: map[string]any{"n": 2.0}}
	if err := c.Services.Element(ctx, "doubler", request); err != nil {
		return nil, err
	}
	data, _ = os.ReadFile(out)
	figures["doubled"] = string(data)
	figures["no reader"] = fault.From(c.Services.Reader(ctx, "doubler", request)).Text
	request.Method = "crash"
	figures["crashed"] = fault.From(c.Services.Element(ctx, "doubler", request)).Error()
	return &stage.Outcome{Figures: figures}, nil
}

// testReporter notes what a step says.
type testReporter struct {
	mu   sync.Mutex
	said []string
	ch   chan string
}

func newReporter() *testReporter { return &testReporter{ch: make(chan string, 100)} }

func (r *testReporter) note(s string) {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.said = append(r.said, s)
	select {
	case r.ch <- s:
	default:
	}
}

func (r *testReporter) Progress(phase string, fraction float64) {
	r.note(fmt.Sprintf("%s %g", phase, fraction))
}

func (r *testReporter) Log(level stage.Level, text string, fields ...any) {
	r.note(fmt.Sprint(level, " ", text, fields))
}

// testServices keeps folders in memory of the test and relays to a host.
type testServices struct {
	stage.Services
	host *Host
	dir  string
	kept map[string]string
}

func (s *testServices) Keep(_ context.Context, key string, make func(string) error) (string, bool, error) {
	if f, ok := s.kept[key]; ok {
		return f, true, nil
	}
	f, err := os.MkdirTemp(s.dir, "kept")
	if err == nil {
		err = make(f)
	}
	if err != nil {
		return "", false, err
	}
	s.kept[key] = f
	return f, false, nil
}

func (s *testServices) Element(ctx context.Context, name string, r stage.ExtensionRequest) error {
	return s.host.Call(ctx, "element", name, r)
}

func (s *testServices) Reader(ctx context.Context, name string, r stage.ExtensionRequest) error {
	return s.host.Call(ctx, "reader", name, r)
}

func (s *testServices) Extensions(context.Context) ([]stage.Extension, error) {
	return s.host.Extensions(), nil
}

func self(t testing.TB) Executable {
	t.Helper()
	e, err := Self()
	if err != nil {
		t.Fatal(err)
	}
	return e
}

func open(t testing.TB, change func(*Options)) *Host {
	t.Helper()
	o := Options{Self: self(t), Builtin: testStages, StartTimeout: 10 * time.Second}
	if change != nil {
		change(&o)
	}
	h, err := Open(context.Background(), o)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(h.Close)
	return h
}

func newCall(t testing.TB) *stage.Call {
	t.Helper()
	return &stage.Call{Files: stage.NewFiles(t.TempDir()), Report: newReporter(), Scratch: t.TempDir(), Threads: 1}
}

func run(t *testing.T, h *Host, name string, c *stage.Call) (*stage.Outcome, error) {
	t.Helper()
	s, ok := h.Stage(name)
	if !ok {
		t.Fatalf("no stage %s", name)
	}
	return s.Run(context.Background(), c)
}

func TestCallCrossesWhole(t *testing.T) {
	h := open(t, nil)
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "there.txt"), []byte("abc"), 0o644); err != nil {
		t.Fatal(err)
	}
	rep := newReporter()
	c := &stage.Call{
		Arguments: stage.Arguments{"size": stage.Quantity{SI: 0.003, Dimension: "length"}, "list": []any{1.0, "x"}},
		Inputs:    map[string][]stage.Input{"mesh": {{Folder: "/a", Kind: "mesh", Hash: "h", From: "stage.m.mesh"}}},
		Outputs:   map[string]string{"mesh": "/out"}, Scratch: "/scratch", Files: stage.NewFiles(dir),
		Threads: 1, Memory: 1 << 40, Report: rep,
	}
	o, err := run(t, h, "echo", c)
	if err != nil {
		t.Fatal(err)
	}
	want := map[string]any{"size": stage.Quantity{SI: 0.003, Dimension: "length"}, "list": []any{1.0, "x"}, "threads": 1.0, "procs": 1.0,
		"memory": float64(1 << 40), "scratch": "/scratch", "out": "/out", "pid": o.Figures["pid"],
		"input mesh": `[{"folder":"/a","kind":"mesh","hash":"h","from":"stage.m.mesh"}]`}
	if !reflect.DeepEqual(o.Figures, want) {
		t.Errorf("got  %v\nwant %v", o.Figures, want)
	}
	if o.Figures["pid"] == float64(os.Getpid()) {
		t.Error("the stage ran in this process")
	}
	if len(o.Notes) != 1 || len(o.Warnings) != 1 || o.Warnings[0].ID != "a.b" {
		t.Errorf("notes %v, warnings %v", o.Notes, o.Warnings)
	}
	uses := []stage.FileUse{{Path: "absent.txt"},
		// SHA-256 of "abc", FIPS 180-2 appendix B.1.
		{Path: "there.txt", Hash: "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"}}
	if !reflect.DeepEqual(c.Files.Used(), uses) {
		t.Errorf("files %v", c.Files.Used())
	}
	if said := []string{"reading 0.25", "info found[holes 4]", "reading 1"}; !reflect.DeepEqual(rep.said, said) {
		t.Errorf("said %q", rep.said)
	}
	again, err := run(t, h, "echo", c)
	if err != nil {
		t.Fatal(err)
	}
	if again.Figures["pid"] != o.Figures["pid"] {
		t.Error("a second step of the stage got a second process")
	}
}

func TestFaultsCrossWhole(t *testing.T) {
	h := open(t, nil)
	_, err := run(t, h, "fail", newCall(t))
	want := &fault.Error{Kind: fault.Input, Op: "read cut file", Item: "arm.dxf", Place: "line 12", Argument: "outline",
		Text: "a gap of 2 mm", Remedy: "close it", Lines: []string{"a line"}}
	if !reflect.DeepEqual(fault.From(err), want) {
		t.Errorf("got  %+v\nwant %+v", err, want)
	}
}

// Each misdeed gives a fault of its kind that names the stage, in bounded
// time, with what the process printed; afterwards no process is left.
func TestMisdeeds(t *testing.T) {
	h := open(t, func(o *Options) { o.Grace = 300 * time.Millisecond })
	cases := []struct {
		stage string
		kind  fault.Kind
		want  string
		line  string
	}{
		{"crash", fault.Crash, "run: stage crash: the process ended without answering (exit status 9)", "about to divide by the moon"},
		{"runtime-crash", fault.Crash, "run: stage runtime-crash: the process ended without answering (exit status 2)", "panic: in a goroutine"},
		{"panic", fault.Internal, "a mistake in the program: index out of luck", "panic("},
		{"large", fault.Limit, "figures and summary take 40 MiB, where 32 are allowed; put bulk data in an artifact", ""},
	}
	for _, c := range cases {
		t.Run(c.stage, func(t *testing.T) {
			_, err := run(t, h, c.stage, newCall(t))
			f := fault.From(err)
			if f == nil || f.Kind != c.kind || f.Error() != c.want {
				t.Fatalf("got  %v\nwant %s", err, c.want)
			}
			if all := strings.Join(f.Lines, "\n"); !strings.Contains(all, c.line) {
				t.Errorf("lines %q lack %q", all, c.line)
			}
		})
	}
	call := newCall(t)
	if _, err := run(t, h, "babble", call); err != nil {
		t.Errorf("printing is no misdeed: %v", err)
	}
	if said := call.Report.(*testReporter).said; len(said) != 1 || len(said[0]) > 1<<16 {
		t.Errorf("%d log lines came over", len(said))
	}
	call = newCall(t)
	call.Arguments = stage.Arguments{"text": strings.Repeat("x", 40<<20)}
	_, err := run(t, h, "echo", call)
	if f := fault.From(err); f == nil || f.Kind != fault.Limit || f.Error() != "run: stage echo: a message is larger than the 32 MiB that the boundary passes; put bulk data in an artifact" {
		t.Errorf("large arguments: %v", err)
	}
	h.Close()
	if left := children(t); len(left) != 0 {
		t.Errorf("processes left: %v", left)
	}
}

func TestMisdeedsAtStart(t *testing.T) {
	cases := []struct {
		argument string
		kind     fault.Kind
		want     string
		line     string
	}{
		{"crash-at-start", fault.Crash, "start: stage crash-at-start: the process ended at its start (exit status 7)", "cannot find the library of everything"},
		{"babble-at-start", fault.Protocol, `start: stage babble-at-start: it printed "Welcome to the stage of the future!" where the handshake of the protocol was due; print nothing to standard output before serving`, ""},
		{"silent-at-start", fault.Crash, "start: stage silent-at-start: the process was not ready within 1s", ""},
		{"old-at-start", fault.Protocol, "start: stage old-at-start: it speaks version 99 of the protocol, this program version 1; use an extension built for this version", ""},
		{"deaf-at-start", fault.Protocol, "start: stage deaf-at-start: no connection could be made", ""},
		{"flood-at-start", fault.Protocol, "where the handshake of the protocol was due", ""},
	}
	for _, c := range cases {
		t.Run(c.argument, func(t *testing.T) {
			h := open(t, func(o *Options) {
				o.StartTimeout = time.Second
				if c.kind == fault.Crash && c.argument != "silent-at-start" || c.kind == fault.Protocol {
					o.StartTimeout = 20 * time.Second
				}
				o.Builtin = []stage.Stage{staged{name: c.argument}}
			})
			_, err := run(t, h, c.argument, newCall(t))
			f := fault.From(err)
			if f == nil || f.Kind != c.kind || !strings.Contains(f.Error(), c.want) {
				t.Fatalf("got  %v\nwant %s", err, c.want)
			}
			if all := strings.Join(f.Lines, "\n"); !strings.Contains(all, c.line) {
				t.Errorf("lines %q lack %q", all, c.line)
			}
			h.Close()
			waitNoChildren(t)
		})
	}
	t.Run("no executable", func(t *testing.T) {
		h := open(t, func(o *Options) { o.Self = Executable{Path: filepath.Join(t.TempDir(), "none")} })
		_, err := run(t, h, "echo", newCall(t))
		if fault.KindOf(err) != fault.Missing {
			t.Errorf("got %v", err)
		}
	})
}

func TestCancellation(t *testing.T) {
	for _, c := range []struct {
		stage, want string
	}{
		{"polite", "run: stage polite: stopped on request"},
		{"stubborn", "run: stage stubborn: stopped on request; it did not end within 200ms and its process was killed"},
	} {
		t.Run(c.stage, func(t *testing.T) {
			h := open(t, func(o *Options) { o.Grace = 200 * time.Millisecond })
			ctx, cancel := context.WithCancel(context.Background())
			call := newCall(t)
			go func() { <-call.Report.(*testReporter).ch; cancel() }()
			s, _ := h.Stage(c.stage)
			_, err := s.Run(ctx, call)
			if f := fault.From(err); f == nil || f.Kind != fault.Cancelled || f.Error() != c.want {
				t.Errorf("got %v", err)
			}
			if c.stage == "stubborn" {
				waitNoChildren(t)
			} else if n := len(children(t)); runtime.GOOS != "windows" && n != 1 {
				t.Errorf("%d processes after a step that ended as asked", n)
			}
			h.Close()
			if left := children(t); len(left) != 0 {
				t.Errorf("processes left: %v", left)
			}
		})
	}
}

// A process that is stopped answers nothing; the host notices and kills it.
func TestFrozenProcess(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("no signal freezes a process there")
	}
	h := open(t, func(o *Options) { o.Silence = 300 * time.Millisecond })
	call := newCall(t)
	go func() { <-call.Report.(*testReporter).ch; freeze(children(t)) }()
	_, err := run(t, h, "polite", call)
	if f := fault.From(err); f == nil || f.Kind != fault.Crash || !strings.Contains(f.Text, "did not answer for 300ms and was killed") {
		t.Errorf("got %v", err)
	}
	h.Close()
	if left := children(t); len(left) != 0 {
		t.Errorf("processes left: %v", left)
	}
}

func TestMemoryLimit(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("needs /proc")
	}
	h := open(t, nil)
	call := newCall(t)
	call.Memory = 100 << 20
	_, err := run(t, h, "hungry", call)
	f := fault.From(err)
	if f == nil || f.Kind != fault.Limit || f.Argument != "memory_limit" || !strings.Contains(f.Text, "where 100 MiB were granted, and was killed") {
		t.Errorf("got %v", err)
	}
	call.Memory = 2 << 30
	if _, err := run(t, h, "hungry", call); err != nil {
		t.Errorf("within its share: %v", err)
	}
}

func TestServicesReachOtherProcesses(t *testing.T) {
	e := self(t)
	e.Path = os.Args[0]
	h := open(t, nil)
	// A second host has the same binary as an extension from outside.
	outside, err := Open(context.Background(), Options{Extensions: []Executable{e}})
	if err != nil {
		t.Fatal(err)
	}
	defer outside.Close()
	call := newCall(t)
	call.Services = &testServices{host: outside, dir: t.TempDir(), kept: map[string]string{}}
	o, err := run(t, h, "services", call)
	if err != nil {
		t.Fatal(err)
	}
	want := map[string]any{
		"kept found=false": "factor", "kept found=true": "factor", "broken": "no factor", "doubled": "abab",
		"extensions": `[{"kind":"element","name":"doubler","about":"doubles","arguments":[{"name":"n","about":"","type":{"kind":""},"default":2}],"hash":"` + e.SHA256 + `"}]`,
		"no reader":  `no extension offers the reader "doubler"`,
		"crashed":    "run: element doubler: the process ended without answering (exit status 5)",
	}
	if !reflect.DeepEqual(o.Figures, want) {
		t.Errorf("got  %v\nwant %v", o.Figures, want)
	}
	if d := outside.Descriptions(); len(d) != len(testStages) || d[0].Name != "babble" {
		t.Errorf("stages found in the extension: %v", d)
	}
	_, err = Open(context.Background(), Options{Self: e, Builtin: testStages[:1], Extensions: []Executable{e}})
	if err == nil || !strings.Contains(err.Error(), `two executables offer the stage "echo"`) {
		t.Errorf("two of one name: %v", err)
	}
}

func TestCallsShareOneProcess(t *testing.T) {
	h := open(t, nil)
	s, _ := h.Stage("polite")
	ctx, cancel := context.WithCancel(context.Background())
	var wg sync.WaitGroup
	ready := make(chan string, 8)
	for range 8 {
		wg.Go(func() {
			call := newCall(t)
			call.Report.(*testReporter).ch = ready
			if _, err := s.Run(ctx, call); fault.KindOf(err) != fault.Cancelled {
				t.Errorf("got %v", err)
			}
		})
	}
	for range 8 {
		<-ready
	}
	if n := len(children(t)); n != 1 {
		t.Errorf("%d processes for 8 calls at once", n)
	}
	cancel()
	wg.Wait()
}

// What a stage started by mistake dies with its process.
func TestGrandchildren(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("needs /proc")
	}
	h := open(t, func(o *Options) { o.Grace = 200 * time.Millisecond })
	o, err := run(t, h, "family", newCall(t))
	if err != nil {
		t.Fatal(err)
	}
	h.Close()
	waitGone(t, int(o.Figures["child"].(float64)))
}

// When the host is killed outright, its processes end by themselves.
func TestHostKilled(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("needs /proc")
	}
	cmd := exec.Command(os.Args[0])
	cmd.Env = append(os.Environ(), "HUSHFRAME_TEST_HOST=family")
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	var pid int
	if _, err := fmt.Fscan(out, &pid); err != nil {
		t.Fatal(err)
	}
	if _, err := os.Stat(filepath.Join("/proc", strconv.Itoa(pid))); err != nil {
		t.Fatal("the stage does not run")
	}
	cmd.Process.Kill()
	cmd.Wait()
	waitGone(t, pid)
}

// beHost runs one step and waits to be killed.
func beHost(name string) {
	e, _ := Self()
	h, err := Open(context.Background(), Options{Self: e, Builtin: testStages})
	if err != nil {
		panic(err)
	}
	s, _ := h.Stage(name)
	o, err := s.Run(context.Background(), &stage.Call{Files: stage.NewFiles(""), Report: newReporter()})
	if err != nil {
		panic(err)
	}
	fmt.Println(o.Figures["own"])
	select {}
}

func waitNoChildren(t *testing.T) {
	t.Helper()
	for range 100 {
		if len(children(t)) == 0 {
			return
		}
		time.Sleep(20 * time.Millisecond)
	}
	t.Errorf("processes left: %v", children(t))
}

func waitGone(t *testing.T, pid int) {
	t.Helper()
	for range 100 {
		stat, err := os.ReadFile(filepath.Join("/proc", strconv.Itoa(pid), "stat"))
		if err != nil || strings.Contains(string(stat), ") Z ") {
			return
		}
		time.Sleep(20 * time.Millisecond)
	}
	t.Errorf("process %d still runs", pid)
}

// BenchmarkStart starts a process and waits until it can be called.
func BenchmarkStart(b *testing.B) {
	h := open(b, nil)
	for b.Loop() {
		p, err := h.start(context.Background(), "stage babble", h.options.Self, "babble")
		if err != nil {
			b.Fatal(err)
		}
		b.StopTimer()
		p.stop(0)
		b.StartTimer()
	}
}

func BenchmarkCall(b *testing.B) {
	h := open(b, nil)
	s, _ := h.Stage("echo")
	call := newCall(b)
	if err := os.WriteFile(call.Files.Path("there.txt"), nil, 0o644); err != nil {
		b.Fatal(err)
	}
	if _, err := s.Run(context.Background(), call); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := s.Run(context.Background(), call); err != nil {
			b.Fatal(err)
		}
	}
}
