package cinder

import (
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/plugins/plugintest"
)

// built builds the extension from its sources. A desk without node or its packages skips; a build server must not.
func built(t *testing.T) string {
	t.Helper()
	missing := ""
	if _, err := exec.LookPath("node"); err != nil {
		missing = "node is not installed"
	} else if _, err := os.Stat("node_modules"); err != nil {
		missing = "its packages are not there: run npm ci in plugins/cinder"
	}
	if missing != "" && os.Getenv("CI") == "true" {
		t.Fatal(missing)
	}
	if missing != "" {
		t.Skip(missing)
	}
	path := filepath.Join(t.TempDir(), "cinder")
	if out, err := exec.Command("npm", "run", "-s", "build", "--", "--outfile="+path).CombinedOutput(); err != nil {
		t.Fatalf("npm run build: %v\n%s", err, out)
	}
	if err := os.Chmod(path, 0o755); err != nil {
		t.Fatal(err)
	}
	return path
}

// recording makes a file by the README: 2500 rows at 1600 Hz, with a missing value.
func recording() []byte {
	var b strings.Builder
	b.WriteString(`{"cinder": 1, "rate": 1600, "channels": [{"name": "gx", "unit": "deg/s"}, {"name": "temperature", "unit": "degC"}]}` + "\n")
	for i := range 2500 {
		second := "21.5"
		if i == 7 {
			second = "null"
		}
		fmt.Fprintf(&b, "[%.3f, %s]\n", 25+10*math.Sin(2*math.Pi*80*float64(i)/1600), second)
	}
	return []byte(b.String())
}

// The same suite holds a reader in another language; mutual TLS is on, as for every extension.
func TestReader(t *testing.T) {
	plugintest.Reader(t, plugintest.ReaderExecutable(t, built(t), "cinder"), plugintest.Recording{
		Data: recording(), Units: map[string]string{"gx": "deg/s", "temperature": "degC"}, Rate: 1600, Rows: 2500,
		Mean: map[string]float64{"gx": 25, "temperature": 21.5},
	})
}
