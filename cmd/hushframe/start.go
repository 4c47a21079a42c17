package main

import (
	"fmt"
	"path/filepath"

	"github.com/spf13/cobra"

	"hushframe/stages/importgeom"
)

func (a *app) startCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "start FOLDER",
		Short: "Write a first airframe and job for a folder of cut files",
		Long: `Writes airframe.hcl and job.hcl beside the cut files in a folder: one plate for
each file, and a job that finds its modes. Files that are there are left alone.`,
		Args: wants(1, 1, "one folder of cut files is wanted"),
		ValidArgsFunction: func(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
			return nil, cobra.ShellCompDirectiveFilterDirs
		},
		RunE: func(_ *cobra.Command, args []string) error {
			written, remarks, err := importgeom.Scaffold(args[0])
			for _, name := range written {
				fmt.Fprintf(a.out, "wrote %s\n", filepath.Join(args[0], name))
			}
			if err != nil {
				return err
			}
			fmt.Fprintln(a.out, "\nNext:")
			for _, r := range remarks {
				fmt.Fprintf(a.out, "  - %s\n", r)
			}
			fmt.Fprintf(a.out, "  - hushframe run %s\n", filepath.Join(args[0], "job.hcl"))
			return nil
		},
	}
}
