package report

import (
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
	b.clean()
}
