package store

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"reflect"
	"strings"
	"sync"
	"testing"
	"time"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

var kind = artifact.Kind{Name: "beads", Version: 1, Files: "any", Tables: []artifact.TableSpec{
	{Name: "beads", Columns: []artifact.Column{{Name: "mass", Type: artifact.Float, Unit: "kg"}}}}}

var registry = artifact.NewRegistry(kind, artifact.Kind{Name: "other", Version: 1})

func beads(masses ...float64) *artifact.Artifact {
	a := artifact.New(kind)
	a.Table("beads").Set("mass", masses)
	a.Files["note.txt"] = []byte("beads")
	return a
}

// TestMain lets the test binary stand for another run that is killed while it
// uses the store: it opens it, says so and waits.
func TestMain(m *testing.M) {
	if folder := os.Getenv("HUSHFRAME_TEST_STORE"); folder != "" {
		s, err := Open(context.Background(), folder, registry)
		if err != nil {
			panic(err)
		}
		dir, _ := s.Scratch("half")
		os.WriteFile(filepath.Join(dir, "half"), []byte("half"), 0o644)
		fmt.Println("open")
		select {}
	}
	os.Exit(m.Run())
}

func open(t testing.TB, folder string) *Store {
	t.Helper()
	s, err := Open(context.Background(), folder, registry)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.Close() })
	return s
}

func put(t testing.TB, s *Store, a *artifact.Artifact) string {
	t.Helper()
	hash, err := s.Put(a)
	if err != nil {
		t.Fatal(err)
	}
	return hash
}

func still() World {
	return World{File: func(string) string { return "" }, Tool: func(string, string) string { return "" }}
}

func TestKeyCoversEverything(t *testing.T) {
	base := func() Step {
		return Step{Stage: "mesh", Executable: "e", Arguments: stage.Arguments{"size": stage.Quantity{SI: 0.003, Dimension: "length"}},
			Inputs: map[string][]string{"geometry": {"a", "b"}}}
	}
	changes := map[string]func(*Step){
		"nothing":    func(*Step) {},
		"stage":      func(s *Step) { s.Stage = "solve" },
		"executable": func(s *Step) { s.Executable = "f" },
		"value":      func(s *Step) { s.Arguments["size"] = stage.Quantity{SI: 0.004, Dimension: "length"} },
		"dimension":  func(s *Step) { s.Arguments["size"] = stage.Quantity{SI: 0.003, Dimension: "time"} },
		"argument":   func(s *Step) { s.Arguments["more"] = nil },
		"input":      func(s *Step) { s.Inputs["geometry"] = []string{"a", "c"} },
		"order":      func(s *Step) { s.Inputs["geometry"] = []string{"b", "a"} },
		"input name": func(s *Step) { s.Inputs["outline"] = s.Inputs["geometry"]; delete(s.Inputs, "geometry") },
	}
	seen := map[string]string{}
	for name, change := range changes {
		s := base()
		change(&s)
		key, err := s.Key()
		if err != nil {
			t.Fatal(err)
		}
		if other, dup := seen[key]; dup {
			t.Errorf("%s and %s have one key", name, other)
		}
		seen[key] = name
	}
	a, _ := base().Key()
	b, _ := base().Key()
	if a != b || len(a) != 64 {
		t.Errorf("keys of equal steps: %s, %s", a, b)
	}
}

func TestFindWantsAllAsItWas(t *testing.T) {
	s := open(t, t.TempDir())
	hash := put(t, s, beads(1, 2))
	want := &Record{Stage: "mesh", Outputs: map[string]Output{"beads": {Kind: "beads", Hash: hash}},
		Outcome: stage.Outcome{Figures: map[string]any{"mass": stage.Quantity{SI: 3, Dimension: "mass"}}, Notes: []string{"n"}},
		Files:   []stage.FileUse{{Path: "a.dxf", Hash: "1"}, {Path: "b.dxf"}},
		Tools:   []ToolUse{{"element", "x", "2"}}, Seconds: 1.5}
	if err := s.Save("key", want); err != nil {
		t.Fatal(err)
	}
	files := map[string]string{"a.dxf": "1"}
	tools := map[string]string{"element x": "2"}
	now := World{File: func(p string) string { return files[p] }, Tool: func(k, n string) string { return tools[k+" "+n] }}
	find := func() bool { _, ok := s.Find("key", now, false); return ok }
	got, ok := s.Find("key", now, true)
	if !ok || !reflect.DeepEqual(got, want) {
		t.Fatalf("got %+v, want %+v", got, want)
	}
	files["a.dxf"] = "other"
	if find() {
		t.Error("a changed file did not matter")
	}
	files["a.dxf"], files["b.dxf"] = "1", "now there"
	if find() {
		t.Error("a file that was missing and now is there did not matter")
	}
	delete(files, "b.dxf")
	tools["element x"] = "3"
	if find() {
		t.Error("a changed extension did not matter")
	}
	tools["element x"] = "2"
	if !find() {
		t.Error("all is as it was, and no record was found")
	}
	if _, ok := s.Find("other", now, false); ok {
		t.Error("a record under another key")
	}
	// The other state of the files gets a record of its own beside the first.
	files["a.dxf"] = "other"
	second := *want
	second.Files = []stage.FileUse{{Path: "a.dxf", Hash: "other"}}
	if err := s.Save("key", &second); err != nil {
		t.Fatal(err)
	}
	if got, ok := s.Find("key", now, false); !ok || got.Files[0].Hash != "other" {
		t.Errorf("second record: %v %v", got, ok)
	}
}

// Whatever happens to the files of the store, what is found is whole.
func TestDamageIsNotTrusted(t *testing.T) {
	cases := map[string]struct {
		full  bool
		spoil func(artifact, steps string)
	}{
		"table gone":      {false, func(a, _ string) { os.Remove(filepath.Join(a, "beads.arrow")) }},
		"table cut":       {false, func(a, _ string) { os.Truncate(filepath.Join(a, "beads.arrow"), 10) }},
		"manifest gone":   {false, func(a, _ string) { os.Remove(filepath.Join(a, artifact.ManifestName)) }},
		"manifest cut":    {false, func(a, _ string) { os.Truncate(filepath.Join(a, artifact.ManifestName), 50) }},
		"loose file gone": {false, func(a, _ string) { os.Remove(filepath.Join(a, "files", "note.txt")) }},
		"artifact gone":   {false, func(a, _ string) { os.RemoveAll(a) }},
		"record changed": {false, func(_, s string) {
			files, _ := filepath.Glob(filepath.Join(s, "*.json"))
			data, _ := os.ReadFile(files[0])
			os.WriteFile(files[0], []byte(strings.Replace(string(data), "mesh", "mash", 1)), 0o644)
		}},
		"record cut": {false, func(_, s string) {
			files, _ := filepath.Glob(filepath.Join(s, "*.json"))
			os.Truncate(files[0], 20)
		}},
		"bit changed": {true, func(a, _ string) {
			path := filepath.Join(a, "beads.arrow")
			data, _ := os.ReadFile(path)
			data[len(data)/2] ^= 1
			os.WriteFile(path, data, 0o644)
		}},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			s := open(t, dir)
			hash := put(t, s, beads(1, 2))
			if err := s.Save("key", &Record{Stage: "mesh", Outputs: map[string]Output{"beads": {Kind: "beads", Hash: hash}}}); err != nil {
				t.Fatal(err)
			}
			if _, ok := s.Find("key", still(), c.full); !ok {
				t.Fatal("nothing found before the damage")
			}
			c.spoil(s.Folder(hash), filepath.Join(dir, FolderName, "steps", "key"))
			if _, ok := s.Find("key", still(), c.full); ok {
				t.Error("it was found")
			}
			// Doing the step again mends it.
			if again := put(t, s, beads(1, 2)); again != hash {
				t.Fatalf("hash %s, then %s", hash, again)
			}
			if !c.full && !s.Holds(hash, true) {
				t.Error("the artifact is not mended")
			}
		})
	}
}

func TestAdopt(t *testing.T) {
	s := open(t, t.TempDir())
	fill := func(change func(dir string)) string {
		dir, err := s.Scratch("output")
		if err != nil {
			t.Fatal(err)
		}
		if _, err := artifact.Write(dir, beads(1, 2, 3)); err != nil {
			t.Fatal(err)
		}
		change(dir)
		return dir
	}
	want := beads(1, 2, 3).Hash()
	if hash, err := s.Adopt(fill(func(string) {}), "beads"); err != nil || hash != want {
		t.Errorf("got %s, %v", hash, err)
	}
	if hash, err := s.Adopt(fill(func(string) {}), "beads"); err != nil || hash != want {
		t.Errorf("a second time: %s, %v", hash, err)
	}
	// An extension in another language states no hashes; the store does.
	bare := fill(func(dir string) {
		m := `{"kind": "beads", "version": 1, "tables": {"beads": {}}, "files": {"note.txt": {}}}`
		if err := os.WriteFile(filepath.Join(dir, artifact.ManifestName), []byte(m), 0o644); err != nil {
			t.Fatal(err)
		}
		if err := os.RemoveAll(s.Folder(want)); err != nil {
			t.Fatal(err)
		}
	})
	if hash, err := s.Adopt(bare, "beads"); err != nil || hash != want || !s.Holds(hash, true) {
		t.Errorf("without hashes: %s, %v", hash, err)
	}
	m, err := artifact.ReadManifest(s.Folder(want))
	if err != nil || m.Hash != want || m.Tables["beads"].Rows != 3 || len(m.Files["note.txt"].SHA256) != 64 {
		t.Errorf("its manifest: %+v, %v", m, err)
	}
	for name, c := range map[string]struct {
		kind, want string
		change     func(dir string)
	}{
		"another kind": {"other", `an artifact of kind "beads", where "other" was declared`, func(string) {}},
		"extra file":   {"beads", "the file extra.txt is no part of the artifact", func(dir string) { os.WriteFile(filepath.Join(dir, "extra.txt"), nil, 0o644) }},
		"extra table":  {"beads", "the file more.arrow is no part of the artifact", func(dir string) { os.WriteFile(filepath.Join(dir, "more.arrow"), nil, 0o644) }},
		"extra loose":  {"beads", "the file files/more is no part of the artifact", func(dir string) { os.WriteFile(filepath.Join(dir, "files", "more"), nil, 0o644) }},
		"cut file":     {"beads", "note.txt has 0 bytes, its artifact says 5", func(dir string) { os.Truncate(filepath.Join(dir, "files", "note.txt"), 0) }},
		"nothing":      {"beads", "there is no artifact.json", func(dir string) { os.Remove(filepath.Join(dir, artifact.ManifestName)) }},
	} {
		if _, err := s.Adopt(fill(c.change), c.kind); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: got %v, want %q", name, err, c.want)
		}
	}
}

func TestKept(t *testing.T) {
	dir := t.TempDir()
	s := open(t, dir)
	if _, ok := s.FindKept("e", "k"); ok {
		t.Fatal("found in an empty store")
	}
	commit := func(s *Store, text string) string {
		content, err := s.NewKept()
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(content, "l"), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		folder, err := s.CommitKept("e", "k", content)
		if err != nil {
			t.Fatal(err)
		}
		return folder
	}
	first := commit(s, "factor")
	folder, ok := s.FindKept("e", "k")
	if data, _ := os.ReadFile(filepath.Join(folder, "l")); !ok || folder != first || string(data) != "factor" {
		t.Errorf("found %v %s with %q", ok, folder, data)
	}
	if _, ok := s.FindKept("another executable", "k"); ok {
		t.Error("found for another executable")
	}
	if again := commit(s, "factor"); again != first {
		t.Errorf("a second commit gave %s", again)
	}
	os.Truncate(filepath.Join(first, "l"), 2)
	if _, ok := s.FindKept("e", "k"); ok {
		t.Error("a cut file was found")
	}
	commit(s, "factor")
	if _, ok := s.FindKept("e", "k"); !ok {
		t.Error("a second commit did not mend it")
	}
}

// Several runs at once may do the same steps.
func TestSharedByManyRuns(t *testing.T) {
	dir := t.TempDir()
	var wg sync.WaitGroup
	for i := range 8 {
		wg.Go(func() {
			s, err := Open(context.Background(), dir, registry)
			if err != nil {
				t.Error(err)
				return
			}
			defer s.Close()
			for j := range 5 {
				hash, err := s.Put(beads(float64(j)))
				if err == nil {
					err = s.Save(fmt.Sprint("key", j), &Record{Stage: "mesh", Outputs: map[string]Output{"b": {"beads", hash}}, Seconds: float64(i)})
				}
				if err != nil {
					t.Error(err)
				}
				if _, ok := s.Find(fmt.Sprint("key", j), still(), true); !ok {
					t.Errorf("run %d does not find step %d", i, j)
				}
			}
		})
	}
	wg.Wait()
	entries, _ := os.ReadDir(filepath.Join(dir, FolderName, "scratch"))
	if len(entries) != 0 {
		t.Errorf("left in scratch: %v", entries)
	}
}

// A run that is killed leaves scratch, which the next run removes while it
// leaves alone that of a run that lives.
func TestScratchOfTheDead(t *testing.T) {
	dir := t.TempDir()
	alive := open(t, dir)
	held, err := alive.Scratch("held")
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(os.Args[0])
	cmd.Env = append(os.Environ(), "HUSHFRAME_TEST_STORE="+dir)
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	var word string
	fmt.Fscan(out, &word)
	halves := func() int {
		found, _ := filepath.Glob(filepath.Join(dir, FolderName, "scratch", "*", "half-*", "half"))
		return len(found)
	}
	open(t, dir)
	if halves() != 1 {
		t.Errorf("%d scratch folders of the run that lives", halves())
	}
	if _, err := Prune(dir, PruneOptions{Size: 0}); fault.KindOf(err) != fault.Input || !strings.Contains(err.Error(), "a run is using it") {
		t.Errorf("prune during runs: %v", err)
	}
	cmd.Process.Kill()
	cmd.Wait()
	open(t, dir)
	if halves() != 0 {
		t.Error("the scratch of a killed run is still there")
	}
	if _, err := os.Stat(held); err != nil {
		t.Error("the scratch of a run that lives is gone")
	}
}

func TestPrune(t *testing.T) {
	dir := t.TempDir()
	s := open(t, dir)
	shared, old, recent, loose := put(t, s, beads(1)), put(t, s, beads(2)), put(t, s, beads(3)), put(t, s, beads(4))
	save := func(key string, days int, hashes ...string) {
		r := &Record{Stage: "mesh", Outputs: map[string]Output{}}
		for _, h := range hashes {
			r.Outputs[h] = Output{"beads", h}
		}
		if err := s.Save(key, r); err != nil {
			t.Fatal(err)
		}
		files, _ := filepath.Glob(filepath.Join(dir, FolderName, "steps", key, "*.json"))
		then := time.Now().AddDate(0, 0, -days)
		os.Chtimes(files[0], then, then)
	}
	save("old", 40, shared, old)
	save("recent", 2, shared, recent)
	content, _ := s.NewKept()
	if _, err := s.CommitKept("e", "k", content); err != nil {
		t.Fatal(err)
	}
	s.Close()

	month := PruneOptions{UnusedFor: 30 * 24 * time.Hour, Size: -1}
	pretended := month
	pretended.Pretend = true
	want, err := Prune(dir, pretended)
	if err != nil {
		t.Fatal(err)
	}
	if !s.Holds(old, true) || !s.Holds(loose, true) {
		t.Fatal("pretending removed something")
	}
	got, err := Prune(dir, month)
	if err != nil || got != want {
		t.Errorf("did %+v, pretended %+v, %v", got, want, err)
	}
	if got.Records != 1 || got.Artifacts != 2 || got.Kept != 0 || got.Freed <= 0 || got.Left <= 0 {
		t.Errorf("report %+v", got)
	}
	if s.Holds(old, false) || s.Holds(loose, false) || !s.Holds(shared, true) || !s.Holds(recent, true) {
		t.Error("not what was unused is gone")
	}
	got, err = Prune(dir, PruneOptions{Size: 0})
	if err != nil || got.Left != 0 || got.Records != 1 || got.Artifacts != 2 || got.Kept != 1 {
		t.Errorf("report %+v, %v", got, err)
	}
	if r, err := Prune(t.TempDir(), PruneOptions{}); err != nil || r != (PruneReport{}) {
		t.Errorf("no store: %+v, %v", r, err)
	}
}

func TestRunRecord(t *testing.T) {
	dir := t.TempDir()
	s := open(t, dir)
	if _, err := s.LastRun("job.hcl"); fault.KindOf(err) != fault.Missing {
		t.Errorf("before: %v", err)
	}
	want := &RunRecord{Job: "j", Steps: []RunStep{{Label: "a", Stage: "mesh", State: "ran", Key: "k", Outputs: map[string]Output{"o": {"beads", "h"}}, Seconds: 2}}}
	if err := s.SaveRun("job.hcl", want); err != nil {
		t.Fatal(err)
	}
	if got, err := View(dir, nil).LastRun("job.hcl"); err != nil || !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, %v", got, err)
	}
}

// Looking makes nothing, and nothing of this machine is written down.
func TestTraces(t *testing.T) {
	dir := t.TempDir()
	if _, ok := View(dir, registry).Find("key", still(), false); ok {
		t.Error("found in no store")
	}
	if entries, _ := os.ReadDir(dir); len(entries) != 0 {
		t.Errorf("looking made %v", entries)
	}
	s := open(t, dir)
	hash := put(t, s, beads(1))
	data, err := os.ReadFile(filepath.Join(s.Folder(hash), artifact.ManifestName))
	if err != nil || !json.Valid(data) || strings.Contains(string(data), dir) {
		t.Errorf("manifest %s, %v", data, err)
	}
	if ignore, _ := os.ReadFile(filepath.Join(dir, FolderName, ".gitignore")); string(ignore) != "*\n" {
		t.Errorf("ignore file %q", ignore)
	}
}

func BenchmarkPut(b *testing.B) {
	s := open(b, b.TempDir())
	masses := make([]float64, 1<<20)
	b.SetBytes(8 << 20)
	for i := 0; b.Loop(); i++ {
		masses[0] = float64(i)
		put(b, s, beads(masses...))
	}
}

func BenchmarkFind(b *testing.B) {
	s := open(b, b.TempDir())
	hash := put(b, s, beads(1, 2))
	if err := s.Save("key", &Record{Stage: "mesh", Outputs: map[string]Output{"b": {"beads", hash}}}); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, ok := s.Find("key", still(), false); !ok {
			b.Fatal("not found")
		}
	}
}
