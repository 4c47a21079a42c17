// Command pebble is an extension: the reader of the recordings of an invented data logger. Its README describes the
// format.
package main

import (
	"hushframe/core/extension"
	"hushframe/plugins/serve"
)

func main() {
	serve.Main(serve.Offer{Version: "1.0.0", Readers: []extension.Reader{Reader{}}})
}
