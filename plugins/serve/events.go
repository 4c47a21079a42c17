package serve

import (
	"encoding/json"
	"strings"
	"sync"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/protobuf/proto"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/wire"
)

// progressEvery is the shortest time between two progress events of a phase.
const progressEvery = 50 * time.Millisecond

// events is the reporter of one step; it sends what the step says.
type events struct {
	stream grpc.ServerStreamingServer[wire.RunEvent]

	mu    sync.Mutex // a stream takes one sender at a time
	phase string
	last  time.Time
	done  bool
}

var _ stage.Reporter = (*events)(nil)

// Progress sends a phase and its fraction, unless one was sent just now.
func (e *events) Progress(phase string, fraction float64) {
	e.mu.Lock()
	defer e.mu.Unlock()
	now := time.Now()
	if phase == e.phase && fraction < 1 && now.Sub(e.last) < progressEvery {
		return
	}
	e.phase, e.last = phase, now
	e.send(&wire.RunEvent{Event: &wire.RunEvent_Progress{Progress: &wire.Progress{Phase: phase, Fraction: fraction}}})
}

// longest is how much of a log line is sent; what is longer is no line.
const longest = 16 << 10

// Log sends one line.
func (e *events) Log(level stage.Level, text string, fields ...any) {
	if len(text) > longest {
		text = strings.ToValidUTF8(text[:longest], "") + "…"
	}
	e.mu.Lock()
	defer e.mu.Unlock()
	e.send(&wire.RunEvent{Event: &wire.RunEvent_Log{Log: wire.EncodeLog(level, text, fields)}})
}

// send drops what a goroutine left behind says after the last event. A broken
// stream ends the context of the step, so its error needs no other answer.
func (e *events) send(ev *wire.RunEvent) {
	if !e.done {
		_ = e.stream.Send(ev)
	}
}

func (e *events) finished(o *stage.Outcome, files []stage.FileUse) error {
	if o == nil {
		o = &stage.Outcome{}
	}
	data, err := json.Marshal(o)
	if err != nil {
		return e.failed(fault.New(fault.Internal, "the outcome cannot be sent: %v", err), files)
	}
	ev := &wire.RunEvent{Event: &wire.RunEvent_Finished{Finished: &wire.Finished{OutcomeJson: data, Files: wire.EncodeFiles(files)}}}
	if n := proto.Size(ev); n > wire.MessageLimit {
		return e.failed(fault.New(fault.Limit, "figures and summary take %d MiB, where %d are allowed", n>>20, wire.MessageLimit>>20).
			Do("put bulk data in an artifact"), nil)
	}
	return e.end(ev)
}

func (e *events) failed(err error, files []stage.FileUse) error {
	return e.end(&wire.RunEvent{Event: &wire.RunEvent_Failed{Failed: &wire.Failed{FaultJson: wire.EncodeFault(err), Files: wire.EncodeFiles(files)}}})
}

func (e *events) end(ev *wire.RunEvent) error {
	e.mu.Lock()
	defer e.mu.Unlock()
	e.done = true
	return e.stream.Send(ev)
}
