package main

import (
	"errors"
	"fmt"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
)

// wants asks for a number of arguments, and says in words which.
func wants(least, most int, which string) cobra.PositionalArgs {
	return func(_ *cobra.Command, args []string) error {
		if len(args) < least || most >= 0 && len(args) > most {
			return errors.New(which)
		}
		return nil
	}
}

// oneJob wants a single job as argument.
var oneJob = wants(1, 1, "one job is wanted: a job file or a folder of them")

// amount reads the quantity that a flag gives. It cannot be negative, nor more than most (SI).
func amount(flag, text, dimension string, most float64) (float64, error) {
	q, err := quantity.ParseAs(text, dimension)
	switch {
	case err != nil:
		return 0, fault.From(err).In("read "+flag, text)
	case q.SI < 0:
		return 0, fault.New(fault.Input, "%s is %q; it cannot be negative", flag, text)
	case q.SI > most:
		return 0, fault.New(fault.Input, "%s is %q; that is more than can be counted", flag, text)
	}
	return q.SI, nil
}

// flagError says in words what is wrong with a flag.
func flagError(_ *cobra.Command, err error) error {
	var bad *pflag.InvalidValueError
	if !errors.As(err, &bad) {
		return err
	}
	due := map[string]string{"int": "a whole number", "bool": "true or false"}[bad.GetFlag().Value.Type()]
	if due == "" {
		return err
	}
	return fmt.Errorf("--%s is %q, but %s is due", bad.GetFlag().Name, bad.GetValue(), due)
}

// helpOf is the command that explains a verb.
func helpOf(c *cobra.Command) string {
	verb := strings.TrimPrefix(c.CommandPath(), c.Root().Name())
	if c.Name() == "help" {
		verb = ""
	}
	return c.Root().Name() + " help" + verb
}

// strictHelp makes the verbs that the library adds end with a mistake where their argument is unknown.
func strictHelp(root *cobra.Command) {
	root.InitDefaultHelpCmd()
	root.InitDefaultCompletionCmd()
	for _, c := range root.Commands() {
		switch c.Name() {
		case "help":
			c.Args = func(_ *cobra.Command, args []string) error {
				_, rest, err := root.Find(args)
				if err == nil && len(rest) > 0 {
					err = fmt.Errorf("there is no verb %q", strings.Join(args, " "))
				}
				return err
			}
		case "completion":
			c.RunE = func(*cobra.Command, []string) error {
				return errors.New("a shell is wanted: bash, fish, powershell or zsh")
			}
		}
	}
}
