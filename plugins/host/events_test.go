package host

import (
	"context"
	"io"
	"reflect"
	"strings"
	"testing"

	"google.golang.org/grpc"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/wire"
)

// scripted is an extension that sends given events.
type scripted struct {
	wire.ExtensionClient
	grpc.ServerStreamingClient[wire.RunEvent]
	events []*wire.RunEvent
}

func (s *scripted) Run(context.Context, *wire.RunRequest, ...grpc.CallOption) (grpc.ServerStreamingClient[wire.RunEvent], error) {
	return s, nil
}

func (s *scripted) Recv() (*wire.RunEvent, error) {
	if len(s.events) == 0 {
		return nil, io.EOF
	}
	e := s.events[0]
	s.events = s.events[1:]
	return e, nil
}

func finished(outcome string) *wire.RunEvent {
	return &wire.RunEvent{Event: &wire.RunEvent_Finished{Finished: &wire.Finished{OutcomeJson: []byte(outcome)}}}
}

func failed(f string) *wire.RunEvent {
	return &wire.RunEvent{Event: &wire.RunEvent_Failed{Failed: &wire.Failed{FaultJson: []byte(f)}}}
}

// An extension in another language may send anything that the messages allow.
func TestEventsOfStrangers(t *testing.T) {
	for name, c := range map[string]struct {
		events []*wire.RunEvent
		kind   fault.Kind
		want   string
	}{
		"nothing":           {nil, fault.Protocol, "the process ended the call without a result"},
		"empty events":      {[]*wire.RunEvent{{}, nil, {Event: &wire.RunEvent_Progress{}}, {Event: &wire.RunEvent_Log{}}}, fault.Protocol, "without a result"},
		"no outcome":        {[]*wire.RunEvent{finished("")}, fault.Protocol, "the outcome cannot be read"},
		"ill-typed outcome": {[]*wire.RunEvent{finished(`{"notes": 5}`)}, fault.Protocol, "the outcome cannot be read"},
		"ill-typed figure":  {[]*wire.RunEvent{finished(`{"figures": {"x": {"$number": "many"}}}`)}, fault.Protocol, "the outcome cannot be read"},
		"no fault":          {[]*wire.RunEvent{failed("")}, fault.Protocol, "a failure without saying which"},
		"ill-typed fault":   {[]*wire.RunEvent{failed("5")}, fault.Protocol, `a fault that cannot be read: "5"`},
		"fault of no kind":  {[]*wire.RunEvent{failed(`{"text": "x"}`)}, fault.Protocol, "a fault that cannot be read"},
		"fault":             {[]*wire.RunEvent{failed(`{"kind": "of tomorrow", "text": "x", "later": 1}`), finished("{}")}, "of tomorrow", "x"},
	} {
		p := &process{label: "stage strange", rpc: &scripted{events: c.events}, printed: &lines{}}
		call := &stage.Call{Report: newReporter(), Files: stage.NewFiles("")}
		o, err := p.run(context.Background(), &wire.RunRequest{}, call)
		if o != nil || fault.KindOf(err) != c.kind || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, %v; want %s", name, o, err, c.want)
		}
	}
}

func TestLines(t *testing.T) {
	var each []string
	l := &lines{each: func(s string) { each = append(each, s) }}
	for _, s := range []string{"one\ntw", "o\r\n\n", strings.Repeat("x", 2*lineLength), "\nb\xffd\nend"} {
		if n, err := l.Write([]byte(s)); n != len(s) || err != nil {
			t.Errorf("wrote %d of %d, %v", n, len(s), err)
		}
	}
	want := []string{"one", "two", strings.Repeat("x", lineLength), "b?d", "end"}
	if got := l.Last(); !reflect.DeepEqual(got, want) || !reflect.DeepEqual(each, want) {
		t.Errorf("kept %q, passed on %q", got, each)
	}
	for range 3 * keptLines {
		l.Write([]byte("more\n"))
	}
	if got := l.Last(); len(got) != keptLines || got[0] != "more" {
		t.Errorf("%d lines kept", len(got))
	}
}
