package copied

import (
	"os"
	"path/filepath"
	"testing"
)

// coarse is a mesh size that keeps these tests short.
const coarse = "14 mm"

// copyFolder copies the job folder without its stores and reports.
func copyFolder(t *testing.T) string {
	t.Helper()
	to := t.TempDir()
	for _, name := range []string{"baseline.hcl", "airframe.hcl", "cut/arm.dxf", "cut/bottom.dxf", "cut/clamp.dxf", "cut/top.dxf", "flights/hover-03.csv.gz"} {
		data, err := os.ReadFile(filepath.Join("..", name))
		if err != nil {
			t.Fatal(err)
		}
		if err := os.MkdirAll(filepath.Dir(filepath.Join(to, name)), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(to, name), data, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return to
}
