// Hushframe predicts, checks and corrects the structural vibration of small
// multirotor airframes. Run it without arguments for its verbs.
//
// The same executable runs each built-in stage, in a process of its own, when
// a host starts it for that.
package main

import (
	"context"
	"os"

	"hushframe/plugins/serve"
	"hushframe/stages"
)

func main() {
	if serve.Started() {
		serve.Stages(stages.Builtin()...)
	}
	a := newApp(stages.Builtin(), os.Stdout, os.Stderr)
	os.Exit(a.main(context.Background(), os.Args[1:]))
}
