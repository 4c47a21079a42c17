package report

import (
	"bytes"
	"slices"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/chromedp"

	"hushframe/core/mechanics/airframe"
)

// show changes the window and the wishes of the reader of an open page.
func (b *tab) show(s screen) {
	b.t.Helper()
	scheme, media := "light", "screen"
	if s.dark {
		scheme = "dark"
	}
	if s.print {
		media = "print"
	}
	call(b, emulation.SetDeviceMetricsOverride, emulation.SetDeviceMetricsOverrideParams{Width: s.width, Height: s.height, DeviceScaleFactor: 1, Mobile: s.width < 600})
	call(b, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{Media: media, Features: []*emulation.MediaFeature{
		{Name: "prefers-color-scheme", Value: scheme}, {Name: "prefers-reduced-motion", Value: "reduce"}}})
}

// From a phone to a wide screen, on light and dark paper, nothing runs out of the window, the frame is drawn and can be
// read; print and a browser without scripts show the still twin.
func TestPageFitsEveryScreenAndPaper(t *testing.T) {
	_, page := samplePage(t)
	b := visit(t, page, screen{width: 360, height: 740, still: true})
	b.until("globalThis.hushframe !== undefined")
	papers := map[string]bool{}
	for _, s := range []screen{{width: 360, height: 740}, {width: 820, height: 1180, dark: true}, {width: 1366, height: 768}, {width: 3840, height: 2160, dark: true}} {
		b.show(s)
		b.until("innerWidth === " + itoa(int(s.width)) + " && hushframe.charts.every(c => c.picture.viewBox.baseVal.width <= innerWidth)")
		got := ask[struct {
			Over                float64
			Stage, Chart, Title [2]float64
			Paper               string
			Text                float64
		}](b, `(() => { const size = e => { const r = e.getBoundingClientRect(); return [r.width, r.height] };
			return {Over: document.documentElement.scrollWidth - innerWidth, Stage: size(hushframe.view.canvas), Chart: size(hushframe.charts[0].picture), Title: size(document.querySelector('h1')),
				Paper: getComputedStyle(document.body).backgroundColor, Text: parseFloat(getComputedStyle(document.querySelector('main p')).fontSize)} })()`)
		if got.Over > 0 {
			t.Errorf("%d wide: the page runs out of the window by %g", s.width, got.Over)
		}
		if got.Stage[0] < 300 || got.Stage[1] < 150 || got.Chart[0] < 280 || got.Text < 14 {
			t.Errorf("%d wide: frame of %v, chart of %v, text of %g", s.width, got.Stage, got.Chart, got.Text)
		}
		if share := ask[float64](b, inkScript); share < 0.02 {
			t.Errorf("%d wide: %.3f of the canvas is drawn on", s.width, share)
		}
		papers[got.Paper] = true
	}
	if len(papers) != 2 {
		t.Errorf("light and dark paper are %v", papers)
	}
	// The reader's own choice goes before that of the system.
	b.show(screen{width: 1366, height: 768})
	ask[bool](b, "document.querySelector('#theme button').click(), document.querySelector('#theme button').click(), true")
	if paper := ask[string](b, "getComputedStyle(document.body).backgroundColor"); paper != "rgb(16, 23, 26)" {
		t.Errorf("dark paper by choice is %s", paper)
	}
	b.show(screen{width: 1000, height: 1400, print: true, dark: true})
	got := ask[struct {
		Companion, Tools, Nav string
		Paper                 string
		Charts                int
	}](b, `(() => { const shown = q => getComputedStyle(document.querySelector(q)).display; return {Companion: shown('#companion'), Tools: shown('.tools'), Nav: shown('nav'),
		Paper: getComputedStyle(document.body).backgroundColor, Charts: hushframe.charts.filter(c => c.picture.getBoundingClientRect().width > 300).length} })()`)
	if got.Companion != "none" || got.Tools != "none" || got.Nav != "none" || got.Paper != "rgb(255, 255, 255)" || got.Charts < 4 {
		t.Errorf("in print: %+v", got)
	}
	pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF())
	if n := ask[int](b, "document.querySelectorAll('main details[open]').length"); n > 0 {
		t.Errorf("%d folds stay open after printing", n)
	}
	if err != nil || !bytes.HasPrefix(pdf, []byte("%PDF")) || len(pdf) < 50_000 {
		t.Errorf("printed to %d bytes: %v", len(pdf), err)
	}
	b.clean()

	b = visit(t, page, screen{width: 1000, height: 800, noScript: true})
	n := ask[[3]int](b, "[document.querySelectorAll('figure[data-chart] > .panel > svg').length, document.querySelectorAll('#companion:not([hidden])').length, document.querySelectorAll('.gallery svg').length]")
	if n[0] < 7 || n[1] != 0 || n[2] < 7 {
		t.Errorf("without scripts: %d charts, %d frames, %d shapes", n[0], n[1], n[2])
	}
	b.clean()
}

// Names with markup, script and right-to-left text do no harm and are shown as they are.
func TestHostileNamesInABrowser(t *testing.T) {
	const bad, turned = `</script><img src=x onerror="globalThis.harmed=1"><b>&`, "\u202eمحرك\u202c"
	c := sampleContent(t)
	c.run.Job, c.run.About = bad, turned
	c.mesh.Parts[0].Name, c.mesh.Parts[1].Name = bad, turned
	c.geometry.Plates[0].Name = bad
	c.properties.Bodies[0].Name = bad
	c.modes.Survey.Modes[0].Part, c.modes.Survey.Groups[0], c.modes.Basis.Groups[0].Name = bad, bad, bad
	c.response.Rotors[0].Rotor = bad
	c.comparison.Orders[0].Rotor = bad
	page, _ := render(t, c)
	b := visit(t, []byte(page), screen{width: 1280, height: 900, still: true})
	b.until("globalThis.hushframe !== undefined")
	ask[bool](b, "hushframe.state.set({names: true}), hushframe.view.render(), true")
	got := ask[struct {
		Harmed, Images, Bold int
		Names                string
		Heading              string
	}](b, `({Harmed: globalThis.harmed || 0, Images: document.images.length, Bold: document.querySelectorAll('.names b, h1 b').length, Names: hushframe.view.names().map(n => n.text).join('|'), Heading: document.querySelector('h1').textContent})`)
	if got.Harmed+got.Images+got.Bold > 0 || got.Heading != bad || !strings.Contains(got.Names, bad) || !strings.Contains(got.Names, turned) {
		t.Errorf("on the page: %+v", got)
	}
	b.clean()
}

// Whatever is missing, the page opens without an error and shows what there is.
func TestPagesWithPartsMissing(t *testing.T) {
	whole := sampleContent(t)
	other := *whole.mesh
	other.Nodes = append(slices.Clone(other.Nodes), airframe.Vec{})
	for name, c := range map[string]*content{
		"nothing":         {},
		"mesh alone":      {mesh: whole.mesh},
		"response alone":  {response: whole.response},
		"recording alone": {spectra: whole.spectra},
		"modes alone":     {modes: whole.modes},
		"another mesh":    {mesh: &other, modes: whole.modes, response: whole.response},
	} {
		page, _ := render(t, c)
		b := visit(t, []byte(page), screen{width: 900, height: 600, still: true})
		b.until("globalThis.hushframe !== undefined")
		got := ask[struct {
			View   bool
			Charts int
		}](b, "({View: !!hushframe.view, Charts: hushframe.charts.length})")
		if got.View != (c.mesh != nil) || got.Charts != len(c.charts) {
			t.Errorf("%s: frame %v, %d charts", name, got.View, got.Charts)
		}
		b.clean()
	}
}
