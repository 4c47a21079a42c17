// Package wire is the process boundary as it looks on the wire: the messages,
// the handshake and the conversions between messages and the plain types of
// core/pipeline/stage. It decides nothing; plugins/host and plugins/serve do.
//
// A process is started with go-plugin's handshake (gRPC, protocol version 1).
// The host sends its certificate in PLUGIN_CLIENT_CERT; the process makes its
// own, sends it back in the handshake line, and each side trusts only the
// other. The host then calls Attach, Describe, and Run once per step.
//
// Messages are small: bulk data lies in artifact folders and scratch files.
// Both sides refuse messages above MessageLimit.
package wire

//go:generate protoc --go_out=. --go_opt=paths=source_relative --go-grpc_out=. --go-grpc_opt=paths=source_relative hushframe.proto

import (
	plugin "github.com/hashicorp/go-plugin"
)

// ProtocolVersion is raised when a change of the messages would break an
// extension built before it. Added fields do not.
const ProtocolVersion = 1

// MessageLimit is the largest message either side accepts, in bytes.
const MessageLimit = 32 << 20

// PluginName is the one plugin of the set both sides agree on.
const PluginName = "extension"

// StdinEnv is set to "1" when standard input is a pipe that the host never
// writes to: its end means that the host is gone, and the process must exit.
const StdinEnv = "HUSHFRAME_WATCH_STDIN"

// Handshake tells a process that a host started it.
func Handshake() plugin.HandshakeConfig {
	return plugin.HandshakeConfig{
		ProtocolVersion:  ProtocolVersion,
		MagicCookieKey:   "HUSHFRAME_EXTENSION",
		MagicCookieValue: "a5cf7d23-one-step-of-a-job",
	}
}
