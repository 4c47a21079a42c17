package main

import (
	"fmt"
	"runtime"
	"runtime/debug"

	"github.com/spf13/cobra"

	"hushframe/plugins/host"
	"hushframe/plugins/wire"
)

// release is the version of a release; the build sets it.
var release = ""

// program is name and version, as reports state it.
func program() string {
	v := release
	if v == "" {
		v = "(development)"
	}
	return "hushframe " + v
}

func (a *app) versionCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "version",
		Short: "Show the version of this program and what it was built with",
		Args:  cobra.NoArgs,
		RunE: func(*cobra.Command, []string) error {
			fmt.Fprintln(a.out, program())
			fmt.Fprintf(a.out, "protocol of extensions %d\n", wire.ProtocolVersion)
			fmt.Fprintf(a.out, "built with %s for %s/%s\n", runtime.Version(), runtime.GOOS, runtime.GOARCH)
			if info, ok := debug.ReadBuildInfo(); ok {
				for _, s := range info.Settings {
					if s.Key == "vcs.revision" {
						fmt.Fprintf(a.out, "from revision %s\n", s.Value)
					}
				}
			}
			self, err := host.Self()
			if err != nil {
				return err
			}
			fmt.Fprintf(a.out, "SHA-256 %s\n", self.SHA256)
			return nil
		},
	}
}
