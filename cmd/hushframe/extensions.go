package main

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/pins"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/host"
	"hushframe/plugins/scaffold"
	"hushframe/plugins/wire"
)

func (a *app) extensionsCommand() *cobra.Command {
	var asJSON bool
	c := &cobra.Command{
		Use:   "extensions [JOB]",
		Short: "List the extensions found, and which a job may start",
		Long: `Lists the executables in the folder "extensions" beside a job and in your own, with
their checksums and how they stand to the pins file of the job, extensions.pins.json.
Nothing is started by this. A job starts only what is pinned and unchanged.`,
		Args:              wants(0, 1, "one job at most is wanted; \"pin\" and \"new\" come before it"),
		ValidArgsFunction: completeJob,
	}
	c.Flags().BoolVar(&asJSON, "json", false, "write the list as JSON")
	c.RunE = func(c *cobra.Command, args []string) error {
		folder := ""
		if len(args) == 1 {
			var err error
			if folder, err = jobFolder(args[0]); err != nil {
				return err
			}
		}
		return a.listExtensions(folder, asJSON)
	}
	c.AddCommand(a.pinCommand(), a.newCommand())
	return c
}

// listed is one line of the list.
type listed struct {
	Name    string   `json:"name"`
	Version string   `json:"version,omitempty"`
	Offers  []string `json:"offers,omitempty"`
	State   string   `json:"state"`
	Path    string   `json:"path,omitempty"`
	SHA256  string   `json:"sha256,omitempty"`
	Pinned  string   `json:"pinned,omitempty"`
}

func (a *app) listExtensions(folder string, asJSON bool) error {
	found, err := host.Search(host.Folders(folder))
	if err != nil {
		return err
	}
	file := &pins.File{}
	if folder != "" {
		if file, err = pins.Read(folder); err != nil {
			return err
		}
	}
	list := []listed{}
	for _, x := range found {
		l := listed{Name: x.Name, Path: x.Path, SHA256: x.SHA256, State: "not pinned"}
		if p, ok := file.Find(x.Name); ok {
			l.Version, l.Offers, l.Pinned = p.Version, p.Offers, p.SHA256[pins.Platform()]
			switch l.Pinned {
			case x.SHA256:
				l.State = "pinned"
			case "":
				l.State = "not pinned for " + pins.Platform()
			default:
				l.State = "differs from its pin"
			}
		}
		if x.Refused != "" {
			l.State = "refused: " + x.Refused
		}
		list = append(list, l)
	}
	for _, p := range file.Extensions {
		if !slices.ContainsFunc(list, func(l listed) bool { return l.Name == p.Name }) {
			list = append(list, listed{Name: p.Name, Version: p.Version, Offers: p.Offers, State: "pinned, not found", Pinned: p.SHA256[pins.Platform()]})
		}
	}
	if asJSON {
		e := json.NewEncoder(a.out)
		e.SetIndent("", "  ")
		return e.Encode(list)
	}
	section := stage.Section{Title: "Extensions", Columns: []stage.Column{{Name: "name"}, {Name: "version"}, {Name: "offers"}, {Name: "state"}, {Name: "SHA-256"}, {Name: "found at"}}}
	for _, l := range list {
		section.Rows = append(section.Rows, []string{l.Name, l.Version, strings.Join(l.Offers, ", "), l.State, short(l.SHA256), l.Path})
	}
	if len(list) == 0 {
		section.Columns, section.Text = nil, "none found"
	}
	writeSection(a.out, section)
	fmt.Fprintf(a.out, "\nLooked in:\n")
	for _, f := range host.Folders(folder) {
		fmt.Fprintf(a.out, "  %s\n", f)
	}
	return nil
}

func short(sum string) string { return sum[:min(12, len(sum))] }

func (a *app) pinCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "pin JOB [NAME...]",
		Short: "Write the pins file of a job: trust the extensions found, or those named",
		Long: `Starts each extension found in the folders to hear what it offers, and writes its name,
version, protocol and SHA-256 for this platform into extensions.pins.json beside the job.
Do this only for programs that you would run yourself, then look at the change in git.`,
		Example:           "  hushframe extensions pin baseline.hcl pebble",
		Args:              wants(1, -1, "a job is wanted, and the names of extensions if not all are meant"),
		ValidArgsFunction: completeJob,
		RunE: func(c *cobra.Command, args []string) error {
			folder, err := jobFolder(args[0])
			if err != nil {
				return err
			}
			return a.pin(c.Context(), folder, args[1:])
		},
	}
}

func (a *app) newCommand() *cobra.Command {
	var source, name string
	c := &cobra.Command{
		Use:   "new stage|element|reader FOLDER",
		Short: "Write a new extension that builds, passes its tests and runs in a sample job",
		Long: `Writes a Go module for an extension into a new folder: main, the thing itself, its
tests with the conformance suite, a README and a sample job. Everything works as it
stands; DEVELOPERS.md tells how to go on.`,
		Example:   "  hushframe extensions new reader ~/my-recorder --source ~/hushframe",
		Args:      wants(2, 2, "a kind (stage, element or reader) and a folder are wanted"),
		ValidArgs: scaffold.Kinds(),
	}
	c.Flags().StringVar(&source, "source", "", "folder of a checkout of hushframe (default: the one this is called in)")
	c.Flags().StringVar(&name, "name", "", "name used in jobs (default: the name of the folder)")
	c.RunE = func(c *cobra.Command, args []string) error {
		folder, err := filepath.Abs(args[1])
		if err != nil {
			return err
		}
		if name == "" {
			name = filepath.Base(folder)
		}
		if source == "" {
			source = checkout()
		}
		files, err := scaffold.Write(scaffold.Options{Kind: args[0], Name: name, Folder: folder, Source: source})
		if err != nil {
			return err
		}
		for _, f := range files {
			fmt.Fprintln(a.out, filepath.Join(args[1], filepath.FromSlash(f)))
		}
		fmt.Fprintf(a.out, "\nNext:\n  cd %s\n  go test .\n  go build -o extensions/ .\n  hushframe extensions pin job.hcl\n  hushframe run job.hcl\n", args[1])
		return nil
	}
	return c
}

// checkout is the nearest folder above that holds a go.mod, or this one.
func checkout() string {
	at, err := os.Getwd()
	if err != nil {
		return "."
	}
	for dir := at; ; dir = filepath.Dir(dir) {
		if _, err := os.Stat(filepath.Join(dir, "go.mod")); err == nil {
			return dir
		}
		if filepath.Dir(dir) == dir {
			return at
		}
	}
}

func (a *app) pin(ctx context.Context, folder string, names []string) error {
	found, err := host.Search(host.Folders(folder))
	if err != nil {
		return err
	}
	file, err := pins.Read(folder)
	if err != nil {
		return err
	}
	wanted := func(x host.Found) bool { return len(names) == 0 || slices.Contains(names, x.Name) }
	var known []string
	for _, x := range found {
		known = append(known, x.Name)
	}
	for _, n := range names {
		if !slices.Contains(known, n) {
			return fault.New(fault.Missing, "there is no extension %q%s", n, suggest(n, known)).In("pin", folder).
				Do("put its executable in %s", strings.Join(host.Folders(folder), " or "))
		}
	}
	done := map[string]bool{}
	for _, x := range found {
		if !wanted(x) || done[x.Name] { // the folder of the job goes before the user's
			continue
		}
		done[x.Name] = true
		if x.Refused != "" {
			return fault.New(fault.Input, "%s, so its checksum would say nothing", x.Refused).In("pin", x.Name).Do("take that right away")
		}
		p, err := a.learn(ctx, x)
		if err != nil {
			return err
		}
		old, had := file.Find(x.Name)
		dropped := file.Set(p)
		before := "new"
		switch {
		case had && old.SHA256[pins.Platform()] == x.SHA256:
			before = "as before"
		case had && old.SHA256[pins.Platform()] != "":
			before = "was " + old.SHA256[pins.Platform()]
		}
		fmt.Fprintf(a.out, "%s %s (%s)\n  offers %s\n  SHA-256 %s for %s, %s\n", x.Name, p.Version, x.Path, strings.Join(p.Offers, ", "), x.SHA256, pins.Platform(), before)
		for _, platform := range dropped {
			fmt.Fprintf(a.out, "  the sum for %s was that of version %s and is gone; pin it there again\n", platform, old.Version)
		}
	}
	if len(done) == 0 {
		return fault.New(fault.Missing, "no extension was found").In("pin", folder).Do("put its executable in %s", strings.Join(host.Folders(folder), " or "))
	}
	return file.Write(folder)
}

// learn starts an extension to hear what it offers.
func (a *app) learn(ctx context.Context, x host.Found) (pins.Pin, error) {
	h, err := host.Open(ctx, host.Options{Extensions: []host.Executable{x.Executable}, Output: func(process, line string) { a.log.Debug().Str("step", process).Msg(line) }})
	if err != nil {
		return pins.Pin{}, err
	}
	defer h.Close()
	if err := a.checkTools(h); err != nil {
		return pins.Pin{}, err
	}
	p := pins.Pin{Name: x.Name, Protocol: wire.ProtocolVersion, SHA256: map[string]string{pins.Platform(): x.SHA256}}
	for _, d := range h.Descriptions() {
		p.Version, p.Offers = d.Version, append(p.Offers, "stage "+d.Name)
	}
	for _, t := range h.Extensions() {
		p.Version, p.Offers = t.Version, append(p.Offers, t.Kind+" "+t.Name)
	}
	if len(p.Offers) == 0 {
		return p, fault.New(fault.Protocol, "it offers nothing").In("pin", x.Name)
	}
	slices.Sort(p.Offers)
	return p, nil
}

// pinned gives the extensions that jobs of a folder may start: pinned there, found, and unchanged. One that was found
// only with another content is refused; one that was not found at all is missed only when a job names what it offers.
func (a *app) pinned(folder string) ([]host.Executable, error) {
	file, err := pins.Read(folder)
	if err != nil || len(file.Extensions) == 0 {
		return nil, err
	}
	found, err := host.Search(host.Folders(folder))
	if err != nil {
		return nil, err
	}
	var out []host.Executable
	for _, p := range file.Extensions {
		want := p.SHA256[pins.Platform()]
		var other *host.Found
		matched := false
		for i, x := range found {
			if x.Name != p.Name || matched {
				continue
			}
			if x.SHA256 == want && x.Refused == "" {
				out, matched = append(out, x.Executable), true
			} else if other == nil {
				other = &found[i]
			}
		}
		if matched {
			continue
		}
		switch {
		case p.Protocol != wire.ProtocolVersion:
			return nil, fault.New(fault.Input, "it was pinned with version %d of the protocol, this program speaks version %d", p.Protocol, wire.ProtocolVersion).
				In("use extension", p.Name).Do("use a build for this version and pin it")
		case other == nil:
			a.log.Warn().Msg(fmt.Sprintf("extension %s is pinned, but was not found in %s", p.Name, strings.Join(host.Folders(folder), " or ")))
		case other.Refused != "":
			return nil, fault.New(fault.Input, "%s", other.Refused).In("use extension", p.Name).Do("take that right away, then compare the executable with its pin")
		case want == "":
			return nil, fault.New(fault.Input, "it is not pinned for %s; the one at %s has SHA-256 %s", pins.Platform(), other.Path, other.SHA256).
				In("use extension", p.Name).Do("if you trust it: hushframe extensions pin JOB %s", p.Name)
		default:
			return nil, fault.New(fault.Input, "the executable at %s differs from its pin: it has SHA-256 %s, pinned is %s", other.Path, other.SHA256, want).
				In("use extension", p.Name).Do("put the pinned version back; or, if you trust this one: hushframe extensions pin JOB %s", p.Name)
		}
	}
	return out, nil
}

// absent says why a stage cannot be had that an extension would offer, nil when none is known.
func (a *app) absent(what, path string) error {
	folder, err := jobFolder(path)
	if err != nil {
		return nil // said elsewhere
	}
	file, err := pins.Read(folder)
	if err != nil {
		return err
	}
	if p, ok := file.Offering(what); ok {
		return fault.New(fault.Input, "extension %s offers it, but was not found in %s", p.Name, strings.Join(host.Folders(folder), " or "))
	}
	found, err := host.Search(host.Folders(folder))
	if err != nil || len(found) == 0 {
		return nil
	}
	var loose []string
	for _, x := range found {
		if _, ok := file.Find(x.Name); !ok {
			loose = append(loose, x.Name)
		}
	}
	if len(loose) == 0 {
		return nil
	}
	return fault.New(fault.Input, "there is none installed; extensions that are not pinned are not asked: %s", strings.Join(loose, ", ")).
		Do("to trust one of them: hushframe extensions pin JOB NAME")
}
