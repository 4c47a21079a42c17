package core

import (
	"os/exec"
	"strings"
	"testing"
)

// TestWings holds the direction of imports: cmd and jobs over stages and
// plugins over core, the wings of core apart and below the contracts that join
// them, and HCL, gRPC and file formats
// where they belong. core/known reads the reference rows for tests, and so is
// the one kernel package that opens files.
func TestWings(t *testing.T) {
	out, err := exec.Command("go", "list", "-f", `{{.ImportPath}}{{range .Imports}} {{.}}{{end}}`, "hushframe/...").Output()
	if err != nil {
		t.Fatalf("go list: %v", err)
	}
	const pipeline, extension = "hushframe/core/pipeline/", "hushframe/core/extension"
	under := func(path string, roots ...string) bool {
		for _, r := range roots {
			if path == r || strings.HasPrefix(path, strings.TrimSuffix(r, "/")+"/") {
				return true
			}
		}
		return false
	}
	kernel := func(path string) bool {
		return under(path, "hushframe/core") && !under(path, pipeline, extension) && path != "hushframe/core"
	}
	seen := 0
	for _, line := range strings.Split(strings.TrimSpace(string(out)), "\n") {
		words := strings.Fields(line)
		from := words[0]
		for _, to := range words[1:] {
			seen++
			forbidden := ""
			switch {
			case kernel(from) && under(to, pipeline):
				forbidden = "kernels know nothing of the pipeline"
			case under(from, pipeline) && kernel(to):
				forbidden = "the pipeline knows nothing of vibration"
			case (kernel(from) || under(from, pipeline)) && under(to, extension):
				forbidden = "the contracts of extensions stand above both wings"
			case under(from, "hushframe/core") && under(to, "hushframe/stages", "hushframe/plugins", "hushframe/cmd", "hushframe/jobs"):
				forbidden = "core is below stages, plugins and cmd"
			case under(from, "hushframe/stages") && under(to, "hushframe/plugins", "hushframe/cmd", "hushframe/jobs"):
				forbidden = "stages do not know how they are run"
			case under(from, "hushframe/plugins") && under(to, "hushframe/stages", "hushframe/cmd", "hushframe/jobs"):
				forbidden = "the boundary knows no stage by name"
			case under(to, "github.com/hashicorp/hcl/v2") && !under(from, "hushframe/core/pipeline/job", "hushframe/core/pipeline/plan", "hushframe/stages/importgeom/airframefile", "hushframe/cmd", "hushframe/core/pipeline/run"):
				forbidden = "HCL belongs to job and airframefile"
			case (under(to, "google.golang.org/grpc") || under(to, "github.com/hashicorp/go-plugin")) && !under(from, "hushframe/plugins"):
				forbidden = "gRPC belongs to the boundary"
			case under(to, "github.com/apache/arrow-go") && !under(from, pipeline+"artifact", "hushframe/plugins", "hushframe/stages/record/columnar"):
				forbidden = "Arrow belongs to artifact and to the readers of Arrow and Parquet recordings"
			case kernel(from) && from != "hushframe/core/known" && (to == "os" || to == "net" || to == "net/http"):
				forbidden = "kernels touch no files"
			case under(from, pipeline+"stage") && !strings.HasPrefix(to, pipeline+"fault") && strings.Contains(strings.SplitN(to, "/", 2)[0], "."):
				forbidden = "the stage contract imports only the standard library and fault"
			}
			if forbidden != "" {
				t.Errorf("%s imports %s: %s", from, to, forbidden)
			}
		}
	}
	if seen < 50 {
		t.Fatalf("only %d imports were looked at; the list is broken", seen)
	}
}
