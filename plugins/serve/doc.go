// Package serve is what the main function of an extension calls:
//
//	func main() {
//		serve.Stages(mystage.Stage{})
//	}
//
// The executable then answers the host over the protocol of plugins/wire.
// Started by hand it says what it is and ends with status 2.
//
// What serve takes care of, so that no author has to: the handshake and the
// certificates; message sizes; progress at a bearable rate; standard output
// and standard error, which go to the host's log; panics, which become faults;
// cancellation, as the context of Run; and the end of the process when the
// host goes away. Code that ignores its context is killed after a grace.
package serve

import (
	"fmt"
	"io"
	"os"
	"path/filepath"
	"runtime/debug"

	hclog "github.com/hashicorp/go-hclog"
	plugin "github.com/hashicorp/go-plugin"
	"google.golang.org/grpc"

	"hushframe/core/extension"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/wire"
)

// Offer is all that one executable offers.
type Offer struct {
	// Version is that of the executable, such as "1.2.0"; left empty, the
	// version of its main module, where the build states one.
	Version  string
	Stages   []stage.Stage
	Elements []extension.Element
	Readers  []extension.Reader
	// Tools are offered by method, without the help of package extension.
	Tools []stage.Tool
}

// Stages serves stages and ends the process.
func Stages(stages ...stage.Stage) { Main(Offer{Stages: stages}) }

// Elements serves element types and ends the process.
func Elements(elements ...extension.Element) { Main(Offer{Elements: elements}) }

// Readers serves recording readers and ends the process.
func Readers(readers ...extension.Reader) { Main(Offer{Readers: readers}) }

// version is what the executable says of itself.
func (o Offer) version() string {
	if o.Version != "" {
		return o.Version
	}
	if info, ok := debug.ReadBuildInfo(); ok && info.Main.Version != "(devel)" {
		return info.Main.Version
	}
	return ""
}

// tools lists all that is called by method.
func (o Offer) tools() []stage.Tool {
	var all []stage.Tool
	for _, e := range o.Elements {
		all = append(all, extension.ElementTool(e))
	}
	for _, r := range o.Readers {
		all = append(all, extension.ReaderTool(r))
	}
	return append(all, o.Tools...)
}

// Started reports whether a host started this process as an extension.
func Started() bool {
	h := wire.Handshake()
	return os.Getenv(h.MagicCookieKey) == h.MagicCookieValue
}

// Main serves an offer and ends the process.
func Main(offer Offer) {
	if !Started() {
		explain(os.Stderr, offer)
		os.Exit(2)
	}
	if os.Getenv(wire.StdinEnv) == "1" {
		go watch(os.Stdin, func() { os.Exit(3) })
	}
	streams := [2]*os.File{os.Stdout, os.Stderr}
	plugin.Serve(&plugin.ServeConfig{
		HandshakeConfig: wire.Handshake(),
		Plugins:         plugin.PluginSet{wire.PluginName: &adapter{offer: offer, streams: streams}},
		TLSProvider:     provideTLS,
		GRPCServer:      newServer,
		Logger:          hclog.New(&hclog.LoggerOptions{Level: hclog.Error, Output: os.Stderr}),
	})
	os.Exit(0)
}

// explain is what a person sees who starts an extension by hand.
func explain(w io.Writer, offer Offer) {
	fmt.Fprintf(w, "%s is an extension for hushframe and does nothing on its own.\nIt offers", filepath.Base(os.Args[0]))
	for _, s := range offer.Stages {
		d := s.Describe()
		fmt.Fprintf(w, "\n  the stage %q: %s", d.Name, d.About)
	}
	for _, t := range offer.tools() {
		d := t.Describe()
		fmt.Fprintf(w, "\n  the %s %q: %s", d.Kind, d.Name, d.About)
	}
	fmt.Fprint(w, "\nPut it in the folder \"extensions\" beside a job, or in yours, and pin it: hushframe extensions pin JOB.\n")
}

// watch calls gone when the pipe from the host ends.
func watch(r io.Reader, gone func()) {
	io.Copy(io.Discard, r)
	gone()
}

func newServer(opts []grpc.ServerOption) *grpc.Server {
	return grpc.NewServer(append(opts, grpc.MaxRecvMsgSize(wire.MessageLimit), grpc.MaxSendMsgSize(wire.MessageLimit))...)
}
