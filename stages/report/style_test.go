package report

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// luminance of #rrggbb and the contrast of two colours, after WCAG 2.2 (W3C Recommendation, 2023), definitions of
// relative luminance and contrast ratio.
func luminance(hex string) float64 {
	sum := 0.0
	for k, weight := range []float64{0.2126, 0.7152, 0.0722} {
		n, _ := strconv.ParseInt(hex[1+2*k:3+2*k], 16, 32)
		c := float64(n) / 255
		if c <= 0.04045 {
			c /= 12.92
		} else {
			c = math.Pow((c+0.055)/1.055, 2.4)
		}
		sum += weight * c
	}
	return sum
}

// Words and curves can be told from the paper: 4.5 for text (WCAG 2.2, criterion 1.4.3), on light and dark paper.
func TestContrast(t *testing.T) {
	tokens := func(text string) map[string]string {
		out := map[string]string{}
		for _, m := range regexp.MustCompile(`--([a-z0-9-]+):(#[0-9a-f]{6})`).FindAllStringSubmatch(text, -1) {
			if out[m[1]] == "" {
				out[m[1]] = m[2]
			}
		}
		return out
	}
	for name, set := range map[string]map[string]string{"light": tokens(styleText), "dark": tokens(darkText)} {
		for _, ink := range []string{"ink", "quiet", "predicted", "observed", "flown", "good", "bad", "roll", "pitch", "yaw"} {
			for _, paper := range []string{"paper", "card"} {
				a, b := luminance(set[ink]), luminance(set[paper])
				if ratio := (math.Max(a, b) + 0.05) / (math.Min(a, b) + 0.05); !(ratio >= 4.5) {
					t.Errorf("%s on %s %s: contrast %.2f", ink, name, paper, ratio)
				}
			}
		}
		for _, pair := range [][2]string{{"note", "note-soft"}, {"ink", "note-soft"}, {"ink", "good-soft"}, {"ink", "bad-soft"}} {
			a, b := luminance(set[pair[0]]), luminance(set[pair[1]])
			if ratio := (math.Max(a, b) + 0.05) / (math.Min(a, b) + 0.05); !(ratio >= 4.5) {
				t.Errorf("%s on %s, %s: contrast %.2f", pair[0], pair[1], name, ratio)
			}
		}
	}
}

// A table of any length leaves the page small, and its file whole.
func TestLongTablesAreCutOnThePage(t *testing.T) {
	c := sampleContent(t)
	for len(c.response.Lines) < 5000 {
		c.response.Lines = append(c.response.Lines, c.response.Lines...)
	}
	n := len(c.response.Lines)
	page, d := render(t, c)
	if rows := strings.Count(string(d.Files["page-tables/rotor-lines.csv"]), "\n"); rows != n+1 {
		t.Errorf("the file has %d lines for %d rows", rows, n)
	}
	if !strings.Contains(page, fmt.Sprintf("The first %d of %d rows; the file has all.", mostShown, n)) || strings.Count(page, "<tr>") > n {
		t.Error("the page has the table whole, or does not say that it is cut")
	}
}
