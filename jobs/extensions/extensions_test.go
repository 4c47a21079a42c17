package extensions

import (
	"errors"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"runtime"
	"strconv"
	"strings"
	"testing"
)

// shop is the recipe copied to a folder of its own, with the programs built from their modules.
type shop struct {
	t       *testing.T
	program string
	folder  string // of the job
}

func exe(path string) string {
	if runtime.GOOS == "windows" {
		return path + ".exe"
	}
	return path
}

func open(t *testing.T) *shop {
	t.Helper()
	root := t.TempDir()
	s := &shop{t: t, program: exe(filepath.Join(root, "hushframe")), folder: filepath.Join(root, "jobs", "extensions")}
	s.build("../..", "./cmd/hushframe", s.program)
	for _, name := range []string{"arm.hcl", "clamp.hcl", "job.hcl", "bench.pebble"} {
		s.copy(name, filepath.Join(s.folder, name))
	}
	for _, name := range []string{"arm.dxf", "clamp.dxf"} {
		s.copy("../sandpiper/cut/"+name, filepath.Join(root, "jobs", "sandpiper", "cut", name))
	}
	for _, name := range []string{"pebble", "wedge", "vtkmodes"} {
		s.build("../../plugins/"+name, ".", exe(filepath.Join(s.folder, "extensions", name)))
	}
	return s
}

// build builds a module's main package outside of this module's own build.
func (s *shop) build(module, main, to string) {
	s.t.Helper()
	c := exec.Command("go", "build", "-o", to, main)
	c.Dir = module
	if out, err := c.CombinedOutput(); err != nil {
		s.t.Fatalf("build %s: %v\n%s", module, err, out)
	}
}

func (s *shop) copy(from, to string) {
	s.t.Helper()
	data, err := os.ReadFile(from)
	if err == nil {
		err = os.MkdirAll(filepath.Dir(to), 0o755)
	}
	if err == nil {
		err = os.WriteFile(to, data, 0o644)
	}
	if err != nil {
		s.t.Fatal(err)
	}
}

// call runs the program and gives its exit code and all it wrote.
func (s *shop) call(args ...string) (int, string) {
	s.t.Helper()
	c := exec.Command(s.program, args...)
	c.Env = append(os.Environ(), "HUSHFRAME_EXTENSIONS="+filepath.Join(s.folder, "none"))
	out, err := c.CombinedOutput()
	var exit *exec.ExitError
	if err != nil && !errors.As(err, &exit) {
		s.t.Fatal(err)
	}
	return c.ProcessState.ExitCode(), string(out)
}

// modes reads the frequencies from the table of a stage.
func modes(t *testing.T, out, label string) []float64 {
	t.Helper()
	_, table, ok := strings.Cut(out, "\nModes of "+label+"\n")
	if !ok {
		t.Fatalf("no table of modes of %s in\n%s", label, out)
	}
	table, _, _ = strings.Cut(table, "\nRotor speeds")
	var all []float64
	for _, m := range regexp.MustCompile(`(?m)^ +\d+ +([0-9.]+) `).FindAllStringSubmatch(table, -1) {
		v, err := strconv.ParseFloat(m[1], 64)
		if err != nil {
			t.Fatal(err)
		}
		all = append(all, v)
	}
	return all
}

// The recipe: nothing runs that is not pinned; pinned, a reader, an element type and a stage from outside do their work
// in processes of their own, and solids agree with shells; a changed executable is refused.
func TestRecipe(t *testing.T) {
	s := open(t)
	job := filepath.Join(s.folder, "job.hcl")
	wants := func(code int, out string, want int, words ...string) {
		t.Helper()
		flat := strings.Join(strings.Fields(out), " ")
		if code != want {
			t.Fatalf("exit %d, want %d:\n%s", code, want, out)
		}
		for _, w := range words {
			if !strings.Contains(flat, w) {
				t.Errorf("%q is missing in\n%s", w, out)
			}
		}
	}
	code, out := s.call("run", job)
	wants(code, out, 2, `element cannot be "solid-wedge"`, `reader cannot be "pebble"`, `stage "vtk-modes" cannot be used`, "extensions that are not pinned are not asked: pebble, vtkmodes, wedge")
	code, out = s.call("extensions", "pin", job)
	wants(code, out, 0, "offers element solid-wedge", "offers reader pebble", "offers stage vtk-modes")
	code, out = s.call("run", job)
	wants(code, out, 0, "every requirement holds", "2000 Hz, 5 s to 8.1995 s, 1 gaps", "shapes wrote")
	for _, plate := range []string{"arm", "clamp"} {
		shell, solid := modes(t, out, plate+"_shell"), modes(t, out, plate+"_solid")
		if len(shell) != 5 || len(solid) != 5 {
			t.Fatalf("%s: %d and %d modes", plate, len(shell), len(solid))
		}
		for i := range shell {
			// The bound is ours: what plate theory and both meshes may put off together.
			if d := solid[i]/shell[i] - 1; math.Abs(d) > 5e-3 || d == 0 {
				t.Errorf("%s, mode %d: shell %.1f Hz, solid %.1f Hz, %+.2f %%", plate, i+1, shell[i], solid[i], 100*d)
			}
		}
	}
	code, out = s.call("run", job)
	wants(code, out, 0, "12 steps: 12 as before")
	code, out = s.call("stages", "solid-wedge", "--job", job)
	wants(code, out, 0, "layers whole number, from 1, up to 8 2 wedges through the thickness", "normal_modulus")

	// An option that is not one is found in the job, with its place.
	text, err := os.ReadFile(job)
	if err != nil {
		t.Fatal(err)
	}
	wrong := filepath.Join(s.folder, "wrong.hcl")
	if err := os.WriteFile(wrong, []byte(strings.Replace(string(text), "layers = setting.layers", "layers = 99", 1)), 0o644); err != nil {
		t.Fatal(err)
	}
	code, out = s.call("check", wrong)
	wants(code, out, 2, "options.layers", "99", `in stage "mesh" "arm_solid_mesh"`)

	// One byte more, and it is refused with both sums.
	wedge := exe(filepath.Join(s.folder, "extensions", "wedge"))
	data, err := os.ReadFile(wedge)
	if err == nil {
		err = os.WriteFile(wedge, append(data, 0), 0o755)
	}
	if err != nil {
		t.Fatal(err)
	}
	code, out = s.call("run", job)
	wants(code, out, 2, "use extension: wedge: the executable at", "differs from its pin: it has SHA-256")
	if sums := regexp.MustCompile(`\b[0-9a-f]{64}\b`).FindAllString(out, -1); len(sums) != 2 || sums[0] == sums[1] {
		t.Errorf("it shows the sums %v", sums)
	}
	code, out = s.call("extensions", job)
	wants(code, out, 0, "wedge 1.0.0 element solid-wedge differs from its pin", "pebble 1.0.0 reader pebble pinned")

	// What anyone may write to is never looked at.
	if runtime.GOOS != "windows" {
		if err := os.Chmod(wedge, 0o777); err != nil {
			t.Fatal(err)
		}
		code, out = s.call("extensions", "pin", job, "wedge")
		wants(code, out, 2, "anyone may write to")
	}
}
