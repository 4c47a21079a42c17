package main

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/spf13/cobra"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/nearest"
	"hushframe/core/pipeline/pins"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/host"
	"hushframe/stages/kinds"
)

// jobFlags are the flags of every verb that reads a job.
type jobFlags struct {
	set []string
}

func (f *jobFlags) add(c *cobra.Command) {
	c.Flags().StringArrayVar(&f.set, "set", nil, "give a setting another value: NAME=VALUE (may be repeated)")
}

func (f *jobFlags) settings() (map[string]string, error) {
	set := map[string]string{}
	for _, s := range f.set {
		name, value, ok := strings.Cut(s, "=")
		if !ok || name == "" {
			return nil, fault.New(fault.Input, "--set %s: write NAME=VALUE, such as --set arm_thickness=6mm", s)
		}
		if _, dup := set[name]; dup {
			return nil, fault.New(fault.Input, "--set gives %s twice", name)
		}
		set[name] = value
	}
	return set, nil
}

// registry holds every artifact kind: those of the stages and that of the host.
func registry() artifact.Registry {
	r := kinds.Registry()
	if _, taken := r[account.KindName]; !taken {
		r[account.KindName] = account.Kind
	}
	return r
}

// openHost makes the host with the extensions that are pinned for the jobs of a folder ("" for none). Only those are
// started, to be described.
func (a *app) openHost(ctx context.Context, folder string) (*host.Host, error) {
	self, err := host.Self()
	if err != nil {
		return nil, err
	}
	var trusted []host.Executable
	if folder != "" {
		if trusted, err = a.pinned(folder); err != nil {
			return nil, err
		}
	}
	h, err := host.Open(ctx, a.hostOptions(self, trusted))
	if err != nil {
		return nil, err
	}
	if err := a.checkTools(h); err != nil {
		h.Close()
		return nil, err
	}
	return h, nil
}

func (a *app) hostOptions(self host.Executable, extensions []host.Executable) host.Options {
	return host.Options{
		Self: self, Builtin: a.builtin, Extensions: extensions,
		Output: func(process, line string) { a.log.Debug().Str("step", process).Msg(line) },
	}
}

// checkTools refuses element types and readers that say what no job could use, or take a built-in name.
func (a *app) checkTools(h *host.Host) error {
	taken := map[string]bool{}
	for _, s := range a.builtin {
		for _, x := range s.Describe().Arguments {
			for _, c := range x.Choices {
				taken[x.Extension+" "+c] = true
			}
		}
	}
	for _, x := range h.Extensions() {
		if err := job.CheckExtension(x); err != nil {
			return fault.From(err).In("describe", x.Kind+" "+x.Name)
		}
		if taken[x.Kind+" "+x.Name] {
			return fault.New(fault.Input, "it has the name of a built-in %s", x.Kind).In("describe", x.Kind+" "+x.Name).Do("its author has to choose another name")
		}
	}
	return nil
}

// load reads and checks a job and plans it. What is wrong has been written
// when it returns an exit error.
func (a *app) load(ctx context.Context, h *host.Host, path string, f *jobFlags) (*plan.Plan, error) {
	set, err := f.settings()
	if err != nil {
		return nil, err
	}
	all := registry()
	j, diags := job.Load(ctx, path, job.Options{
		Set: set,
		Describe: func(_ context.Context, name string) (stage.Description, error) {
			s, ok := h.Stage(name)
			if !ok {
				if err := a.absent("stage "+name, path); err != nil {
					return stage.Description{}, err
				}
				return stage.Description{}, fault.New(fault.Missing, "there is no stage %q", name)
			}
			return s.Describe(), nil
		},
		StageNames: func() []string { return a.stageNames(h) },
		Kinds:      func(kind string) bool { _, ok := all[kind]; return ok },
		Extensions: h.Extensions(),
		Absent:     func(kind, name string) error { return a.absent(kind+" "+name, path) },
	})
	var p *plan.Plan
	if !diags.HasErrors() {
		// The account of the run, and so the report, tells what was trusted.
		if text, err := os.ReadFile(filepath.Join(j.Folder, pins.FileName)); err == nil {
			j.Sources = append(j.Sources, job.Source{Name: pins.FileName, File: pins.FileName, Bytes: text})
		}
		var more hcl.Diagnostics
		p, more = plan.Make(j)
		diags = append(append(diags, more...), a.unwatched(j)...)
	}
	a.diagnose(j, diags)
	if diags.HasErrors() {
		return nil, exitError(exitUsage)
	}
	return p, nil
}

func (a *app) stageNames(h *host.Host) []string {
	var names []string
	for _, d := range h.Descriptions() {
		names = append(names, d.Name)
	}
	return names
}

// diagnose writes diagnostics with the lines of the job they are about, or as
// JSON with their places.
func (a *app) diagnose(j *job.Job, diags hcl.Diagnostics) {
	if len(diags) == 0 {
		return
	}
	if a.logFormat != "json" {
		_ = job.WriteDiagnostics(a.err, diags, j.Sources, 100, a.color)
		return
	}
	for _, d := range diags {
		e := a.log.Error()
		if d.Severity == hcl.DiagWarning {
			e = a.log.Warn()
		}
		e = e.Str("event", "diagnostic")
		if d.Subject != nil {
			e = e.Str("file", d.Subject.Filename).Int("line", d.Subject.Start.Line).Int("column", d.Subject.Start.Column)
		}
		if d.Detail != "" {
			e = e.Str("detail", d.Detail)
		}
		e.Msg(d.Summary)
	}
}

// jobFolder is the folder of a job file or the job folder itself, where the
// store lies.
func jobFolder(path string) (string, error) {
	info, err := os.Stat(path)
	if err != nil {
		return "", fault.New(fault.Missing, "there is no job %s", path).Do("name a job file or a folder of them")
	}
	if info.IsDir() {
		return path, nil
	}
	return filepath.Dir(path), nil
}

// jobName is the name under which the last run of a job is noted.
func jobName(path string) string {
	if abs, err := filepath.Abs(path); err == nil {
		path = abs
	}
	return filepath.Base(path)
}

// completeJob completes job files and folders.
func completeJob(_ *cobra.Command, args []string, _ string) ([]string, cobra.ShellCompDirective) {
	if len(args) > 0 {
		return nil, cobra.ShellCompDirectiveNoFileComp
	}
	return []string{"hcl"}, cobra.ShellCompDirectiveFilterFileExt
}

// suggest gives the end of a message about an unknown name.
func suggest(name string, names []string) string {
	if n := nearest.Name(name, names); n != "" {
		return fmt.Sprintf("; did you mean %q?", n)
	}
	if len(names) == 0 {
		return ""
	}
	return "; there are: " + strings.Join(names, ", ")
}
