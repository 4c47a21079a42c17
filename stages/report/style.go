package report

import (
	_ "embed"
	"strings"

	"hushframe/stages/report/draw"
)

//go:embed style.css
var styleText string

//go:embed dark.css
var darkText string

// style gives the rules of the page. What differs on dark paper holds where the system asks for it, unless the reader
// chose light, and where the reader chose dark; print is always on light paper.
func style() string {
	light, dark := draw.Style()
	rules := func(root, selector string) string {
		return root + "{" + strings.TrimSpace(darkText) + "}\n" + strings.ReplaceAll(dark, ".k", selector+" .k")
	}
	themes := "@media screen{@media (prefers-color-scheme:dark){" + rules(":root:not([data-theme=light])", ":root:not([data-theme=light])") + "}\n" +
		rules(":root[data-theme=dark]", ":root[data-theme=dark]") + "}\n"
	return strings.Replace(styleText, "/*DARK*/", light+themes, 1)
}
