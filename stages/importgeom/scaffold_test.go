package importgeom

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/stage"
)

// started copies cut files of testdata/geometry into a folder under new names and starts a frame there.
func started(t *testing.T, files map[string]string) (folder, airframe string, remarks []string) {
	t.Helper()
	folder = filepath.Join(t.TempDir(), "My Frame 3")
	if err := os.Mkdir(folder, 0o755); err != nil {
		t.Fatal(err)
	}
	for name, source := range files {
		data, err := os.ReadFile(filepath.Join("..", "..", "testdata", "geometry", filepath.FromSlash(source)))
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(folder, name), data, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	written, remarks, err := Scaffold(folder)
	if err != nil {
		t.Fatal(err)
	}
	if strings.Join(written, " ") != "airframe.hcl job.hcl" {
		t.Errorf("written %v", written)
	}
	text, err := os.ReadFile(filepath.Join(folder, "airframe.hcl"))
	if err != nil {
		t.Fatal(err)
	}
	return folder, string(text), remarks
}

// uncommented takes the # off the rotors.
func uncommented(t *testing.T, folder, text string) {
	t.Helper()
	var out []string
	inside := false
	for _, l := range strings.Split(text, "\n") {
		inside = inside || strings.HasPrefix(l, "# rotor")
		if inside {
			l = strings.TrimPrefix(l, "# ")
			inside = l != "}"
		}
		out = append(out, l)
	}
	if err := os.WriteFile(filepath.Join(folder, "airframe.hcl"), []byte(strings.Join(out, "\n")), 0o644); err != nil {
		t.Fatal(err)
	}
}

func TestScaffoldOfOnePlateRuns(t *testing.T) {
	folder, text, remarks := started(t, map[string]string{"Main Plate-3mm.DXF": "frame/cut/base.dxf"})
	for _, want := range []string{`plate "main_plate" {`, `outline   = "Main Plate-3mm.DXF"`, `layer     = "cut"`, `thickness = "3 mm" # from the file name`, `airframe "my_frame_3" {`} {
		if !strings.Contains(text, want) {
			t.Errorf("no %s in\n%s", want, text)
		}
	}
	if strings.Contains(text, "units") || len(remarks) != 1 {
		t.Errorf("remarks %v in\n%s", remarks, text)
	}
	out, _ := imported(t, folder, nil)
	if out.Figures["plates"] != 1.0 || out.Figures["rotors"] != 0.0 {
		t.Errorf("figures %v", out.Figures)
	}
	uncommented(t, folder, text)
	if out, _ = imported(t, folder, nil); out.Figures["rotors"] != 4.0 {
		t.Errorf("with the rotors filled in: %v", out.Figures)
	}
	for _, w := range out.Warnings { // all stand on the plate
		t.Errorf("%+v", w)
	}
	j, diags := job.Load(context.Background(), filepath.Join(folder, "job.hcl"), job.Options{
		Describe: func(_ context.Context, name string) (stage.Description, error) {
			if name == "import" {
				return Stage{}.Describe(), nil
			}
			return stage.Description{}, fault.New(fault.Missing, "not in this test")
		}})
	if j.Name != "my_frame_3" || len(j.Stages) != 5 {
		t.Errorf("job %q with %d stages: %v", j.Name, len(j.Stages), diags)
	}
}

func TestScaffoldGuesses(t *testing.T) {
	_, text, remarks := started(t, map[string]string{
		"2mm.dxf": "frame/cut/arm.dxf", "b 1p5mm.dxf": "dxf/no_unit.dxf", "b_4mm.dxf": "bad/cut/several.dxf", "c.dxf": "bad/cut/gap.dxf", "d.dxf": "dxf/layers_and_rest.dxf",
	})
	for _, want := range []string{
		`plate "plate" {`, `thickness = "2 mm" # from the file name`,
		`plate "b" {`, `thickness = "1.5 mm"`, `units     = "mm" # the file does not say; this makes it 150 mm by 100 mm`,
		`plate "b_2" {`, `pick      = ["0 mm", "0 mm"] # the largest of 2 outlines`,
		`layer     = "Outline"`, `thickness = "2 mm" # a guess`,
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %s in\n%s", want, text)
		}
	}
	said := strings.Join(remarks, "\n")
	if !strings.Contains(said, "c.dxf is left out: an outline is open") || !strings.Contains(said, "put the plates in place") {
		t.Errorf("remarks %v", remarks)
	}
}

func TestScaffoldRefuses(t *testing.T) {
	empty := t.TempDir()
	if _, _, err := Scaffold(empty); fault.KindOf(err) != fault.Missing || !strings.Contains(err.Error(), "holds no cut files") {
		t.Errorf("empty folder: %v", err)
	}
	if _, _, err := Scaffold(filepath.Join(empty, "nowhere")); fault.KindOf(err) != fault.Missing {
		t.Errorf("no folder: %v", err)
	}
	if err := os.WriteFile(filepath.Join(empty, "a.dxf"), []byte("nothing"), 0o644); err != nil {
		t.Fatal(err)
	}
	if _, _, err := Scaffold(empty); err == nil || !strings.Contains(err.Error(), "no cut file has a closed outline: a.dxf is left out") {
		t.Errorf("no outline: %v", err)
	}
	folder, text, _ := started(t, map[string]string{"a.dxf": "frame/cut/base.dxf"})
	if _, _, err := Scaffold(folder); err == nil || !strings.Contains(err.Error(), "it is there already") {
		t.Errorf("a second start: %v", err)
	}
	if now, _ := os.ReadFile(filepath.Join(folder, "airframe.hcl")); string(now) != text {
		t.Error("a second start changed the file")
	}
}
