package host

import (
	"context"
	"encoding/json"
	"errors"
	"io"
	"os"
	"time"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/wire"
)

// proxy is a stage in another process.
type proxy struct {
	host        *Host
	description stage.Description
	executable  Executable
}

var _ stage.Stage = (*proxy)(nil)

// Describe gives what the stage said when it was found.
func (x *proxy) Describe() stage.Description { return x.description }

// Run runs one step in the process of the stage. When ctx ends, the step is
// asked to end; if it does not within the grace, its process is killed.
func (x *proxy) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	p, err := x.host.process(ctx, "stage "+x.description.Name, x.executable, x.description.Name)
	if err != nil {
		return nil, err
	}
	s := p.service.begin(ctx, call)
	defer p.service.end(s)
	request, err := wire.EncodeCall(s.id, x.description.Name, call)
	if err != nil {
		return nil, err
	}
	// The stream outlives ctx by the grace, so that the step can say how it ended.
	stream, hangUp := context.WithCancel(context.WithoutCancel(ctx))
	defer hangUp()
	return watch(ctx, x.host.options, p, s.id, func() (*stage.Outcome, error) { return p.run(stream, request, call) })
}

// watch waits for a call in a process. It kills the process when that uses more memory than its calls may or gives no
// sign of life; when ctx ends, the call is asked to end, and if it does not within the grace, its process is killed.
func watch[T any](ctx context.Context, o Options, p *process, id string, call func() (T, error)) (T, error) {
	type result struct {
		value T
		err   error
	}
	done := make(chan result, 1)
	go func() {
		v, err := call()
		done <- result{v, err}
	}()
	pulse := time.NewTicker(o.Silence / 2)
	defer pulse.Stop()
	weigh := time.NewTicker(memoryEvery)
	defer weigh.Stop()
	for {
		select {
		case r := <-done:
			return r.value, r.err
		case <-weigh.C:
			p.checkMemory()
		case <-pulse.C:
			go func() {
				if !p.answers(o.Silence) {
					p.kill(fault.New(fault.Crash, "the process did not answer for %v and was killed", o.Silence).
						In("run", p.label).With(p.printed.Last()))
				}
			}()
		case <-ctx.Done():
			var none T
			return none, p.cancel(ctx, o.Grace, id, func(grace time.Duration) bool {
				select {
				case <-done:
					return true
				case <-time.After(grace):
					return false
				}
			})
		}
	}
}

// memoryEvery is how often the memory of a process is looked at.
const memoryEvery = 200 * time.Millisecond

// WatchesMemory tells whether this system lets the host see what memory a process has for itself. Where it does not, no
// process is killed for using more than it was granted.
func WatchesMemory() bool { return memoryOf(os.Getpid()) > 0 }

// checkMemory kills a process that uses more than its steps may.
func (p *process) checkMemory() {
	may := p.service.granted()
	if may == 0 {
		return
	}
	if uses := memoryOf(p.child.cmd.Process.Pid); uses > may {
		go p.kill(fault.New(fault.Limit, "the process used %d MiB, where %d MiB were granted, and was killed", uses>>20, may>>20).
			In("run", p.label).Of("memory_limit").Do("raise memory_limit or --memory, or make the step smaller"))
	}
}

// cancel asks a call to end and kills its process when it does not.
func (p *process) cancel(ctx context.Context, grace time.Duration, id string, ends func(time.Duration) bool) error {
	f := fault.From(ctx.Err()).In("run", p.label)
	ask, stop := context.WithTimeout(context.Background(), grace)
	defer stop()
	go func() { _, _ = p.rpc.Cancel(ask, &wire.CancelRequest{Call: id}) }()
	if ends(grace) {
		return f
	}
	p.kill(fault.New(fault.Cancelled, "the process was killed because another call in it did not end when asked to").In("run", p.label))
	f.Text += "; it did not end within " + grace.String() + " and its process was killed"
	return f
}

// run reads the events of one step to the last.
func (p *process) run(ctx context.Context, request *wire.RunRequest, call *stage.Call) (*stage.Outcome, error) {
	stream, err := p.rpc.Run(ctx, request)
	if err != nil {
		return nil, p.callFault(err)
	}
	for {
		event, err := stream.Recv()
		if errors.Is(err, io.EOF) {
			return nil, fault.New(fault.Protocol, "the process ended the call without a result").In("run", p.label).With(p.printed.Last())
		}
		if err != nil {
			return nil, p.callFault(err)
		}
		switch e := event.GetEvent().(type) {
		case *wire.RunEvent_Progress:
			call.Report.Progress(e.Progress.GetPhase(), e.Progress.GetFraction())
		case *wire.RunEvent_Log:
			call.Report.Log(stage.Level(e.Log.GetLevel()), e.Log.GetText(), e.Log.Pairs()...)
		case *wire.RunEvent_Failed:
			call.Files.Add(wire.DecodeFiles(e.Failed.GetFiles())...)
			if err := wire.DecodeFault(e.Failed.GetFaultJson()); err != nil {
				return nil, err
			}
			return nil, fault.New(fault.Protocol, "the process reported a failure without saying which").In("run", p.label)
		case *wire.RunEvent_Finished:
			call.Files.Add(wire.DecodeFiles(e.Finished.GetFiles())...)
			o := &stage.Outcome{}
			if err := json.Unmarshal(e.Finished.GetOutcomeJson(), o); err != nil {
				return nil, fault.New(fault.Protocol, "the outcome cannot be read: %v", err).In("run", p.label)
			}
			return o, nil
		}
	}
}
