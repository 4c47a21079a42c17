package serve

import (
	"context"
	"errors"
	"os"
	"runtime"
	"runtime/debug"
	"strings"
	"sync"

	plugin "github.com/hashicorp/go-plugin"
	"google.golang.org/grpc"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/wire"
)

// adapter joins an offer to go-plugin.
type adapter struct {
	plugin.NetRPCUnsupportedPlugin
	offer   Offer
	streams [2]*os.File // standard output and error of the process
}

var _ plugin.GRPCPlugin = (*adapter)(nil)

// GRPCServer registers the offer with the server of this process.
func (a *adapter) GRPCServer(broker *plugin.GRPCBroker, s *grpc.Server) error {
	wire.RegisterExtensionServer(s, &server{
		offer:    a.offer,
		streams:  a.streams,
		dial:     func(stream uint32) (*grpc.ClientConn, error) { return broker.DialWithOptions(stream, limits()) },
		running:  map[string]context.CancelFunc{},
		granted:  map[string]share{},
		setShare: setShare,
	})
	return nil
}

// GRPCClient is for the host, which has its own adapter.
func (a *adapter) GRPCClient(context.Context, *plugin.GRPCBroker, *grpc.ClientConn) (any, error) {
	return nil, errors.New("serve: this is the side of the extension")
}

func limits() grpc.DialOption {
	return grpc.WithDefaultCallOptions(grpc.MaxCallRecvMsgSize(wire.MessageLimit), grpc.MaxCallSendMsgSize(wire.MessageLimit))
}

// server answers the host.
type server struct {
	wire.UnimplementedExtensionServer
	offer    Offer
	streams  [2]*os.File // of the process
	dial     func(stream uint32) (*grpc.ClientConn, error)
	setShare func(share)

	mu      sync.Mutex
	host    wire.HostClient
	running map[string]context.CancelFunc
	granted map[string]share
}

// Attach dials the host service at once: the broker forgets an offered
// stream after some seconds. It also puts back standard output and error,
// which go-plugin sends through the connection: what is printed just before
// the process crashes would be lost there, and the host reads the originals.
func (s *server) Attach(_ context.Context, r *wire.AttachRequest) (*wire.AttachReply, error) {
	if s.streams[0] != nil {
		os.Stdout, os.Stderr = s.streams[0], s.streams[1]
	}
	conn, err := s.dial(r.HostStream)
	if err != nil {
		return nil, err
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	s.host = wire.NewHostClient(conn)
	return &wire.AttachReply{}, nil
}

// Describe lists the offer.
func (s *server) Describe(context.Context, *wire.DescribeRequest) (*wire.DescribeReply, error) {
	var stages []stage.Description
	for _, x := range s.offer.Stages {
		d := x.Describe()
		d.Version = s.offer.version()
		stages = append(stages, d)
	}
	var tools []stage.Extension
	for _, x := range s.offer.tools() {
		d := x.Describe()
		d.Version = s.offer.version()
		tools = append(tools, d)
	}
	r := &wire.DescribeReply{}
	var err error
	if r.StagesJson, err = wire.EncodeEach(stages); err != nil {
		return nil, err
	}
	r.ToolsJson, err = wire.EncodeEach(tools)
	return r, err
}

// Run runs one step.
func (s *server) Run(r *wire.RunRequest, stream grpc.ServerStreamingServer[wire.RunEvent]) error {
	ctx, cancel := context.WithCancel(stream.Context())
	defer cancel()
	s.begin(r.Call, share{int(r.Threads), r.Memory}, cancel)
	defer s.end(r.Call)
	out := &events{stream: stream}
	call, err := wire.DecodeCall(r)
	if err != nil {
		return out.failed(err, nil)
	}
	call.Report = out
	s.mu.Lock()
	call.Services = &services{host: s.host, call: r.Call}
	s.mu.Unlock()
	outcome, err := s.run(ctx, r.Stage, call)
	if err != nil {
		return out.failed(err, call.Files.Used())
	}
	return out.finished(outcome, call.Files.Used())
}

func (s *server) run(ctx context.Context, name string, call *stage.Call) (o *stage.Outcome, err error) {
	for _, x := range s.offer.Stages {
		if x.Describe().Name == name {
			return guarded(func() (*stage.Outcome, error) { return x.Run(ctx, call) })
		}
	}
	return nil, fault.New(fault.Protocol, "this process has no stage %q", name)
}

// guarded turns a panic into a fault with its stack.
func guarded[T any](f func() (T, error)) (v T, err error) {
	defer func() {
		if r := recover(); r != nil {
			stack := strings.Split(strings.TrimSpace(string(debug.Stack())), "\n")
			err = fault.New(fault.Internal, "a mistake in the program: %v", r).With(stack)
		}
	}()
	return f()
}

// Cancel ends the context of a step; an unknown one has ended already.
func (s *server) Cancel(_ context.Context, r *wire.CancelRequest) (*wire.CancelReply, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if cancel, ok := s.running[r.Call]; ok {
		cancel()
	}
	return &wire.CancelReply{}, nil
}

// Relay calls a tool.
func (s *server) Relay(ctx context.Context, r *wire.RelayRequest) (*wire.RelayReply, error) {
	for _, t := range s.offer.tools() {
		if d := t.Describe(); d.Kind == r.Kind && d.Name == r.Name {
			_, err := guarded(func() (any, error) {
				request, err := wire.DecodeRequest(r.RequestJson)
				if err != nil {
					return nil, err
				}
				ctx, cancel := context.WithCancel(ctx)
				defer cancel()
				s.begin(r.Call, share{request.Threads, request.Memory}, cancel)
				defer s.end(r.Call)
				return nil, t.Call(ctx, request)
			})
			return &wire.RelayReply{FaultJson: wire.EncodeFault(err)}, nil
		}
	}
	return &wire.RelayReply{FaultJson: wire.EncodeFault(fault.New(fault.Protocol, "this process has no %s %q", r.Kind, r.Name))}, nil
}

// share is what the host granted to one step.
type share struct {
	threads int
	memory  int64
}

func (s *server) begin(call string, granted share, cancel context.CancelFunc) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.running[call] = cancel
	s.granted[call] = granted
	s.setShare(s.sum())
}

func (s *server) end(call string) {
	s.mu.Lock()
	defer s.mu.Unlock()
	delete(s.running, call)
	delete(s.granted, call)
	if len(s.granted) > 0 {
		s.setShare(s.sum())
	}
}

// sum is the share of the whole process; one step without a memory limit
// lifts it.
func (s *server) sum() share {
	var total share
	unlimited := false
	for _, g := range s.granted {
		total.threads += g.threads
		total.memory += g.memory
		unlimited = unlimited || g.memory == 0
	}
	if unlimited {
		total.memory = 0
	}
	return total
}

// setShare makes the Go runtime keep to the share: as many threads, and a
// garbage collector that works harder near the memory limit.
func setShare(s share) {
	if s.threads > 0 {
		runtime.GOMAXPROCS(s.threads)
	}
	if s.memory > 0 {
		debug.SetMemoryLimit(s.memory)
	} else {
		debug.SetMemoryLimit(1<<63 - 1)
	}
}
