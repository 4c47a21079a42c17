package verify

import (
	"context"
	"math"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/stage"
	"hushframe/jobs/inprocess"
	"hushframe/stages"
	"hushframe/stages/kinds"
)

// The job on a few rows of each table: what it says of them, on the page too.
func TestVerify(t *testing.T) {
	// The list is a setting, so that people can ask for a few rows as well.
	d, err := inprocess.Run(context.Background(), "verify.hcl", t.TempDir(), map[string]string{
		"rows": `["A-MOUNTS-", "B-STATIC-", "C-STRAIGHT-CANT", "D-TWODOF-A-MODES"]`,
	})
	if err != nil {
		t.Fatal(err)
	}
	a, err := d.Artifact("known", "verification")
	if err != nil {
		t.Fatal(err)
	}
	v, err := kinds.DecodeVerification(a)
	if err != nil {
		t.Fatal(err)
	}
	var ids []string
	for _, p := range v.Problems {
		ids = append(ids, p.ID)
	}
	if got := strings.Join(ids, " "); got != "A-MOUNTS-FC A-MOUNTS-CAMERA B-STATIC-0_90_90_0-ah10 B-STATIC-0_90_0-ah100 B-STATIC-0_90-ah10 C-STRAIGHT-CANT D-TWODOF-A-MODES" {
		t.Errorf("solved are %s", got)
	}
	// The tip of the strip goes down by P L³/(3 E I) but for shear: 0.432, row C-STRAIGHT-CANT.
	strip := v.Problems[5]
	if x := strip.Values[2]; x.Label != "out-of-plane shear" || math.Abs(x.Computed/0.432-1) > 0.01 || x.Computed == x.Reference {
		t.Errorf("the strip: %+v", x)
	}
	for _, verdict := range d.Result.Verdicts {
		if !verdict.Judged || !verdict.Holds {
			t.Errorf("requirement %s does not hold", verdict.Name)
		}
	}
	page, err := d.Artifact("page", "document")
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"C-STRAIGHT-CANT", "out-of-plane shear", "MacNeal", "48 × 4 cells"} {
		if !strings.Contains(string(page.Files["verify.html"]), want) {
			t.Errorf("the page lacks %q", want)
		}
	}
}

// The job on the demo's mesh solves a quarter of a million unknowns, so here it is only read and planned;
// the estimate itself is tested on small frames beside the kernels.
func TestMeshJobIsSound(t *testing.T) {
	describe := func(_ context.Context, name string) (stage.Description, error) {
		for _, s := range stages.Builtin() {
			if d := s.Describe(); d.Name == name {
				return d, nil
			}
		}
		return stage.Description{}, fault.New(fault.Missing, "there is no stage %q", name)
	}
	j, diags := job.Load(context.Background(), "mesh.hcl", job.Options{Describe: describe})
	if diags.HasErrors() {
		t.Fatal(diags)
	}
	p, diags := plan.Make(j)
	if diags.HasErrors() {
		t.Fatal(diags)
	}
	if len(p.Steps) != 5 {
		t.Errorf("%d steps", len(p.Steps))
	}
}
