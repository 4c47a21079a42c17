package report

import (
	"html/template"

	"hushframe/stages/report/draw"
)

// section is one part of the page.
type section struct {
	ID, Title string
	Blocks    []block
}

// block is one thing within a section; exactly one field group is set.
type block struct {
	Heading string // a smaller title
	Text    string // a paragraph
	Quiet   bool   // of Text: an aside
	List    []string
	Table   *table
	Picture template.HTML
	Caption string // of Picture
	Chart   string // id of the chart that Picture is the still form of
	Gallery []figure
	Views   []figure // large pictures beside each other
	Scale   *scaleBar
	Code    string // text of a file, shown as it is
	Name    string // of Code
	Terms   []term
	Bars    *bars
	Fold    *section // shown when asked for
}

type figure struct {
	Picture        template.HTML
	Title, Caption string
	Mode           int // number of the mode it shows, 0 for none
}

// scaleBar explains the colours of displacements.
type scaleBar struct{ Steps []int }

type term struct{ Word, Meaning string }

func (s *section) text(words string)    { s.Blocks = append(s.Blocks, block{Text: words}) }
func (s *section) aside(words string)   { s.Blocks = append(s.Blocks, block{Text: words, Quiet: true}) }
func (s *section) heading(words string) { s.Blocks = append(s.Blocks, block{Heading: words}) }
func (s *section) list(items []string)  { s.Blocks = append(s.Blocks, block{List: items}) }

// chart adds a chart that has something to show, and remembers it for the moving page.
func (s *section) chart(c *content, ch *draw.Chart, caption string) {
	if ch == nil {
		return
	}
	svg := ch.Draw()
	if svg == "" {
		return
	}
	c.charts = append(c.charts, ch)
	s.Blocks = append(s.Blocks, block{Picture: trusted(svg), Caption: caption, Chart: ch.ID})
}

// trusted marks a picture as ready for the page. Only packages draw and picture
// make them, and both escape every text they are given.
func trusted(svg string) template.HTML { return template.HTML(svg) }

// table adds a table that has rows.
func (s *section) table(t *table) {
	if t != nil && len(t.Rows) > 0 {
		s.Blocks = append(s.Blocks, block{Table: t})
	}
}

// all lists the blocks of a section with those that are folded away.
func (s *section) all() []block {
	var out []block
	for _, b := range s.Blocks {
		out = append(out, b)
		if b.Fold != nil {
			out = append(out, b.Fold.all()...)
		}
	}
	return out
}

// fold adds a section that is shown when asked for.
func (s *section) fold(inner *section) {
	if inner != nil && len(inner.Blocks) > 0 {
		s.Blocks = append(s.Blocks, block{Fold: inner})
	}
}
