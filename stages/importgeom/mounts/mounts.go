// Package mounts is the built-in table of compliant mounts.
//
// The values are typical ones for the small parts that multirotors use: common practice, from memory, no source;
// none is measured. Scatter is a judgement of how far a bought part may lie from them (a factor either way on the
// stiffness). A frame that matters should give its own values: hang the body on its mounts and tap it.
//
// Stiffness in N/m of one piece along x, y (across) and z (along its bore, or the way it is pressed); turned pieces
// are not known. Rubber is stiffer and more lossy the faster it is moved; its law is fractional, of the low order that
// fits filled rubbers over a few decades.
package mounts

import (
	"fmt"
	"strings"

	"hushframe/core/mechanics/airframe"
)

// Mount is one row: a piece, of which a body has several.
type Mount struct {
	Name, About string
	Kind        string
	Stiffness   [3]float64 // N/m of one piece
	Loss        [3]float64
	Law         airframe.Law
	Scatter     float64 // factor either way on the stiffness
}

// Origin says where the values of a row come from.
func (m *Mount) Origin() string {
	return fmt.Sprintf("typical %s; common practice, from memory, no source; stiffness within a factor of %.2g", m.About, m.Scatter)
}

// rubber is the law of an elastomer whose values hold at 100 Hz.
func rubber(order float64) airframe.Law {
	return airframe.Law{Kind: airframe.Fractional, Reference: 100, Order: order}
}

var table = []Mount{
	{"grommet-silicone-soft", "silicone grommet of 30 Shore A, for a 3 mm screw", "grommet", [3]float64{12e3, 12e3, 18e3}, [3]float64{0.12, 0.12, 0.12}, rubber(0.12), 2},
	{"grommet-silicone-firm", "silicone grommet of 50 Shore A, for a 3 mm screw", "grommet", [3]float64{32e3, 32e3, 48e3}, [3]float64{0.14, 0.14, 0.14}, rubber(0.14), 2},
	{"grommet-damping", "grommet of a damping elastomer, for a 3 mm screw", "grommet", [3]float64{25e3, 25e3, 40e3}, [3]float64{0.5, 0.5, 0.5}, rubber(0.4), 2.5},
	{"ball-camera", "hollow silicone ball of 8 mm between camera plates", "ball", [3]float64{1.5e3, 1.5e3, 3e3}, [3]float64{0.15, 0.15, 0.12}, rubber(0.14), 2},
	{"camera-side-tpu", "printed polyurethane cheek beside a camera, each of two", "printed mount", [3]float64{60e3, 90e3, 60e3}, [3]float64{0.2, 0.2, 0.2}, rubber(0.2), 2.5},
	{"foam-tape", "20 by 20 mm of 1 mm acrylic foam tape", "foam", [3]float64{60e3, 60e3, 180e3}, [3]float64{0.5, 0.5, 0.4}, rubber(0.35), 2.5},
	{"strap-over-foam", "quarter of a battery under a strap on 3 mm foam", "strap over foam", [3]float64{12e3, 12e3, 25e3}, [3]float64{0.3, 0.3, 0.22}, rubber(0.22), 2.5},
	{"strap-over-rubber", "quarter of a battery under a strap on a grippy rubber pad of 1.5 mm", "strap over rubber", [3]float64{25e3, 25e3, 70e3}, [3]float64{0.2, 0.2, 0.15}, rubber(0.16), 2.5},
}

// Find gives the mount of a name.
func Find(name string) (Mount, bool) {
	for _, m := range table {
		if m.Name == name {
			return m, true
		}
	}
	return Mount{}, false
}

// Names lists the mounts in the order of the table.
func Names() []string {
	var names []string
	for _, m := range table {
		names = append(names, m.Name)
	}
	return names
}

// Text is the table as users read it.
func Text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%-22s %-14s %-17s %-8s %s\n", "name", "N/mm x, y, z", "loss at 100 Hz", "scatter", "what it is, each")
	for _, m := range table {
		fmt.Fprintf(&b, "%-22s %-14s %-17s %-8s %s\n", m.Name, fmt.Sprintf("%.3g, %.3g, %.3g", m.Stiffness[0]/1e3, m.Stiffness[1]/1e3, m.Stiffness[2]/1e3),
			fmt.Sprintf("%.2g, %.2g, %.2g", m.Loss[0], m.Loss[1], m.Loss[2]), fmt.Sprintf("x/%.2g", m.Scatter), m.About)
	}
	return b.String()
}
