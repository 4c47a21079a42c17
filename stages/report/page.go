package report

import (
	"bytes"
	_ "embed"
	"html/template"
	"path"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/run/account"
	"hushframe/stages/kinds"
)

//go:embed page.html
var pageText string

var pageTemplate = template.Must(template.New("page").Funcs(template.FuncMap{"class": cellClass}).Parse(pageText))

func cellClass(col column, c cell) string {
	var parts []string
	if col.Right {
		parts = append(parts, "num")
	}
	if c.Strong {
		parts = append(parts, "strong")
	}
	if c.Quiet {
		parts = append(parts, "faint")
	}
	if c.Mono {
		parts = append(parts, "hash")
	}
	return strings.Join(parts, " ")
}

// page is what the template shows.
type page struct {
	Title, About, Foot string
	Style              template.CSS
	Verdict            *banner
	Requirements       []requirement
	Findings           []term
	Warnings           []account.Warning
	Sections           []*section
	Rest               template.HTML // definitions shared by pictures
	Live               *live
}

// compose makes the document; name is the file name of the page.
func compose(c *content, title, name string) (*kinds.Document, error) {
	if name == "" || name == "." || name == "/" {
		return nil, fault.New(fault.Input, "the target names no file").In("report", name).Of("to").Do(`give it a name such as "report/baseline.html"`)
	}
	p := &page{Title: title, Style: template.CSS(style()),
		Foot: "Small linear vibration about hover. This page says nothing about crash strength, flight-control stability or airworthiness."}
	if c.run != nil {
		p.About, p.Requirements, p.Warnings = c.run.About, requirements(c.run.Verdicts), c.run.Warnings
		p.Verdict = judge(c.run.Verdicts)
		if p.Title == "" {
			p.Title = c.run.Job
		}
		p.Foot = c.run.Program + ". " + p.Foot
	}
	if p.Title == "" {
		p.Title = "Vibration report"
	}
	if x := c.changes; x != nil {
		p.About, p.Verdict = x.About, changedBanner(x)
	}
	p.Findings = findings(c)
	add := func(s *section) {
		if s != nil && len(s.Blocks) > 0 {
			p.Sections = append(p.Sections, s)
		}
	}
	glance := &section{ID: "glance", Title: "At a glance"}
	glance.table(glanceTable(c))
	add(glance)
	if c.changes != nil {
		for _, s := range changedSections(c) {
			add(s)
		}
	}
	add(frameSection(c))
	add(modesSection(c))
	add(responseSection(c))
	if c.comparison != nil {
		add(comparisonSection(c.comparison))
	}
	add(identifiedSection(c))
	add(transferSection(c))
	add(mapSection(c))
	if c.spectra != nil {
		add(recordingSection(c.spectra))
	}
	add(filteredSection(c))
	if c.difference != nil {
		add(differenceSection(c, c.difference, nil))
	}
	if c.verified != nil {
		add(verificationSection(c.verified))
	}
	add(modelSection(c))
	add(cautionSection())
	add(runSection(c))
	add(glossarySection())
	if c.view != nil {
		p.Rest = trusted(c.view.Rest(c.surface, restName))
	}

	var err error
	if p.Live, err = newLive(c.scene()); err != nil {
		return nil, fault.New(fault.Internal, "%v", err).In("report", name)
	}
	d := &kinds.Document{Title: p.Title, Page: name, Sources: c.sources, Files: map[string][]byte{}}
	folder := strings.TrimSuffix(name, path.Ext(name)) + "-tables"
	for _, s := range p.Sections {
		for _, b := range s.all() {
			if t := b.Table; t != nil {
				t.File = folder + "/" + t.Name + ".csv"
				if _, taken := d.Files[t.File]; taken {
					return nil, fault.New(fault.Internal, "two tables are called %s", t.Name).In("report", name)
				}
				d.Files[t.File] = t.csv()
				d.Tables = append(d.Tables, kinds.DocumentTable{File: t.File, Title: t.Title, Rows: len(t.Rows)})
			}
		}
	}
	var b bytes.Buffer
	if err := pageTemplate.Execute(&b, p); err != nil {
		return nil, fault.New(fault.Internal, "%v", err).In("report", name)
	}
	d.Files[name] = b.Bytes()
	return d, nil
}
