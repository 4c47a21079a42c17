package host

import (
	"context"
	"encoding/pem"
	"errors"
	"fmt"
	"os/exec"
	"strings"
	"sync"
	"time"

	hclog "github.com/hashicorp/go-hclog"
	plugin "github.com/hashicorp/go-plugin"
	"github.com/hashicorp/go-plugin/runner"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/health/grpc_health_v1"
	"google.golang.org/grpc/status"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/wire"
)

// process is one running extension.
type process struct {
	label   string // "stage solve"
	child   *child
	client  *plugin.Client
	rpc     wire.ExtensionClient
	health  grpc_health_v1.HealthClient
	service *service
	printed *lines

	mu     sync.Mutex
	reason *fault.Error // why the host killed it
}

// start starts an executable and waits until it is attached.
func (h *Host) start(ctx context.Context, label string, e Executable, argument string) (*process, error) {
	if err := e.unchanged(); err != nil {
		return nil, fault.From(err).In("start", label)
	}
	certificate, trust, err := wire.NewIdentity()
	if err != nil {
		return nil, fault.New(fault.Internal, "no certificate can be made: %v", err).In("start", label)
	}
	p := &process{label: label, service: newService(), printed: &lines{}}
	if h.options.Output != nil {
		p.printed.each = func(line string) { h.options.Output(label, line) }
	}
	if p.child, err = newChild(e.file(), []string{e.Path, argument}, p.printed); err != nil {
		return nil, fault.New(fault.Limit, "%v", err).In("start", label)
	}
	p.client = plugin.NewClient(&plugin.ClientConfig{
		HandshakeConfig:  wire.Handshake(),
		Plugins:          plugin.PluginSet{wire.PluginName: &adapter{service: p.service, trust: trust}},
		AllowedProtocols: []plugin.Protocol{plugin.ProtocolGRPC},
		TLSConfig:        trust,
		StartTimeout:     2 * h.options.StartTimeout, // never before the one here
		GRPCDialOptions:  []grpc.DialOption{limits()},
		Stderr:           p.printed,
		SyncStdout:       p.printed,
		SyncStderr:       p.printed,
		// Its reader of log lines panics on some JSON; off, it does not parse.
		Logger: hclog.New(&hclog.LoggerOptions{Level: hclog.Off}),
		RunnerFunc: func(_ hclog.Logger, cmd *exec.Cmd, _ string) (runner.Runner, error) {
			p.child.cmd.Env = append(cmd.Env, wire.StdinEnv+"=1",
				wire.HostCertificateEnv+"="+string(pem.EncodeToMemory(&pem.Block{Type: "CERTIFICATE", Bytes: certificate})))
			return p.child, nil
		},
	})
	started := make(chan error, 1)
	go func() { started <- p.attach(h.options.StartTimeout) }()
	limit := time.NewTimer(h.options.StartTimeout)
	defer limit.Stop()
	late := false
	select {
	case err = <-started:
	case <-limit.C:
		late, err = true, errors.New("not ready in time")
	case <-ctx.Done():
		err = ctx.Err()
	}
	if err == nil {
		return p, nil
	}
	f := p.startFault(ctx, err, late, h.options.StartTimeout)
	go p.stop(0)
	return nil, f
}

func (p *process) attach(limit time.Duration) error {
	protocol, err := p.client.Client()
	if err != nil {
		return err
	}
	raw, err := protocol.Dispense(wire.PluginName)
	if err != nil {
		return err
	}
	conn := raw.(*grpc.ClientConn)
	p.rpc, p.health = wire.NewExtensionClient(conn), grpc_health_v1.NewHealthClient(conn)
	ctx, cancel := context.WithTimeout(context.Background(), limit)
	defer cancel()
	_, err = p.rpc.Attach(ctx, &wire.AttachRequest{HostStream: hostStream})
	return err
}

// startFault words why a process did not become ready.
func (p *process) startFault(ctx context.Context, err error, late bool, limit time.Duration) error {
	if ctx.Err() != nil {
		return fault.From(ctx.Err()).In("start", p.label)
	}
	var f *fault.Error
	line := p.child.stdout.First()
	version, shaken := handshakeVersion(line)
	switch {
	case !p.child.wasStarted():
		f = fault.New(fault.Missing, "the process cannot be started: %v", err)
	case line != "" && !shaken:
		f = fault.New(fault.Protocol, "it printed %.120q where the handshake of the protocol was due", line).
			Do("print nothing to standard output before serving")
	case shaken && version != fmt.Sprint(wire.ProtocolVersion):
		f = fault.New(fault.Protocol, "it speaks version %s of the protocol, this program version %d", version, wire.ProtocolVersion).
			Do("use an extension built for this version")
	case p.ended(200 * time.Millisecond):
		f = fault.New(fault.Crash, "the process ended at its start (%s)", p.child.state)
	case late:
		f = fault.New(fault.Crash, "the process was not ready within %v", limit)
	default:
		f = fault.New(fault.Protocol, "no connection could be made: %v", err)
	}
	return f.In("start", p.label).With(p.printed.Last())
}

// handshakeVersion reads the protocol version of a handshake line.
func handshakeVersion(line string) (string, bool) {
	parts := strings.Split(line, "|")
	if len(parts) < 5 || parts[4] != string(plugin.ProtocolGRPC) {
		return "", false
	}
	return parts[1], true
}

// ended reports whether the process ends by itself within a time.
func (p *process) ended(within time.Duration) bool {
	if p.child.stopping.Load() {
		return false
	}
	select {
	case <-p.child.exited:
		p.child.stderr.last()
		return true
	case <-time.After(within):
		return false
	}
}

func (p *process) alive() bool {
	select {
	case <-p.child.exited:
		return false
	default:
		return !p.child.stopping.Load()
	}
}

// kill ends the process at once; calls on it fail for the reason given.
func (p *process) kill(reason *fault.Error) {
	p.mu.Lock()
	if p.reason == nil {
		p.reason = reason
	}
	p.mu.Unlock()
	p.stop(0)
}

// stop ends the process politely within a grace, else by force, and waits.
func (p *process) stop(grace time.Duration) {
	p.child.stopping.Store(true)
	defer p.service.stop()
	done := make(chan struct{})
	if grace > 0 {
		go func() { p.client.Kill(); close(done) }()
		select {
		case <-done:
			return
		case <-time.After(grace):
		}
	}
	_ = p.child.Kill(context.Background())
	if grace > 0 {
		<-done
	} else {
		p.client.Kill()
	}
}

// callFault words why a call failed on the wire.
func (p *process) callFault(err error) *fault.Error {
	code := status.Code(err)
	var f *fault.Error
	p.mu.Lock()
	reason := p.reason
	p.mu.Unlock()
	switch {
	case reason != nil:
		return reason
	case code == codes.ResourceExhausted:
		f = fault.New(fault.Limit, "a message is larger than the %d MiB that the boundary passes", wire.MessageLimit>>20).
			Do("put bulk data in an artifact")
	case code == codes.Unimplemented:
		f = fault.New(fault.Protocol, "the process does not know this call: %s", status.Convert(err).Message())
	case p.ended(2 * time.Second):
		f = fault.New(fault.Crash, "the process ended without answering (%s)", p.child.state)
	case p.child.stopping.Load():
		f = fault.New(fault.Cancelled, "the process was stopped")
	default:
		f = fault.New(fault.Protocol, "the process answered with a failure: %s", status.Convert(err).Message())
	}
	return f.In("run", p.label).With(p.printed.Last())
}

// answers asks for a sign of life.
func (p *process) answers(within time.Duration) bool {
	ctx, cancel := context.WithTimeout(context.Background(), within)
	defer cancel()
	_, err := p.health.Check(ctx, &grpc_health_v1.HealthCheckRequest{Service: plugin.GRPCServiceName})
	return status.Code(err) != codes.DeadlineExceeded
}

func (p *process) describe(ctx context.Context) ([]stage.Description, []stage.Extension, error) {
	ctx, cancel := context.WithTimeout(ctx, 10*time.Second)
	defer cancel()
	r, err := p.rpc.Describe(ctx, &wire.DescribeRequest{})
	if err != nil {
		return nil, nil, p.callFault(err)
	}
	stages, err := wire.DecodeEach[stage.Description](r.StagesJson)
	if err != nil {
		return nil, nil, fault.From(err).In("describe", p.label)
	}
	tools, err := wire.DecodeEach[stage.Extension](r.ToolsJson)
	if err != nil {
		return nil, nil, fault.From(err).In("describe", p.label)
	}
	return stages, tools, nil
}

func (p *process) relay(ctx context.Context, call, kind, name string, request stage.ExtensionRequest) error {
	data, err := wire.EncodeRequest(request)
	if err != nil {
		return err
	}
	r, err := p.rpc.Relay(ctx, &wire.RelayRequest{Call: call, Kind: kind, Name: name, RequestJson: data})
	if ctx.Err() != nil {
		return fault.From(ctx.Err())
	}
	if err != nil {
		return p.callFault(err)
	}
	return wire.DecodeFault(r.FaultJson)
}

func limits() grpc.DialOption {
	return grpc.WithDefaultCallOptions(grpc.MaxCallRecvMsgSize(wire.MessageLimit), grpc.MaxCallSendMsgSize(wire.MessageLimit))
}
