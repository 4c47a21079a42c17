// Command build bundles the front end of the report page: it installs the packages of the lock file, has the types
// checked, and writes bundle/page.js, with the licences of what is in it. The same sources give the same bytes.
package main

import (
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"sort"
	"strings"

	"github.com/evanw/esbuild/pkg/api"
)

func main() {
	quick := flag.Bool("quick", false, "use the packages that are installed already, and leave types unchecked")
	flag.Parse()
	if err := build(*quick); err != nil {
		fmt.Fprintln(os.Stderr, "build:", err)
		os.Exit(1)
	}
}

// front is the folder of the front end, seen from here.
const front = ".."

func build(quick bool) error {
	if !quick {
		// No scripts of packages are run, and nothing but what the lock file names is installed.
		if err := run("npm", "ci", "--ignore-scripts", "--no-audit", "--no-fund", "--loglevel=error"); err != nil {
			return err
		}
		if err := run(filepath.Join("node_modules", ".bin", "tsc"), "--project", "tsconfig.json"); err != nil {
			return err
		}
	}
	r := api.Build(api.BuildOptions{
		AbsWorkingDir:     must(filepath.Abs(front)),
		EntryPoints:       []string{"src/main.ts"},
		Bundle:            true,
		Format:            api.FormatIIFE,
		Target:            api.ES2022,
		Charset:           api.CharsetASCII,
		MinifyWhitespace:  true,
		MinifyIdentifiers: true,
		MinifySyntax:      true,
		LegalComments:     api.LegalCommentsNone, // the banner has the licences whole
		TreeShaking:       api.TreeShakingTrue,
		Metafile:          true,
		LogLevel:          api.LogLevelInfo,
		Outfile:           "bundle/page.js",
	})
	if len(r.Errors) > 0 {
		return fmt.Errorf("%d errors", len(r.Errors))
	}
	banner, err := licences(r.Metafile)
	if err != nil {
		return err
	}
	code := append([]byte(banner), r.OutputFiles[0].Contents...)
	if i := strings.Index(strings.ToLower(string(code)), "</script"); i >= 0 {
		return fmt.Errorf("the bundle would end its own script element at byte %d", i)
	}
	if err := os.MkdirAll(filepath.Join(front, "bundle"), 0o755); err != nil {
		return err
	}
	return os.WriteFile(filepath.Join(front, "bundle", "page.js"), code, 0o644)
}

// licences gathers the licence of every package in the bundle into one comment.
func licences(metafile string) (string, error) {
	packages := map[string]bool{}
	for _, part := range strings.Split(metafile, `"`) {
		rest, ok := strings.CutPrefix(part, "node_modules/")
		if !ok {
			continue
		}
		name, rest, _ := strings.Cut(rest, "/")
		if strings.HasPrefix(name, "@") {
			scoped, _, _ := strings.Cut(rest, "/")
			name += "/" + scoped
		}
		packages[name] = true
	}
	names := make([]string, 0, len(packages))
	for name := range packages {
		names = append(names, name)
	}
	sort.Strings(names)
	var b strings.Builder
	b.WriteString("/* Made by `go generate ./stages/report/front` from stages/report/front/src. It holds these packages:\n")
	for _, name := range names {
		text, err := os.ReadFile(filepath.Join(front, "node_modules", filepath.FromSlash(name), "LICENSE"))
		if err != nil {
			return "", fmt.Errorf("%s has no licence: %w", name, err)
		}
		fmt.Fprintf(&b, "\n--- %s ---\n%s\n", name, strings.TrimSpace(strings.ReplaceAll(strings.ReplaceAll(string(text), "\r\n", "\n"), "*/", "* /")))
	}
	b.WriteString("*/\n")
	return b.String(), nil
}

func run(name string, args ...string) error {
	c := exec.Command(name, args...)
	c.Dir = front
	c.Stdout, c.Stderr = os.Stderr, os.Stderr
	if err := c.Run(); err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	return nil
}

func must[T any](x T, err error) T {
	if err != nil {
		panic(err)
	}
	return x
}
