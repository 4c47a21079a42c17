package host

import (
	"context"
	"crypto/tls"
	"errors"
	"strconv"
	"sync"

	plugin "github.com/hashicorp/go-plugin"
	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/wire"
)

// hostStream is the broker stream of the host service; each process has a
// broker of its own, and no other stream.
const hostStream = 1

// adapter joins the host service of one process to go-plugin.
type adapter struct {
	plugin.NetRPCUnsupportedPlugin
	service *service
	trust   *tls.Config
}

var _ plugin.GRPCPlugin = (*adapter)(nil)

// GRPCServer is for the extension, which has its own adapter.
func (a *adapter) GRPCServer(*plugin.GRPCBroker, *grpc.Server) error {
	return errors.New("host: this is the side of the host")
}

// GRPCClient serves the host service on the broker and gives the connection.
func (a *adapter) GRPCClient(_ context.Context, broker *plugin.GRPCBroker, conn *grpc.ClientConn) (any, error) {
	// Not by AcceptAndServe, which prints its errors to standard error.
	listener, err := broker.Accept(hostStream)
	if err != nil {
		return nil, err
	}
	s := grpc.NewServer(grpc.Creds(credentials.NewTLS(a.trust)),
		grpc.MaxRecvMsgSize(wire.MessageLimit), grpc.MaxSendMsgSize(wire.MessageLimit))
	wire.RegisterHostServer(s, a.service)
	a.service.mu.Lock()
	a.service.server = s
	a.service.mu.Unlock()
	go func() { _ = s.Serve(listener) }() // ends with Stop
	return conn, nil
}

// service answers one process on behalf of the steps that run in it.
type service struct {
	wire.UnimplementedHostServer

	mu       sync.Mutex
	server   *grpc.Server
	next     int
	sessions map[string]*session
}

// session is one running step.
type session struct {
	id   string
	ctx  context.Context
	stop context.CancelFunc
	call *stage.Call // nil for a call of an element type or reader
	// memory is what it may use, bytes; 0 for no limit.
	memory int64

	mu      sync.Mutex
	next    int
	pending map[string]chan error // tickets of folders being filled
	kept    map[string]chan kept
}

type kept struct {
	folder string
	found  bool
	err    error
}

func newService() *service { return &service{sessions: map[string]*session{}} }

// stop ends the service with its process.
func (x *service) stop() {
	x.mu.Lock()
	s := x.server
	x.mu.Unlock()
	if s != nil {
		s.Stop()
	}
}

func (x *service) begin(ctx context.Context, call *stage.Call) *session {
	return x.enter(ctx, call, call.Memory)
}

func (x *service) enter(ctx context.Context, call *stage.Call, memory int64) *session {
	x.mu.Lock()
	defer x.mu.Unlock()
	x.next++
	s := &session{id: strconv.Itoa(x.next), call: call, memory: memory, pending: map[string]chan error{}, kept: map[string]chan kept{}}
	s.ctx, s.stop = context.WithCancel(ctx)
	x.sessions[s.id] = s
	return s
}

// end forgets a step; folders it left half filled are given up.
func (x *service) end(s *session) {
	s.stop()
	x.mu.Lock()
	defer x.mu.Unlock()
	delete(x.sessions, s.id)
}

// granted is the memory that the running steps may use together; 0 when one of
// them has no limit.
func (x *service) granted() int64 {
	x.mu.Lock()
	defer x.mu.Unlock()
	var total int64
	for _, s := range x.sessions {
		if s.memory == 0 {
			return 0
		}
		total += s.memory
	}
	return total
}

func (x *service) session(id string) (*session, error) {
	x.mu.Lock()
	defer x.mu.Unlock()
	s, ok := x.sessions[id]
	if !ok || s.call == nil {
		return nil, fault.New(fault.Protocol, "no step %q runs in this process", id)
	}
	return s, nil
}

// FindKept runs Keep of the step up to the point where the folder is known.
func (x *service) FindKept(ctx context.Context, r *wire.FindKeptRequest) (*wire.FindKeptReply, error) {
	s, err := x.session(r.Call)
	if err != nil {
		return &wire.FindKeptReply{FaultJson: wire.EncodeFault(err)}, nil
	}
	fresh, filled, result := make(chan string, 1), make(chan error, 1), make(chan kept, 1)
	go func() {
		folder, found, err := s.call.Services.Keep(s.ctx, r.Key, func(folder string) error {
			fresh <- folder
			select {
			case err := <-filled:
				return err
			case <-s.ctx.Done():
				return s.ctx.Err()
			}
		})
		result <- kept{folder, found, err}
	}()
	select {
	case folder := <-fresh:
		s.mu.Lock()
		defer s.mu.Unlock()
		s.next++
		ticket := strconv.Itoa(s.next)
		s.pending[ticket], s.kept[ticket] = filled, result
		return &wire.FindKeptReply{Folder: folder, Ticket: ticket}, nil
	case k := <-result:
		return &wire.FindKeptReply{Folder: k.folder, Found: k.found, FaultJson: wire.EncodeFault(k.err)}, nil
	case <-ctx.Done():
		return nil, ctx.Err()
	}
}

// CommitKept lets Keep of the step finish.
func (x *service) CommitKept(ctx context.Context, r *wire.CommitKeptRequest) (*wire.CommitKeptReply, error) {
	s, err := x.session(r.Call)
	if err != nil {
		return &wire.CommitKeptReply{FaultJson: wire.EncodeFault(err)}, nil
	}
	s.mu.Lock()
	filled, result := s.pending[r.Ticket], s.kept[r.Ticket]
	delete(s.pending, r.Ticket)
	delete(s.kept, r.Ticket)
	s.mu.Unlock()
	if filled == nil {
		return &wire.CommitKeptReply{FaultJson: wire.EncodeFault(fault.New(fault.Protocol, "there is no ticket %q", r.Ticket))}, nil
	}
	if r.Abandon {
		filled <- fault.New(fault.Cancelled, "the folder was given up")
		return &wire.CommitKeptReply{}, nil
	}
	filled <- nil
	select {
	case k := <-result:
		return &wire.CommitKeptReply{Folder: k.folder, FaultJson: wire.EncodeFault(k.err)}, nil
	case <-ctx.Done():
		return nil, ctx.Err()
	}
}

// Relay passes a call on to the services of the step.
func (x *service) Relay(ctx context.Context, r *wire.RelayRequest) (*wire.RelayReply, error) {
	s, err := x.session(r.Call)
	if err == nil {
		err = relay(ctx, s.call.Services, r)
	}
	return &wire.RelayReply{FaultJson: wire.EncodeFault(err)}, nil
}

func relay(ctx context.Context, services stage.Services, r *wire.RelayRequest) error {
	request, err := wire.DecodeRequest(r.RequestJson)
	if err != nil {
		return err
	}
	switch r.Kind {
	case "element":
		return services.Element(ctx, r.Name, request)
	case "reader":
		return services.Reader(ctx, r.Name, request)
	}
	return fault.New(fault.Protocol, "%q is neither element nor reader", r.Kind)
}

// Extensions lists what the services of the step reach.
func (x *service) Extensions(ctx context.Context, r *wire.ExtensionsRequest) (*wire.ExtensionsReply, error) {
	s, err := x.session(r.Call)
	if err != nil {
		return &wire.ExtensionsReply{FaultJson: wire.EncodeFault(err)}, nil
	}
	list, err := s.call.Services.Extensions(ctx)
	if err != nil {
		return &wire.ExtensionsReply{FaultJson: wire.EncodeFault(err)}, nil
	}
	data, err := wire.EncodeEach(list)
	return &wire.ExtensionsReply{ToolsJson: data, FaultJson: wire.EncodeFault(err)}, nil
}
