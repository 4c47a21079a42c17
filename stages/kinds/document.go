package kinds

import (
	"hushframe/core/pipeline/artifact"
)

// DocumentKind is what `report` makes: a page and its tables as loose files.
var DocumentKind = artifact.Kind{
	Name: "document", Version: 1,
	About: "a report for people: one page that opens without a network, and every table of it as text",
	Scalars: []artifact.Column{
		col("title", artifact.Text, "", "title of the page"),
		col("page", artifact.Text, "", "path of the page among the files"),
	},
	Tables: []artifact.TableSpec{
		{Name: "sources", About: "artifacts that the report is made of", Columns: columns(
			col("kind", artifact.Text, "", "kind of the artifact"),
			col("from", artifact.Text, "", "its address in the job"),
			col("hash", artifact.Text, "", "its content hash"),
		)},
		{Name: "tables", About: "tables of the report, each in a file of comma-separated values", Columns: columns(
			col("file", artifact.Text, "", "path among the files"),
			col("title", artifact.Text, "", "title on the page"),
			col("rows", artifact.Int, "", "rows without the heading"),
		)},
	},
	Files: "the page and its tables",
}

// Document is the content of a document artifact; the descriptions of DocumentKind hold.
type Document struct {
	Title, Page string
	Sources     []DocumentSource
	Tables      []DocumentTable
	Files       map[string][]byte
}

// DocumentSource is an artifact that a report is made of.
type DocumentSource struct{ Kind, From, Hash string }

// DocumentTable is a table of a report.
type DocumentTable struct {
	File, Title string
	Rows        int
}

// EncodeDocument makes the artifact.
func EncodeDocument(d *Document) *artifact.Artifact {
	a := artifact.New(DocumentKind)
	a.Scalars = map[string]any{"title": d.Title, "page": d.Page}
	a.Table("sources").
		Set("kind", list(d.Sources, func(x DocumentSource) string { return x.Kind })).
		Set("from", list(d.Sources, func(x DocumentSource) string { return x.From })).
		Set("hash", list(d.Sources, func(x DocumentSource) string { return x.Hash }))
	a.Table("tables").
		Set("file", list(d.Tables, func(x DocumentTable) string { return x.File })).
		Set("title", list(d.Tables, func(x DocumentTable) string { return x.Title })).
		Set("rows", list(d.Tables, func(x DocumentTable) int64 { return int64(x.Rows) }))
	a.Files = d.Files
	return a
}

// DecodeDocument reads the artifact; the fault names a file that is missing.
func DecodeDocument(a *artifact.Artifact) (*Document, error) {
	d := &Document{Title: a.Text("title"), Page: a.Text("page"), Files: a.Files}
	t := a.Table("sources")
	for i := range t.Rows() {
		d.Sources = append(d.Sources, DocumentSource{t.Texts("kind")[i], t.Texts("from")[i], t.Texts("hash")[i]})
	}
	t = a.Table("tables")
	for i := range t.Rows() {
		d.Tables = append(d.Tables, DocumentTable{t.Texts("file")[i], t.Texts("title")[i], int(t.Ints("rows")[i])})
	}
	if _, ok := a.Files[d.Page]; !ok {
		return nil, malformed("document", "the page %q is not among its files", d.Page)
	}
	for _, x := range d.Tables {
		if _, ok := a.Files[x.File]; !ok {
			return nil, malformed("document", "the table %q is not among its files", x.File)
		}
	}
	return d, nil
}
