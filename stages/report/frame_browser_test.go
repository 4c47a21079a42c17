package report

import (
	"strings"
	"testing"
)

// movedScript gives the largest way of a node drawn over half a cycle, as a share of the span of the frame.
const movedScript = `(() => { const v = hushframe.view; v.phase = 0; v.render(); const a = v.places(); v.phase = Math.PI; v.render(); const b = v.places();
	let most = 0; for (let k = 0; k < a.length; k++) most = Math.max(most, Math.abs(a[k] - b[k])); return most / v.span })()`

// inkScript gives the share of the pixels of the canvas that something was drawn on.
const inkScript = `(() => { const v = hushframe.view; v.render(); const c = document.createElement('canvas'); c.width = v.canvas.width; c.height = v.canvas.height;
	const g = c.getContext('2d'); g.drawImage(v.canvas, 0, 0); const d = g.getImageData(0, 0, c.width, c.height).data;
	let n = 0; for (let k = 3; k < d.length; k += 4) if (d[k] > 0) n++; return n / (d.length / 4) })()`

func TestFrameMovesInABrowser(t *testing.T) {
	_, page := samplePage(t)
	b := visit(t, page, screen{width: 1280, height: 900})
	b.until("globalThis.hushframe !== undefined")
	if share := ask[float64](b, inkScript); share < 0.03 || share > 0.9 {
		t.Errorf("%.3f of the canvas is drawn on", share)
	}
	before := ask[int](b, "hushframe.view.frames")
	b.until("hushframe.view.frames > " + itoa(before+3)) // it runs by itself
	if moved := ask[float64](b, movedScript); moved < 0.05 {
		t.Errorf("within half a cycle the frame moved by %g of its span", moved)
	}
	// A picture and a clip can be saved; what is saved is caught on its way to the disk.
	saved := ask[[]struct {
		Name, Type string
		Size       int
	}](b, `(async () => { const got = [], real = HTMLAnchorElement.prototype.click, make = URL.createObjectURL; let last = null;
		URL.createObjectURL = x => { last = x; return make(x) };
		HTMLAnchorElement.prototype.click = function () { got.push({Name: this.download, Type: last.type, Size: last.size}) };
		hushframe.state.set({speed: 3}); await hushframe.companion.picture();
		const b = [...document.querySelectorAll('.looks button')].find(b => b.textContent === 'save clip'); if (!b.hidden) await hushframe.companion.clip(b);
		HTMLAnchorElement.prototype.click = real; URL.createObjectURL = make; return got })()`)
	if len(saved) != 2 || saved[0].Type != "image/png" || saved[0].Size < 5000 || !strings.HasPrefix(saved[1].Type, "video/") || saved[1].Size < 2000 || !strings.HasPrefix(saved[0].Name, "Mode-") {
		t.Errorf("saved %+v", saved)
	}
	b.clean()
}
