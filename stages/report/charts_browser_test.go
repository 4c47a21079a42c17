package report

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"

	"hushframe/stages/kinds"
)

// drawn is what the page holds of a chart.
type drawn struct {
	ID     string
	Live   bool
	Curves []struct {
		Name string
		X, Y []*float64
	}
	Points int
	Paths  int
}

const drawnScript = `hushframe.charts.map(c => ({ID: c.data.id, Live: c.root.querySelector('.live > svg.chart') === c.picture && c.root.querySelectorAll('.panel > svg').length === 0,
	Curves: c.data.curves.map(u => ({Name: u.name, X: Array.from(u.x), Y: Array.from(u.y, v => Number.isFinite(v) ? v : null)})), Points: c.picture.querySelectorAll('.point').length,
	Paths: [...c.picture.querySelectorAll('.curve')].filter(p => (p.getAttribute('d') || '').length > 20).length}))`

// Every chart of the page is live, with the series of the artifacts: the numbers here come from the artifacts
// themselves, not from the descriptions that the page was made of.
func TestChartsHoldTheArtifacts(t *testing.T) {
	c, page := samplePage(t)
	b := visit(t, page, screen{width: 1280, height: 900, still: true})
	b.until("globalThis.hushframe !== undefined")
	var all []drawn
	for _, x := range ask[[]drawn](b, drawnScript) {
		if !x.Live || x.Paths+x.Points == 0 {
			t.Errorf("%s is not drawn", x.ID)
		}
		all = append(all, x)
	}
	if len(all) != len(c.charts) || len(all) < 7 {
		t.Errorf("%d charts on the page, %d described", len(all), len(c.charts))
	}
	find := func(id, curve string) (x, y []*float64) {
		for _, d := range all {
			if d.ID != id {
				continue
			}
			for _, u := range d.Curves {
				if u.Name == curve {
					return u.X, u.Y
				}
			}
		}
		t.Fatalf("no curve %q on %s", curve, id)
		return nil, nil
	}
	same := func(what string, got []*float64, want func(k int) float64, n int) {
		t.Helper()
		if len(got) != n {
			t.Fatalf("%s: %d values, want %d", what, len(got), n)
		}
		for k := range got {
			if w := want(k); math.IsNaN(w) != (got[k] == nil) || got[k] != nil && math.Abs(*got[k]-w) > 1e-6*math.Abs(w) {
				t.Fatalf("%s: value %d is %v, want %g", what, k, got[k], w)
			}
		}
	}
	deg := math.Pi / 180
	for axis, name := range kinds.AxisNames {
		scale := 1.0
		for _, a := range c.comparison.Axes {
			if a.Axis == name {
				scale = a.Scale
			}
		}
		x, y := find("response-"+name, "predicted")
		same("frequency", x, func(k int) float64 { return c.response.Frequency[k] }, len(c.response.Frequency))
		same("predicted "+name, y, func(k int) float64 { return scale * c.response.Density[axis][k] / deg / deg }, len(c.response.Frequency))
		for _, a := range c.spectra.Axes {
			if a.Axis == name {
				_, y = find("response-"+name, "recorded")
				same("recorded "+name, y, func(k int) float64 { return a.Density[k] / deg / deg }, len(a.Density))
			}
		}
	}
	for _, w := range c.response.Whirl {
		if _, y := find("modes-over-rotor-speed", itoa(w.Mode)); true {
			same("whirl", y, func(k int) float64 { return w.Frequency[k] }, len(w.Frequency))
		}
	}
	// The line that is drawn reaches the highest value at its frequency, to a pixel.
	top := ask[struct{ At, Want, Low float64 }](b, `(() => { const c = hushframe.charts[1], u = c.data.curves.find(u => u.name === 'predicted');
		let k = 0; u.y.forEach((v, i) => { if (v > u.y[k]) k = i });
		const n = c.picture.querySelector('.curve.predicted').getAttribute('d').split(/[ML]/).filter(Boolean).map(p => p.split(' ').map(Number));
		const best = n.reduce((a, b) => b[1] < a[1] ? b : a); return {At: Math.abs(best[0] - c.px(u.x[k])), Want: Math.abs(best[1] - c.py(u.y[k])), Low: best[1]} })()`)
	if top.At > 1.5 || top.Want > 1 {
		t.Errorf("the highest peak is drawn %g and %g pixels off", top.At, top.Want)
	}
	// A curve of far more values than pixels keeps its highest and its lowest.
	long := ask[[2]float64](b, `(() => { const c = hushframe.charts[1], n = 200000, x = new Float32Array(n), y = new Float32Array(n).fill(1e-2);
		for (let k = 0; k < n; k++) x[k] = c.x.from + (c.x.to - c.x.from) * k / n; y[70001] = 0.3; y[140001] = 1e-4;
		c.data.curves.push({name: 'long', class: 'faint', x, y}); c.draw();
		const at = c.picture.querySelector('.curve.faint').getAttribute('d').split(/[ML]/).filter(Boolean).map(p => Number(p.split(' ')[1]));
		const off = [Math.min(...at) - c.py(0.3), Math.max(...at) - c.py(1e-4)]; c.data.curves.pop(); c.draw(); return off.map(Math.abs) })()`)
	if long[0] > 0.1 || long[1] > 0.1 {
		t.Errorf("the peak and the dip of a long curve are drawn %g and %g pixels off", long[0], long[1])
	}
	// Labels of modes do not cover each other, at any zoom.
	for range 3 {
		if n := ask[int](b, `(() => { let n = 0; for (const c of hushframe.charts) { const r = [...c.picture.querySelectorAll('.mode-label')].map(e => e.getBoundingClientRect());
			for (let i = 0; i < r.length; i++) for (let j = 0; j < i; j++) if (Math.min(r[i].right, r[j].right) - Math.max(r[i].left, r[j].left) > 0.5) n++ } return n })()`); n > 0 {
			t.Errorf("%d pairs of labels cover each other", n)
		}
		ask[bool](b, "hushframe.charts.slice(0, 3).forEach(c => c.zoom(0.5)), true")
	}
	ask[bool](b, "hushframe.charts.forEach(c => c.reset()), true")
	// What is saved.
	saved := ask[struct{ SVG, CSV string }](b, `(async () => { const got = []; const real = URL.createObjectURL; URL.createObjectURL = x => { got.push(x); return real(x) };
		const c = hushframe.charts[1]; for (const name of ['save as SVG', 'save the numbers as CSV']) c.root.querySelector('[title="' + name + '"]').click();
		URL.createObjectURL = real; return {SVG: await got[0].text(), CSV: await got[1].text()} })()`)
	for _, want := range []string{`xmlns="http://www.w3.org/2000/svg"`, "gyro rate", "stroke=\"rgb(", "frequency, Hz"} {
		if !strings.Contains(saved.SVG, want) {
			t.Errorf("the saved picture lacks %q", want)
		}
	}
	if strings.Contains(saved.SVG, "var(--") || strings.Count(saved.CSV, "\npredicted,") != len(c.response.Frequency) {
		t.Errorf("saved: %d lines of the prediction", strings.Count(saved.CSV, "\npredicted,"))
	}
	b.clean()
}

func itoa(n int) string { b, _ := json.Marshal(n); return string(b) }

// Moving along a response chart moves the frame, with a motion of its own at every frequency and true phase; keys do the
// same; the frame has keys too.
func TestFrameFollowsTheAxisAndTheKeys(t *testing.T) {
	c, page := samplePage(t)
	b := visit(t, page, screen{width: 1280, height: 900, still: true})
	b.until("globalThis.hushframe !== undefined")
	if ask[bool](b, "hushframe.state.now.playing") {
		t.Error("the frame plays though the reader wants less motion")
	}
	ask[bool](b, "document.querySelector('#chart-response-pitch').scrollIntoView({behavior: 'instant', block: 'center'}), true")
	place := func(hz float64) (x, y float64) {
		p := ask[[2]float64](b, `(() => { const c = hushframe.charts.find(c => c.data.id === 'response-pitch'), r = c.picture.getBoundingClientRect(); return [r.left + c.px(`+ftoa(hz)+`) * r.width / c.picture.viewBox.baseVal.width, r.top + r.height / 2] })()`)
		return p[0], p[1]
	}
	shape := func() []float64 {
		return ask[[]float64](b, "(() => { const m = hushframe.view.motion(); return Array.from(m.real).concat(Array.from(m.imaginary || [])) })()")
	}
	var shapes [][]float64
	for _, hz := range []float64{150, 232} {
		x, y := place(hz)
		b.run(chromedp.MouseEvent(chromedp.MouseMoved, x, y))
		b.until("hushframe.state.now.shown.kind === 'frequency' && Math.abs(hushframe.state.now.shown.frequency - " + ftoa(hz) + ") < 2")
		shapes = append(shapes, shape())
	}
	if n := len(shapes[0]); n != len(shapes[1]) || n == 0 || alike(shapes[0], shapes[1]) > 0.999 {
		t.Errorf("shapes of %d and %d numbers, alike to %g", n, len(shapes[1]), alike(shapes[0], shapes[1]))
	}
	// The motion shown is that of the artifact: the weights on the shapes of the modes.
	got := ask[struct {
		Frequency float64
		Real      []float64
		Imaginary []float64
	}](b, `(() => { const s = hushframe.scene, o = s.operating.find(o => o.axis === 'pitch'), k = 20, n = s.shapes.kinds.length, part = x => Array.from(x.subarray(k * n, (k + 1) * n), v => v * o.step[k]);
		return {Frequency: o.frequency[k], Real: part(o.real), Imaginary: part(o.imaginary)} })()`)
	found := false
	for _, m := range c.response.Motions {
		if m.Source != kinds.BroadbandSource || m.Rotor != "all" || m.Axis != "pitch" || math.Abs(m.Frequency-got.Frequency) > 1e-4 {
			continue
		}
		found = true
		most := 0.0
		for v := range m.Real {
			most = math.Max(most, math.Max(math.Abs(m.Real[v]), math.Abs(m.Imaginary[v])))
		}
		for v := range m.Real {
			if math.Abs(m.Real[v]-got.Real[v]) > 2e-5*most || math.Abs(m.Imaginary[v]-got.Imaginary[v]) > 2e-5*most {
				t.Fatalf("vector %d weighs %g%+gi, want %g%+gi", v, got.Real[v], got.Imaginary[v], m.Real[v], m.Imaginary[v])
			}
		}
	}
	if !found {
		t.Errorf("no motion of the artifact at %g Hz", got.Frequency)
	}
	// Keys on the chart.
	before := ask[float64](b, "hushframe.state.now.shown.frequency")
	ask[bool](b, "hushframe.charts.find(c => c.data.id === 'response-pitch').picture.focus(), true")
	b.run(chromedp.KeyEvent(kb.ArrowRight))
	b.until("hushframe.state.now.shown.frequency > " + ftoa(before))
	b.run(chromedp.KeyEvent("+"))
	b.until("(r => r[1] - r[0] < 0.6 * 700)(hushframe.charts.find(c => c.data.id === 'response-pitch').range())")
	if !ask[bool](b, "document.activeElement === hushframe.charts.find(c => c.data.id === 'response-pitch').picture") {
		t.Error("zooming by a key loses the place on the page")
	}
	b.run(chromedp.KeyEvent("0"))
	// Linear and back.
	linear := ask[[]string](b, `(() => { const c = hushframe.charts.find(c => c.data.id === 'response-pitch'), d = () => c.picture.querySelector('.curve.predicted').getAttribute('d');
		const a = d(); [...c.root.querySelectorAll('.tools button')].find(b => b.textContent === 'y log').click(); const l = d(); [...c.root.querySelectorAll('.tools button')].find(b => b.textContent === 'y linear').click(); return [a, l, d()] })()`)
	if linear[0] == linear[1] || linear[0] != linear[2] {
		t.Error("the switch between linear and logarithmic does nothing, or does not go back")
	}
	// Keys on the frame: a mode up, play, turn.
	ask[bool](b, "hushframe.state.set({shown: {kind: 'mode', number: 2}, beside: []}), hushframe.view.canvas.focus(), true")
	b.run(chromedp.KeyEvent("]"))
	b.until("hushframe.state.now.shown.kind === 'mode' && hushframe.state.now.shown.number === 3")
	if !strings.Contains(ask[string](b, "hushframe.view.canvas.getAttribute('aria-label')"), "Mode 3 · 176.2 Hz") {
		t.Error("the text in place of the frame does not name the mode")
	}
	b.run(chromedp.KeyEvent(" "))
	b.until("hushframe.state.now.playing")
	b.run(chromedp.KeyEvent(" "))
	turned := ask[string](b, "JSON.stringify(hushframe.view.camera.position)")
	b.run(chromedp.KeyEvent(kb.ArrowLeft))
	b.until("JSON.stringify(hushframe.view.camera.position) !== " + string(must(json.Marshal(turned))))
	// A row of the page plays its mode; several play side by side.
	ask[bool](b, "document.querySelector('#energy-bars [data-mode=\"5\"] button').click(), true")
	b.until("hushframe.state.now.shown.number === 5")
	ask[bool](b, "[...document.querySelectorAll('.transport button')].find(b => b.textContent === 'side by side').click(), true")
	b.until("hushframe.view.layout().length === 4 && new Set(hushframe.view.layout().map(c => c.caption)).size === 4")
	b.clean()
}

// alike is the cosine between two lists, without its sign.
func alike(a, b []float64) float64 {
	ab, aa, bb := 0.0, 0.0, 0.0
	for k := range a {
		ab, aa, bb = ab+a[k]*b[k], aa+a[k]*a[k], bb+b[k]*b[k]
	}
	return math.Abs(ab) / math.Sqrt(aa*bb)
}

func ftoa(x float64) string { return string(must(json.Marshal(x))) }

func must[T any](x T, err error) T {
	if err != nil {
		panic(err)
	}
	return x
}
