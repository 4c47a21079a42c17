package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"sync"
	"syscall"

	"github.com/mattn/go-isatty"
	"github.com/rs/zerolog"
	"github.com/spf13/cobra"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/host"
)

// Exit codes, as the help states them.
const (
	exitHeld    = 0   // all went well and every requirement holds
	exitFailed  = 1   // a stage failed
	exitUsage   = 2   // the job or the command line is wrong
	exitBroken  = 3   // a requirement is broken
	exitStopped = 130 // stopped by Ctrl-C
)

const exitHelp = `Exit codes:
  0    all went well and every requirement holds
  1    a stage failed
  2    the job or the command line is wrong
  3    a requirement is broken
  130  stopped by Ctrl-C`

// app is one call of the program. Its streams are fields, so that tests run
// commands in process.
type app struct {
	builtin []stage.Stage
	out     io.Writer // results
	err     io.Writer // progress, log lines, diagnostics
	// color and live say whether err is a terminal that shows colours and bars.
	color, live bool
	// blocks says whether out is a terminal that shows block characters.
	blocks bool
	// watchesMemory says whether processes above their memory are ended here.
	watchesMemory bool

	logFormat string
	verbose   bool
	log       zerolog.Logger
	logOut    *redirect // below log
}

// redirect is a writer that can be turned elsewhere while others write to it.
type redirect struct {
	mu sync.Mutex
	w  io.Writer
}

func (r *redirect) Write(p []byte) (int, error) {
	r.mu.Lock()
	defer r.mu.Unlock()
	return r.w.Write(p)
}

func (r *redirect) to(w io.Writer) {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.w = w
}

func newApp(builtin []stage.Stage, out, err *os.File) *app {
	isTerminal := func(f *os.File) bool { return isatty.IsTerminal(f.Fd()) || isatty.IsCygwinTerminal(f.Fd()) }
	terminal := isTerminal(err)
	return &app{
		builtin: builtin, out: out, err: err,
		color:  terminal && os.Getenv("NO_COLOR") == "",
		live:   terminal && os.Getenv("TERM") != "dumb",
		blocks: showsBlocks(isTerminal(out), os.Getenv), watchesMemory: host.WatchesMemory(),
	}
}

// exitError ends the program with a code; what there was to say has been said.
type exitError int

func (e exitError) Error() string { return fmt.Sprintf("exit code %d", int(e)) }

// main runs one command and gives the exit code.
func (a *app) main(ctx context.Context, args []string) int {
	ctx, stop := signal.NotifyContext(ctx, os.Interrupt, syscall.SIGTERM)
	defer stop()
	// After the first Ctrl-C the second one ends the program at once.
	defer context.AfterFunc(ctx, stop)()
	root := a.root()
	root.SetArgs(args)
	called, err := root.ExecuteContextC(ctx)
	var code exitError
	switch {
	case err == nil:
		return exitHeld
	case errors.As(err, &code):
		return int(code)
	case ctx.Err() != nil:
		return exitStopped
	}
	var f *fault.Error
	if errors.As(err, &f) {
		a.fault(f)
		if f.Kind == fault.Input || f.Kind == fault.Missing {
			return exitUsage
		}
		return exitFailed
	}
	if a.logOut == nil { // the flags were not read to the end, but how to say so may be among them
		flags := root.PersistentFlags()
		flags.ParseErrorsAllowlist.UnknownFlags = true
		_ = flags.Parse(args)
		_ = a.openLog()
	}
	if a.logFormat == "json" {
		a.log.Error().Str("event", "usage").Msg(err.Error())
		return exitUsage
	}
	fmt.Fprintf(a.err, "Error: %s\nTry %q.\n", err, helpOf(called))
	return exitUsage
}

// fault says what went wrong outside of any step.
func (a *app) fault(f *fault.Error) {
	if a.logFormat == "json" {
		a.log.Error().Str("event", "fault").Interface("fault", f).Msg(f.Error())
		return
	}
	fmt.Fprintf(a.err, "Error: %s\n", f)
	for _, line := range f.Lines {
		fmt.Fprintf(a.err, "  | %s\n", line)
	}
}

func (a *app) root() *cobra.Command {
	root := &cobra.Command{
		Use:   "hushframe",
		Short: "Predict, check and correct the structural vibration of small multirotor airframes",
		Long: `Hushframe predicts, checks and corrects the structural vibration of small
multirotor airframes. A job file says what to do; results are kept beside it in
.hushframe, so that only what has changed is computed again.

` + exitHelp,
		SilenceUsage:  true,
		SilenceErrors: true,
		PersistentPreRunE: func(*cobra.Command, []string) error {
			return a.openLog()
		},
	}
	root.SetFlagErrorFunc(flagError)
	root.SetOut(a.out)
	root.SetErr(a.err)
	root.PersistentFlags().StringVar(&a.logFormat, "log", "human", "form of log lines: human or json")
	root.PersistentFlags().BoolVarP(&a.verbose, "verbose", "v", false, "also log what only helps to find mistakes")
	root.AddCommand(a.runCommand(), a.checkCommand(), a.chainCommand(), a.stagesCommand(), a.inspectCommand(), a.diffCommand(), a.runsCommand(), a.startCommand(), a.extensionsCommand(),
		a.pruneCommand(), a.versionCommand())
	strictHelp(root)
	return root
}

func (a *app) openLog() error {
	a.logOut = &redirect{w: a.err}
	var w io.Writer = a.logOut
	switch a.logFormat {
	case "json":
		a.live = false
	case "human":
		w = a.humanLog(w)
	default:
		return fault.New(fault.Input, "--log is %q; it can be human or json", a.logFormat)
	}
	level := zerolog.InfoLevel
	if a.verbose {
		level = zerolog.DebugLevel
	}
	a.log = zerolog.New(w).Level(level)
	if a.logFormat == "json" {
		a.log = a.log.With().Timestamp().Logger()
	}
	return nil
}

// humanLog writes log lines for people: "step: text name=value".
func (a *app) humanLog(w io.Writer) zerolog.ConsoleWriter {
	return zerolog.ConsoleWriter{
		Out: w, NoColor: !a.color,
		PartsOrder:    []string{"step", zerolog.LevelFieldName, zerolog.MessageFieldName},
		FieldsExclude: []string{"step"},
		FormatPartValueByName: func(v any, _ string) string {
			if s, ok := v.(string); ok {
				return s + ":"
			}
			return ""
		},
		FormatMessage: func(v any) string {
			s, _ := v.(string)
			return s
		},
		FormatLevel: func(v any) string {
			if v == "warn" || v == "error" {
				return v.(string) + ":"
			}
			return ""
		},
	}
}

// lines shows what the process of a failed step printed last. A log for
// machines has it with the end of the step.
func (a *app) lines(label string, f *fault.Error) {
	for ; f != nil && a.logFormat != "json"; f = f.Cause {
		if len(f.Lines) == 0 {
			continue
		}
		fmt.Fprintf(a.err, "Last lines of %s:\n", label)
		for _, line := range f.Lines {
			fmt.Fprintf(a.err, "  | %s\n", line)
		}
	}
}
