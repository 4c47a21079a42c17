package serve

import (
	"context"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/wire"
)

// services reaches the host on behalf of one step.
type services struct {
	host wire.HostClient
	call string
}

var _ stage.Services = (*services)(nil)

// Keep asks the host for a kept folder and fills a fresh one if there is none.
func (s *services) Keep(ctx context.Context, key string, make func(folder string) error) (string, bool, error) {
	r, err := s.host.FindKept(ctx, &wire.FindKeptRequest{Call: s.call, Key: key})
	if err != nil {
		return "", false, hostGone(ctx, err)
	}
	if err := wire.DecodeFault(r.FaultJson); err != nil || r.Found {
		return r.Folder, r.Found, err
	}
	if err := make(r.Folder); err != nil {
		_, _ = s.host.CommitKept(ctx, &wire.CommitKeptRequest{Call: s.call, Ticket: r.Ticket, Abandon: true})
		return "", false, err
	}
	c, err := s.host.CommitKept(ctx, &wire.CommitKeptRequest{Call: s.call, Ticket: r.Ticket})
	if err != nil {
		return "", false, hostGone(ctx, err)
	}
	return c.Folder, false, wire.DecodeFault(c.FaultJson)
}

// Element relays a call to an element type.
func (s *services) Element(ctx context.Context, name string, request stage.ExtensionRequest) error {
	return s.relay(ctx, "element", name, request)
}

// Reader relays a call to a recording reader.
func (s *services) Reader(ctx context.Context, name string, request stage.ExtensionRequest) error {
	return s.relay(ctx, "reader", name, request)
}

func (s *services) relay(ctx context.Context, kind, name string, request stage.ExtensionRequest) error {
	data, err := wire.EncodeRequest(request)
	if err != nil {
		return err
	}
	r, err := s.host.Relay(ctx, &wire.RelayRequest{Call: s.call, Kind: kind, Name: name, RequestJson: data})
	if err != nil {
		return hostGone(ctx, err)
	}
	return wire.DecodeFault(r.FaultJson)
}

// Extensions lists what can be reached.
func (s *services) Extensions(ctx context.Context) ([]stage.Extension, error) {
	r, err := s.host.Extensions(ctx, &wire.ExtensionsRequest{Call: s.call})
	if err != nil {
		return nil, hostGone(ctx, err)
	}
	if err := wire.DecodeFault(r.FaultJson); err != nil {
		return nil, err
	}
	return wire.DecodeEach[stage.Extension](r.ToolsJson)
}

func hostGone(ctx context.Context, err error) error {
	if ctx.Err() != nil {
		return fault.From(ctx.Err())
	}
	return fault.New(fault.Protocol, "the host does not answer: %v", err)
}
