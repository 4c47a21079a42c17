package report

import (
	"fmt"
	"math/cmplx"

	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// transferSection shows the transfer functions of a bench recording, response by response, with what they rest on.
func transferSection(c *content) *section {
	x := c.transfer
	if x == nil {
		return nil
	}
	s := &section{ID: "transfer", Title: "Transfer functions on the bench"}
	how := fmt.Sprintf("%s of a steady force", joinCount(x.Averages, "segment", "segments"))
	if len(x.Strikes) > 0 {
		how = joinCount(x.Averages, "strike", "strikes") + " of a hammer"
	}
	s.text(fmt.Sprintf("What moves per newton, averaged over %s. H1 is free of noise in the response, H2 of noise in the force: where both lie apart, one of them is noisy. "+
		"The coherence is the share of the motion that the force explains; well below 1 there is noise, another source, or something that rattles.", how))
	for i, r := range x.Responses {
		s.heading(upper(r.Axis))
		s.chart(c, magnitudeChart(x, i), "")
		s.chart(c, phaseChart(x, i), "")
		s.chart(c, coherenceChart(x, i), "")
	}
	s.table(transferPeaks(x))
	s.table(strikeTable(x))
	return s
}

// perNewton gives the unit in which a response is shown, and its factor on SI.
func perNewton(r kinds.TransferResponse) (unit string, factor float64) {
	if r.Unit == "m/s^2/N" || r.Quantity == "acceleration" {
		return "m/s²/N", 1
	}
	return "deg/s/N", 1 / degree
}

// overForce is a chart over the frequencies that the force reaches, and a little more.
func overForce(x *kinds.Transfer, id, title string, y draw.Axis) *draw.Chart {
	ch := &draw.Chart{ID: id, Title: title, Y: y, X: draw.Axis{Label: "frequency, Hz", From: x.Step, To: min(1.25*x.ExcitedTo, x.Rate/2), Either: true}}
	if x.ExcitedTo < ch.X.To {
		ch.Marks = []draw.Mark{{X: x.ExcitedTo, Label: "little force beyond"}}
	}
	return ch
}

// bins lists the frequencies of a chart from the first bin on, with a value for each.
func bins(x *kinds.Transfer, to float64, of func(k int) float64) (f, y []float64) {
	for k := 1; k < len(x.Force) && float64(k)*x.Step <= to; k++ {
		f, y = append(f, float64(k)*x.Step), append(y, of(k))
	}
	return f, y
}

func magnitudeChart(x *kinds.Transfer, i int) *draw.Chart {
	r := x.Responses[i]
	unit, factor := perNewton(r)
	ch := overForce(x, fmt.Sprintf("transfer-%d-%s", i+1, r.Axis), upper(r.Axis)+" per force", draw.Axis{Label: "magnitude, " + unit, Log: true, Either: true})
	for k, h := range [][]complex128{r.H2, r.H1} {
		f, y := bins(x, ch.X.To, func(b int) float64 { return factor * cmplx.Abs(h[b]) })
		ch.Curves = append(ch.Curves, draw.Thin(draw.Curve{Name: []string{"H2", "H1"}[k], Class: []string{"predicted", "observed"}[k], X: f, Y: y}, mostPoints))
	}
	for _, p := range x.Peaks {
		if p.Response == i {
			ch.Points = append(ch.Points, draw.Point{X: p.Frequency, Y: factor * p.Magnitude, Class: "observed", Label: fmt.Sprintf("%.1f", p.Frequency),
				About: fmt.Sprintf("%.2f Hz, coherence %.3f", p.Frequency, p.Coherence)})
		}
	}
	ch.About = fmt.Sprintf("Magnitude of the transfer function from the force to %s, from %.4g to %.4g Hz. Peaks are in the table below.", r.Axis, ch.X.From, ch.X.To)
	return ch
}

func phaseChart(x *kinds.Transfer, i int) *draw.Chart {
	r := x.Responses[i]
	ch := overForce(x, fmt.Sprintf("transfer-phase-%d-%s", i+1, r.Axis), upper(r.Axis)+": phase", draw.Axis{Label: "phase of H1, deg", From: -180, To: 180})
	f, y := bins(x, ch.X.To, func(b int) float64 { return cmplx.Phase(r.H1[b]) / degree })
	ch.Curves = []draw.Curve{draw.Thin(draw.Curve{Name: "H1", Class: "observed", X: f, Y: y}, mostPoints)}
	ch.About = fmt.Sprintf("Phase of the transfer function from the force to %s over frequency; it falls through a peak of the structure.", r.Axis)
	return ch
}

func coherenceChart(x *kinds.Transfer, i int) *draw.Chart {
	r := x.Responses[i]
	ch := overForce(x, fmt.Sprintf("transfer-coherence-%d-%s", i+1, r.Axis), upper(r.Axis)+": coherence", draw.Axis{Label: "coherence", From: 0, To: 1})
	f, y := bins(x, ch.X.To, func(b int) float64 { return r.Coherence[b] })
	ch.Curves = []draw.Curve{draw.Thin(draw.Curve{Name: "coherence", Class: "observed", X: f, Y: y}, mostPoints)}
	ch.About = fmt.Sprintf("Coherence of the force and %s over frequency, from 0 to 1.", r.Axis)
	return ch
}

func transferPeaks(x *kinds.Transfer) *table {
	t := &table{Name: "transfer-peaks", Title: "Peaks of the transfer functions", About: "The damping is that of the half-power width, without what the window adds.",
		Columns: []column{{"response", "", false}, {"column", "", false}, {"frequency", "Hz", true}, {"damping ratio", "%", true}, {"magnitude of H1", "", true}, {"unit", "", false}, {"coherence", "", true}}}
	for _, p := range x.Peaks {
		r := x.Responses[p.Response]
		unit, factor := perNewton(r)
		t.Rows = append(t.Rows, []cell{words(r.Axis), words(r.Column), number(p.Frequency, 2), percent(p.Damping, 2), digits(factor*p.Magnitude, 4), words(unit), number(p.Coherence, 3)})
	}
	return t
}

func strikeTable(x *kinds.Transfer) *table {
	t := &table{Name: "strikes", Title: "Strikes", Columns: []column{{"at", "s", true}, {"force", "N", true}, {"length", "ms", true}, {"used", "", false}, {"why not", "", false}}}
	for _, s := range x.Strikes {
		used := words("no")
		if s.Used {
			used = cell{Text: "yes", Raw: "yes", Strong: true}
		}
		t.Rows = append(t.Rows, []cell{number(s.Time, 4), digits(s.Force, 3), digits(1000*s.Length, 2), used, words(s.Why)})
	}
	if x.Decay > 0 {
		t.About = fmt.Sprintf("After each strike %.3g s are used, decaying with a time constant of %.3g s.", float64(x.Segment)/x.Rate, x.Decay)
	}
	return t
}
