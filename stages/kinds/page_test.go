package kinds

import (
	"flag"
	"fmt"
	"os"
	"strings"
	"testing"

	"hushframe/core/extension"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/run/account"
)

var update = flag.Bool("update", false, "write KINDS.md anew")

// page writes every kind with its tables, columns and units.
func page() string {
	var b strings.Builder
	b.WriteString(`# Artifact kinds

Written from the declarations in this folder, ` + "`core/pipeline/run/account` and `core/extension`" + `, by
` + "`go test ./stages/kinds -run KindsPage -update`" + `; a test holds it equal. Do not edit it.

An artifact is a folder with artifact.json and one Apache Arrow IPC file per table, NAME.arrow. Types: float is float64
(NaN means not available), int is int64, text is UTF-8, truth is bool, and lists of them. No nulls, no dictionaries, no
compression, little-endian; the unit of a column stands in the metadata of its field under the key unit, if it has one.
Points and vectors are three columns with suffix _x, _y, _z in airframe axes (x forward, y left, z up). Indices count from 0.

`)
	write := func(k artifact.Kind) {
		fmt.Fprintf(&b, "## %s (version %d)\n\n%s\n\n", k.Name, k.Version, k.About)
		if k.Files != "" {
			fmt.Fprintf(&b, "Loose files: %s.\n\n", k.Files)
		}
		rows := func(list []artifact.Column) {
			b.WriteString("| name | type | unit | meaning |\n| --- | --- | --- | --- |\n")
			for _, c := range list {
				fmt.Fprintf(&b, "| %s | %s | %s | %s |\n", c.Name, c.Type, strings.ReplaceAll(c.Unit, "|", `\|`), strings.ReplaceAll(c.About, "|", `\|`))
			}
			b.WriteString("\n")
		}
		if len(k.Scalars) > 0 {
			b.WriteString("Scalars of artifact.json:\n\n")
			rows(k.Scalars)
		}
		for _, t := range k.Tables {
			fmt.Fprintf(&b, "Table `%s`: %s\n\n", t.Name, t.About)
			rows(t.Columns)
		}
	}
	all := Registry()
	all[account.KindName] = account.Kind
	for _, name := range all.Names() {
		write(all[name])
	}
	b.WriteString("# What calls of element types and readers exchange\n\nFolders like artifacts, but never kept; the sums in artifact.json may be left out.\n\n")
	calls := extension.Kinds()
	for _, name := range calls.Names() {
		write(calls[name])
	}
	return strings.TrimRight(b.String(), "\n") + "\n"
}

// KINDS.md is what the declarations say.
func TestKindsPage(t *testing.T) {
	const path = "KINDS.md"
	if *update {
		if err := os.WriteFile(path, []byte(page()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	if data, err := os.ReadFile(path); err != nil || string(data) != page() {
		t.Errorf("%s is not what the kinds declare (%v); run the test with -update and read the difference", path, err)
	}
}
