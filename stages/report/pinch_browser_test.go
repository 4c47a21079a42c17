package report

import (
	"math"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/input"
)

// Two fingers on a chart stretch its frequency axis about what lies under them, on a linear and on a logarithmic axis, and the
// page itself keeps its size.
func TestPinchOnAChart(t *testing.T) {
	_, page := samplePage(t)
	b := visit(t, page, screen{width: 390, height: 844, still: true})
	call(b, emulation.SetTouchEmulationEnabled, emulation.SetTouchEmulationEnabledParams{Enabled: true, MaxTouchPoints: 5})
	b.until("globalThis.hushframe !== undefined")
	const chart = "hushframe.charts.find(c => c.data.id === 'response-pitch')"
	ask[bool](b, "document.querySelector('#chart-response-pitch').scrollIntoView({behavior: 'instant', block: 'center'}), true")
	y := ask[float64](b, "(() => { const r = "+chart+".picture.getBoundingClientRect(); return r.top + r.height / 2 })()")
	// Where values lie on the screen, and what lies at places of it.
	places := func(a, c float64) [2]float64 {
		return ask[[2]float64](b, "(() => { const c = "+chart+", r = c.picture.getBoundingClientRect(), w = c.picture.viewBox.baseVal.width; return ["+ftoa(a)+", "+ftoa(c)+"].map(v => r.left + c.px(v) * r.width / w) })()")
	}
	touch := func(kind input.DispatchTouchEventType, x ...float64) {
		var points []*input.TouchPoint
		for i, v := range x {
			id := float64(i + 1)
			points = append(points, &input.TouchPoint{X: v, Y: y, ID: &id})
		}
		call(b, input.DispatchTouchEvent, input.DispatchTouchEventParams{Type: kind, TouchPoints: points})
	}
	whole := ask[[2]float64](b, chart+".range()")
	for _, scale := range []string{"linear", "logarithmic"} {
		at := places(200, 300)
		touch(input.DispatchTouchEventTypeTouchStart, at[0])
		touch(input.DispatchTouchEventTypeTouchStart, at[0], at[1])
		// Apart by twice the distance, and ten pixels to the left, in steps.
		for k := 1.0; k <= 5; k++ {
			half := (at[1] - at[0]) / 2 * k / 5
			touch(input.DispatchTouchEventTypeTouchMove, at[0]-half-2*k, at[1]+half-2*k)
		}
		want := [2]float64{at[0] - (at[1]-at[0])/2 - 10, at[1] + (at[1]-at[0])/2 - 10}
		far := func(now [2]float64) bool { return math.Abs(now[0]-want[0]) > 1 || math.Abs(now[1]-want[1]) > 1 }
		now := places(200, 300)
		for range 50 { // moves wait for the next frame of the screen
			if now = places(200, 300); !far(now) {
				break
			}
			time.Sleep(20 * time.Millisecond)
		}
		if far(now) {
			t.Errorf("%s: 200 and 300 Hz lie at %.1f, want %.1f", scale, now, want)
		}
		touch(input.DispatchTouchEventTypeTouchEnd)
		after := ask[[2]float64](b, chart+".range()")
		if after[0] <= whole[0] || after[1] >= whole[1] {
			t.Errorf("%s: %.1f of %.1f is shown", scale, after, whole)
		}
		// One finger alone stretches nothing.
		touch(input.DispatchTouchEventTypeTouchStart, at[0])
		touch(input.DispatchTouchEventTypeTouchMove, at[0]+30)
		touch(input.DispatchTouchEventTypeTouchEnd)
		if now := ask[[2]float64](b, chart+".range()"); now != after {
			t.Errorf("%s: one finger changed the range from %.1f to %.1f", scale, after, now)
		}
		ask[bool](b, chart+".reset(), "+chart+".root.querySelector('.tools button').click(), true")
	}
	if zoom := ask[float64](b, "visualViewport.scale"); zoom != 1 {
		t.Errorf("the page is zoomed by %g", zoom)
	}
	b.clean()
}
