// Package report is the stage that writes a page for people from artifacts.
//
// The page is one file that opens without a network. It computes nothing: what
// it shows is in an artifact. Every table of it is also written beside it as
// comma-separated values.
package report

import (
	"context"
	"fmt"
	"path"
	"slices"
	"strings"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/report/printed"
)

// Stage is the stage "report".
type Stage struct{}

var _ stage.Stage = Stage{}

// readable lists the kinds a report can show, besides that of the run.
var readable = []string{"geometry", "properties", "mesh", "modes", "response", "spectra", "comparison", "identified", "transfer", "filtered", "difference", "verification"}

// formats are those of still pictures.
var formats = []string{printed.PNG, printed.SVG}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	return stage.Description{
		Name:  "report",
		About: "write a page that shows the results, with every table beside it",
		Doc: `Writes one HTML file that opens without a network, from the artifacts listed in
include. Each section appears when an artifact that it needs is included: the
assembly with geometry, masses with properties, pictures of mode shapes with mesh
and modes, the response with response, the recording over it with comparison (its
confidence band with spectra), a bench recording with transfer. Requirements, settings, versions and checksums come
from the run. Every table is written as comma-separated values into a folder beside
the page.`,
		Arguments: []stage.Argument{
			{Name: "include", About: "artifacts to show, of any of the kinds " + strings.Join(readable, ", "), Required: true,
				Type:    stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Artifact, Kinds: readable}},
				Example: "[stage.modes.modes, stage.flight.response]"},
			{Name: "to", About: "where the page goes", Type: stage.Type{Kind: stage.Target}, Required: true, Example: `"report/baseline.html"`},
			{Name: "title", About: "title of the page; the name of the job when left out", Type: stage.Type{Kind: stage.Text}, Example: `"Revision B"`},
			{Name: "charts", About: "formats in which every chart is also written as a still picture into a folder beside the page: " + strings.Join(formats, ", ") + "; none when left out",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Text}}, Example: `["png", "svg"]`},
		},
		Outputs: []stage.Output{{Name: "document", Kind: "document", About: "the page and its tables", Publish: "to"}},
		Last:    true,
	}
}

// Run implements stage.Stage.
func (Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	to := call.Arguments.Text("to")
	if ext := strings.ToLower(path.Ext(to)); ext != ".html" && ext != ".htm" {
		// Whatever else has that name is not a page, and may be what the job reads.
		return nil, fault.New(fault.Input, "%q does not end in .html", to).In("report", "").Of("to").Do("name a page, such as \"report/page.html\"")
	}
	charts := call.Arguments.Texts("charts")
	for i, format := range charts {
		if !slices.Contains(formats, format) || slices.Contains(charts[:i], format) {
			return nil, fault.New(fault.Input, "%q is no format of pictures, or is given twice", format).In("report", "").Of("charts").Do("give any of %s", strings.Join(formats, ", "))
		}
	}
	call.Report.Progress("read", -1)
	c := &content{}
	inputs := append(append([]stage.Input{}, call.Inputs["include"]...), call.Inputs["run"]...)
	for i, in := range inputs {
		if err := ctx.Err(); err != nil {
			return nil, fault.From(err)
		}
		if err := c.add(in); err != nil {
			return nil, err
		}
		call.Report.Progress("read", float64(i+1)/float64(len(inputs)))
	}
	call.Report.Progress("draw", -1)
	d, err := compose(c, call.Arguments.Text("title"), path.Base(strings.ReplaceAll(to, `\`, "/")))
	if err != nil {
		return nil, err
	}
	if err := addStills(d, c, charts); err != nil {
		return nil, err
	}
	if _, err := artifact.Write(call.Outputs["document"], kinds.EncodeDocument(d)); err != nil {
		return nil, err
	}
	size := len(d.Files[d.Page])
	out := &stage.Outcome{Notes: []string{fmt.Sprintf("the page has %.1f MB and %s", float64(size)/1e6, joinCount(len(d.Tables), "table", "tables"))}}
	if size > mostBytes {
		out.Warnings = append(out.Warnings, stage.Warning{ID: "report.large", Text: fmt.Sprintf("the page has %.1f MB", float64(size)/1e6),
			Where: "include", Remedy: "include fewer modes: solve to a lower frequency"})
	}
	return out, nil
}

// mostBytes is the size above which a page is no longer handy.
const mostBytes = 8_000_000
