// Command vtkmodes is an extension: a stage that exports mode shapes to VTK XML for general viewers.
package main

import (
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/serve"
)

func main() {
	serve.Main(serve.Offer{Version: "1.0.0", Stages: []stage.Stage{Stage{}}})
}
