package cases

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func read(t *testing.T, file string) []byte {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", "..", "testdata", "known", file))
	if err != nil {
		t.Fatal(err)
	}
	return text
}

// Every row of every family, within the share of its tolerance that the family states. With -v, the table.
func TestFamilies(t *testing.T) {
	for _, f := range Families() {
		t.Run(strings.ReplaceAll(f.Title, " ", "-"), func(t *testing.T) {
			if f.Slack > 1 {
				t.Errorf("a slack of %g is looser than the table", f.Slack)
			}
			rows, err := f.Select(read(t, f.File))
			if err != nil {
				t.Fatal(err)
			}
			worst := 0.0
			for _, row := range rows {
				got, err := f.Solve(row)
				if err != nil {
					t.Errorf("row %s: %v", row.ID, err)
					continue
				}
				computed := 0
				var table strings.Builder
				for i, x := range got {
					fmt.Fprintf(&table, "\n    %-42s %14.7g %14.7g %+9.4f %%", row.Labels[i], row.Values[i], x, 100*(x/row.Values[i]-1))
					if math.IsNaN(x) {
						got[i] = row.Values[i]
						continue
					}
					computed++
					worst = max(worst, Share(row, i, x))
				}
				t.Logf("%s, %s: %s%s", row.ID, f.Mesh, row.Source[0], table.String())
				if computed == 0 {
					t.Fatalf("row %s: nothing was computed", row.ID)
				}
				row.Check(t, f.Slack, got...)
			}
			t.Logf("%s: at worst %.2f of the tolerance, %.2f allowed", f.Title, worst, f.Slack)
		})
	}
}
