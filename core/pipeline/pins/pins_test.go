package pins

import (
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
)

var sum = strings.Repeat("ab", 32)

func pin(name, version string, sums map[string]string) Pin {
	return Pin{Name: name, Version: version, Protocol: 1, Offers: []string{"reader " + name}, SHA256: sums}
}

func TestRoundTrip(t *testing.T) {
	folder := t.TempDir()
	if f, err := Read(folder); err != nil || len(f.Extensions) != 0 {
		t.Fatalf("without a file: %v, %v", f, err)
	}
	f := &File{}
	f.Set(pin("wedge", "1.0.0", map[string]string{"linux/amd64": sum}))
	f.Set(pin("pebble", "1.0.0", map[string]string{"linux/amd64": sum}))
	if dropped := f.Set(pin("wedge", "1.0.0", map[string]string{"darwin/arm64": sum})); len(dropped) != 0 {
		t.Errorf("dropped %v of the same version", dropped)
	}
	if err := f.Write(folder); err != nil {
		t.Fatal(err)
	}
	g, err := Read(folder)
	if err != nil || !reflect.DeepEqual(f, g) || g.Extensions[0].Name != "pebble" || len(g.Extensions[1].SHA256) != 2 {
		t.Errorf("%v: %+v, want %+v", err, g, f)
	}
	if p, ok := g.Offering("reader wedge"); !ok || p.Name != "wedge" {
		t.Errorf("what offers the wedge: %v", p)
	}
	// A new version makes the sums of other platforms worthless.
	if dropped := g.Set(pin("wedge", "1.1.0", map[string]string{"linux/amd64": sum})); !reflect.DeepEqual(dropped, []string{"darwin/arm64"}) {
		t.Errorf("dropped %v", dropped)
	}
}

func TestBadFiles(t *testing.T) {
	for text, want := range map[string]string{
		"{\n\"extensions\": [\n{]":                                                   "near line 3",
		`{"extension": []}`:                                                          `unknown field "extension"`,
		`{"extensions": [{"name": "../up", "sha256": {}}]}`:                          "the name is no file name",
		`{"extensions": [{"name": "a", "sha256": {"linux/amd64": "abc"}}]}`:          "the checksum for linux/amd64 is no SHA-256",
		`{"extensions": [{"name": "a", "sha256": {}}, {"name": "a", "sha256": {}}]}`: "it is there twice",
		`{"extensions": [{"name": "", "sha256": {}}]}`:                               "the name is no file name",
		`{"extensions": [{"name": "a", "protocol": "one", "sha256": {}}]}`:           "cannot unmarshal string",
	} {
		folder := t.TempDir()
		if err := os.WriteFile(filepath.Join(folder, FileName), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		_, err := Read(folder)
		if f := fault.From(err); f == nil || f.Kind != fault.Input || !strings.Contains(f.Error(), want) || f.Remedy == "" {
			t.Errorf("%s: %v, want %s", text, err, want)
		}
	}
}
