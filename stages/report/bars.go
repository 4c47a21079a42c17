package report

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"hushframe/stages/kinds"
)

// bars shows how wholes are made up of parts.
type bars struct {
	ID, Title, About string
	Keys             []barKey
	Rows             []barRow
}

// barKey explains one kind of piece; Mark sets it apart besides its colour.
type barKey struct{ Name, Class, Mark string }

// barRow is one whole. Said repeats the pieces in words for those who cannot see them.
type barRow struct {
	Name, Said string
	Mode       int
	Pieces     []piece
}

// piece is a part; Width is in per cent of the row.
type piece struct {
	Class, Text, About string
	Width              float64
}

// pieceClasses is how many looks of pieces the page tells apart; the last is for what is left.
const pieceClasses = 7

// energyBars shows for each mode where its strain energy is, the greatest share first.
func energyBars(m *kinds.Modes) *bars {
	b := &bars{ID: "energy-bars", Title: "Where each mode bends", About: "Share of the strain energy in each part, joint and mount, the greatest first. Press a mode to see it move.",
		Keys: []barKey{{"greatest", "p0", ""}, {"second", "p1", ""}, {"third", "p5", ""}, {"fourth", "p3", ""}, {"all others", "p6", ""}}}
	classes := []string{"p0", "p1", "p5", "p3"}
	for _, x := range m.Survey.Modes {
		if x.Frequency > m.UpTo || len(b.Rows) == mostPictures {
			break
		}
		row := barRow{Name: fmt.Sprintf("mode %d, %.1f\u00a0Hz", x.Number, x.Frequency), Mode: x.Number, Said: largest(m.Survey.Groups, x.ByGroup, 4)}
		order := make([]int, len(x.ByGroup))
		for i := range order {
			order[i] = i
		}
		sort.SliceStable(order, func(i, j int) bool { return x.ByGroup[order[i]] > x.ByGroup[order[j]] })
		rest := 1.0
		for rank, i := range order {
			if rank == len(classes) || x.ByGroup[i] < 0.005 {
				break
			}
			q := newPiece(classes[rank], m.Survey.Groups[i], x.ByGroup[i])
			q.Text = ""
			if x.ByGroup[i] > 0.02*float64(len([]rune(m.Survey.Groups[i]))) {
				q.Text = m.Survey.Groups[i]
			}
			row.Pieces = append(row.Pieces, q)
			rest -= x.ByGroup[i]
		}
		if rest > 0.005 {
			row.Pieces = append(row.Pieces, newPiece("p6", "all others", rest))
		}
		b.Rows = append(b.Rows, row)
	}
	if len(b.Rows) == 0 {
		return nil
	}
	return b
}

func newPiece(class, name string, part float64) piece {
	p := piece{Class: class, About: fmt.Sprintf("%s %.0f %%", name, 100*part), Width: math.Round(1000*part) / 10}
	if part >= 0.12 {
		p.Text = fmt.Sprintf("%.0f", 100*part)
	}
	return p
}

// makerBars shows for each peak which modes make it; what works against the peak stands apart, hatched.
func makerBars(r *kinds.Response) *bars {
	b := &bars{ID: "maker-bars", Title: "What makes each peak", About: "Share that each mode adds to the gyro rate at the peak, its phasor projected on the total. Hatched pieces work against it."}
	b.Keys = []barKey{{"strongest mode", "p0", ""}, {"second", "p1", ""}, {"third", "p2", ""}, {"further modes", "p3", ""}, {"rigid body", "p4", ""}, {"modes left out", "p6", ""}, {"works against", "against", ""}}
	for _, p := range r.Peaks {
		row := barRow{Name: fmt.Sprintf("%s, %.1f\u00a0Hz", p.Axis, p.Frequency), Said: makers(p) + "; driven most by " + share(p.Rotor+", "+kinds.ComponentNames[p.Component]+",", p.ComponentShare)}
		type part struct {
			name, class string
			share       float64
		}
		var parts []part
		whole := 0.0
		for i, m := range p.Modes {
			parts = append(parts, part{fmt.Sprintf("mode %d", m), fmt.Sprintf("p%d", min(i, 3)), p.Shares[i]})
		}
		parts = append(parts, part{"rigid body", "p4", p.Rigid}, part{"modes left out", "p6", p.Residual})
		for _, x := range parts {
			if !math.IsNaN(x.share) {
				whole += math.Abs(x.share)
			}
		}
		if whole == 0 {
			continue
		}
		if len(p.Modes) > 0 {
			row.Mode = p.Modes[0]
		}
		for _, x := range parts {
			if !(math.Abs(x.share) >= 0.01) {
				continue
			}
			q := newPiece(x.class, x.name, x.share)
			if x.share < 0 {
				q.Class = "against"
				q.About = sign(q.About) + ", against the peak"
			}
			q.Width = math.Round(1000*math.Abs(x.share)/whole) / 10
			if q.Width >= 16 {
				q.Text = x.name
			} else {
				q.Text = ""
			}
			row.Pieces = append(row.Pieces, q)
		}
		b.Rows = append(b.Rows, row)
	}
	if len(b.Rows) == 0 {
		return nil
	}
	return b
}

// driverBars shows for each peak which rotors make it.
func driverBars(r *kinds.Response) *bars {
	b := &bars{ID: "driver-bars", Title: "Which rotors make each peak", About: "Share of the density that each rotor makes alone under the assumed source."}
	for i, x := range r.Rotors {
		b.Keys = append(b.Keys, barKey{x.Rotor, fmt.Sprintf("p%d", min(i, pieceClasses-1)), ""})
	}
	for _, p := range r.Peaks {
		whole := 0.0
		for _, v := range p.RotorShares {
			whole += math.Max(0, v)
		}
		if len(p.RotorShares) != len(r.Rotors) || !(whole > 0) {
			continue
		}
		row := barRow{Name: fmt.Sprintf("%s, %.1f\u00a0Hz", p.Axis, p.Frequency)}
		var said []string
		for i, v := range p.RotorShares {
			said = append(said, share(r.Rotors[i].Rotor, v))
			if v/whole >= 0.005 {
				q := newPiece(fmt.Sprintf("p%d", min(i, pieceClasses-1)), r.Rotors[i].Rotor, v)
				q.Width = math.Round(1000*v/whole) / 10
				row.Pieces = append(row.Pieces, q)
			}
		}
		row.Said = strings.Join(said, ", ")
		b.Rows = append(b.Rows, row)
	}
	if len(b.Rows) == 0 {
		return nil
	}
	return b
}

func (s *section) bars(b *bars) {
	if b != nil {
		s.Blocks = append(s.Blocks, block{Bars: b})
	}
}
