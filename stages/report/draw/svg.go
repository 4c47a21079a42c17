package draw

import (
	"html"
	"strconv"
	"strings"
)

// canvas gathers the elements of one picture.
type canvas struct {
	b strings.Builder
}

// open begins a picture of a size in user units; about is read aloud in its place.
func (c *canvas) open(class, about string, width, height float64) {
	c.b.WriteString(`<svg class="` + class + `" role="img" viewBox="0 0 ` + num(width) + " " + num(height) + `" aria-label="` + html.EscapeString(about) + `">`)
}

func (c *canvas) close() string {
	c.b.WriteString("</svg>")
	return c.b.String()
}

// tag writes an element without content; attributes are name, value, name,
// value, ... with values of type string (escaped) or float64.
func (c *canvas) tag(name string, attributes ...any) { c.element(name, "/>", attributes) }

// start writes the start of an element with content.
func (c *canvas) start(name string, attributes ...any) { c.element(name, ">", attributes) }

func (c *canvas) element(name, closing string, attributes []any) {
	c.b.WriteString("<" + name)
	for i := 0; i+1 < len(attributes); i += 2 {
		c.b.WriteString(" " + attributes[i].(string) + `="`)
		switch v := attributes[i+1].(type) {
		case float64:
			c.b.WriteString(num(v))
		case string:
			c.b.WriteString(html.EscapeString(v))
		default:
			panic("draw: attributes are texts or numbers")
		}
		c.b.WriteString(`"`)
	}
	c.b.WriteString(closing)
}

func (c *canvas) end(name string) { c.b.WriteString("</" + name + ">") }

// text writes words at a place; anchor is start, middle or end.
func (c *canvas) text(x, y float64, class, anchor, words string) {
	c.start("text", "x", x, "y", y, "class", class, "text-anchor", anchor)
	c.b.WriteString(html.EscapeString(words))
	c.end("text")
}

// words writes an element that holds text and nothing else.
func (c *canvas) words(element, words string) {
	c.start(element)
	c.b.WriteString(html.EscapeString(words))
	c.end(element)
}

// image stretches a picture given by its address over a rectangle.
func (c *canvas) image(x, y, width, height float64, address string) {
	c.tag("image", "class", "cells", "x", x, "y", y, "width", width, "height", height, "preserveAspectRatio", "none", "href", address)
}

func (c *canvas) line(x1, y1, x2, y2 float64, class string) {
	c.tag("path", "class", class, "d", "M"+num(x1)+" "+num(y1)+"L"+num(x2)+" "+num(y2))
}

// num writes a coordinate to a tenth of a unit in as few characters as it takes.
func num(x float64) string {
	s := strconv.FormatFloat(x, 'f', 1, 64)
	s = strings.TrimSuffix(s, ".0")
	if s == "-0" {
		return "0"
	}
	return s
}
