package picture

import (
	"fmt"
	"html"
	"math"
	"strconv"
	"strings"

	"hushframe/core/mechanics/outline"
)

const style = `<style>
.af-plate{fill:var(--af-plate,#5b7c8d);fill-opacity:.22;stroke:currentColor;stroke-width:.35;stroke-linejoin:round}
.af-load{fill:var(--af-load,#b98a2e);fill-opacity:.2;stroke:var(--af-load,#b98a2e);stroke-width:.5}
.af-rotor{fill:var(--af-rotor,#1f7a6d);fill-opacity:.28;stroke:var(--af-rotor,#1f7a6d);stroke-width:.5}
.af-gyro{fill:var(--af-gyro,#a3386c);fill-opacity:.25;stroke:var(--af-gyro,#a3386c);stroke-width:.6}
.af-post{fill:var(--af-bolt,#7d6f63);fill-opacity:.55;stroke:currentColor;stroke-width:.25}
.af-bolt{fill:none;stroke:var(--af-bolt,#7d6f63);stroke-width:.6}
.af-way{fill:none;stroke:var(--af-rotor,#1f7a6d);stroke-width:.8;stroke-linecap:round}
.af-spring{fill:none;stroke:var(--af-gyro,#a3386c);stroke-width:.6;stroke-dasharray:1.2 .8}
.af-thin{fill:none;stroke:currentColor;stroke-width:.35}
.af-solid{fill:currentColor;stroke:none}
.af-word{font-family:system-ui,sans-serif;fill:currentColor;text-anchor:middle}
.af-quiet{font-family:system-ui,sans-serif;fill:currentColor;fill-opacity:.7}
</style>`

// view maps airframe axes to the page: right and down, in millimetres.
type view struct {
	b           strings.Builder
	right, down func(x, y, z float64) float64
	box         outline.Box // of what was drawn, on the page
	words       []word
}

// word is a label that keeps clear of others.
type word struct {
	at   outline.Point
	text string
}

func mm(x float64) string {
	s := strconv.FormatFloat(x, 'f', 2, 64)
	s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	if s == "-0" || s == "" {
		return "0"
	}
	return s
}

func (v *view) page(p [3]float64) outline.Point {
	return outline.Point{X: 1e3 * v.right(p[0], p[1], p[2]), Y: 1e3 * v.down(p[0], p[1], p[2])}
}

func (v *view) grow(p ...outline.Point) {
	for _, q := range p {
		v.box = v.box.With(q)
	}
}

// path draws closed rings, with the even-odd rule so that holes stay open.
func (v *view) path(class, title string, rings [][]outline.Point) {
	v.b.WriteString(`<path class="` + class + `" fill-rule="evenodd" d="`)
	for _, ring := range rings {
		for i, p := range ring {
			v.grow(p)
			v.b.WriteString(map[bool]string{true: "M", false: "L"}[i == 0] + mm(p.X) + " " + mm(p.Y))
		}
		v.b.WriteString("Z")
	}
	v.b.WriteString(`"`)
	v.titled("path", title)
}

func (v *view) titled(element, title string) {
	if title == "" {
		v.b.WriteString("/>")
		return
	}
	v.b.WriteString("><title>" + html.EscapeString(title) + "</title></" + element + ">")
}

func (v *view) line(class string, p, q outline.Point) {
	v.grow(p, q)
	fmt.Fprintf(&v.b, `<path class="%s" d="M%s %sL%s %s"/>`, class, mm(p.X), mm(p.Y), mm(q.X), mm(q.Y))
}

func (v *view) circle(class, title string, c outline.Point, r float64) {
	v.grow(c.Add(outline.Point{X: r, Y: r}), c.Sub(outline.Point{X: r, Y: r}))
	fmt.Fprintf(&v.b, `<circle class="%s" cx="%s" cy="%s" r="%s"`, class, mm(c.X), mm(c.Y), mm(r))
	v.titled("circle", title)
}

func (v *view) text(class string, size float64, at outline.Point, s string) {
	fmt.Fprintf(&v.b, `<text class="%s" font-size="%s" x="%s" y="%s">%s</text>`, class, mm(size), mm(at.X), mm(at.Y), html.EscapeString(s))
}

// label asks for a word at a place; words are moved down where they would cover each other.
func (v *view) label(at outline.Point, s string) { v.words = append(v.words, word{at, s}) }

// Sizes of words, as shares of the extent of what is drawn, so that a frame of any size has words that
// can be read; the rest as shares of the size of a word.
const (
	wordSize = 0.024
	letter   = 0.56 // width of a letter
	lineUp   = 1.15 // height of a line
)

func (v *view) writeWords(size float64) {
	line := lineUp * size
	var boxes []outline.Box
	for _, w := range v.words {
		half := letter * size * float64(len([]rune(w.text))) / 2
		at := w.at
		for range 20 {
			b := outline.Box{Min: outline.Point{X: at.X - half, Y: at.Y - line/2}, Max: outline.Point{X: at.X + half, Y: at.Y + line/2}}
			clear := true
			for _, o := range boxes {
				clear = clear && !o.Meets(b)
			}
			if clear {
				boxes = append(boxes, b)
				break
			}
			at.Y += line
		}
		v.grow(outline.Point{X: at.X - half, Y: at.Y - line}, outline.Point{X: at.X + half, Y: at.Y + line/2})
		v.text("af-word", size, outline.Point{X: at.X, Y: at.Y + 0.35*size}, w.text)
	}
}

// finish puts the frame of the picture, its title, a scale and the direction of flight round what was drawn.
func (v *view) finish(about string, forward outline.Point) string {
	size := wordSize * math.Max(v.box.Width(), v.box.Height())
	v.writeWords(size)
	margin := 1.5 * size
	b := v.box.Grow(margin)
	bar := scaleBar(b.Width())
	base := b.Max.Y + size
	left := b.Min.X + margin
	tick := 0.3 * size
	v.b.WriteString(fmt.Sprintf(`<path class="af-thin" d="M%s %sv%sm0 %sh%sm0 %sv%s"/>`, mm(left), mm(base+tick), mm(-2*tick), mm(tick), mm(bar), mm(-tick), mm(2*tick)))
	v.text("af-quiet", 0.9*size, outline.Point{X: left + bar + size/2, Y: base + tick}, mm(bar)+" mm")
	tip := outline.Point{X: b.Max.X - margin - 1.4*size, Y: base - tick}
	start, end := tip.Sub(forward.Scale(1.2*size)), tip.Add(forward.Scale(1.2*size))
	side := outline.Point{X: -forward.Y, Y: forward.X}
	v.b.WriteString(fmt.Sprintf(`<path class="af-thin" d="M%s %sL%s %s"/>`, mm(start.X), mm(start.Y), mm(end.X), mm(end.Y)))
	head := [3]outline.Point{end.Add(forward.Scale(0.4 * size)), end.Sub(forward.Scale(0.4 * size)).Add(side.Scale(0.33 * size)), end.Sub(forward.Scale(0.4 * size)).Sub(side.Scale(0.33 * size))}
	v.b.WriteString(fmt.Sprintf(`<path class="af-solid" d="M%s %sL%s %sL%s %sZ"/>`, mm(head[0].X), mm(head[0].Y), mm(head[1].X), mm(head[1].Y), mm(head[2].X), mm(head[2].Y)))
	v.text("af-quiet", 0.9*size, outline.Point{X: tip.X - 6*size, Y: base + tick}, "forward")
	b.Max.Y = base + 1.8*size
	return fmt.Sprintf(`<svg xmlns="http://www.w3.org/2000/svg" role="img" viewBox="%s %s %s %s" aria-label="%s">`,
		mm(b.Min.X), mm(b.Min.Y), mm(b.Width()), mm(b.Height()), html.EscapeString(about)) + style + v.b.String() + "</svg>"
}

// scaleBar gives a round length of about a quarter of the width.
func scaleBar(width float64) float64 {
	p := math.Pow(10, math.Floor(math.Log10(width/4)))
	for _, f := range []float64{5, 2} {
		if f*p <= width/4 {
			return f * p
		}
	}
	return p
}
