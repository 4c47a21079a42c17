package job

import (
	"io"
	"sort"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
)

// WriteDiagnostics writes diagnostics for people, each with the line it is
// about. Width 0 means no wrapping; color adds terminal escapes.
func WriteDiagnostics(w io.Writer, diags hcl.Diagnostics, sources []Source, width int, color bool) error {
	files := map[string]*hcl.File{}
	for _, s := range sources {
		f, _ := hclsyntax.ParseConfig(s.Bytes, s.Name, hcl.InitialPos)
		if f == nil {
			f = &hcl.File{Bytes: s.Bytes}
		}
		files[s.Name] = f
	}
	if width < 0 {
		width = 0
	}
	return hcl.NewDiagnosticTextWriter(w, files, uint(width), color).WriteDiagnostics(diags)
}

// arrange sorts diagnostics by file and place, those without a place first, and
// drops repetitions.
func arrange(diags hcl.Diagnostics) hcl.Diagnostics {
	key := func(d *hcl.Diagnostic) (string, int) {
		if d.Subject == nil {
			return "", -1
		}
		return d.Subject.Filename, d.Subject.Start.Byte
	}
	sort.SliceStable(diags, func(i, j int) bool {
		fi, bi := key(diags[i])
		fj, bj := key(diags[j])
		if fi != fj {
			return fi < fj
		}
		return bi < bj
	})
	var out hcl.Diagnostics
	seen := map[string]bool{}
	for _, d := range diags {
		k := d.Summary + "\x00" + d.Detail
		if d.Subject != nil {
			k += "\x00" + d.Subject.String()
		}
		if !seen[k] {
			seen[k] = true
			out = append(out, d)
		}
	}
	return out
}
