package cases

import (
	"fmt"
	"math"

	"hushframe/core/known"
)

// Family is a set of rows that one function builds and solves.
type Family struct {
	// Title says what the problems are, Mesh what they are solved on.
	Title, Mesh string
	// File is the reference file, Rows the beginnings of the ids in it, Except ids left out.
	File   string
	Rows   []string
	Except []string
	// Slack is the share of the row's tolerance that the tests allow, at most one.
	Slack float64
	build func(t known.T, row known.Row) []float64
}

// Solve computes the values of a row, in the order of its labels; a value that the family does not
// compute is NaN, and values at the end may be left out. The error tells what went wrong on the way.
func (f *Family) Solve(row known.Row) (values []float64, err error) {
	r := &recorder{}
	defer func() {
		switch v := recover().(type) {
		case nil:
		case *recorder:
		default:
			panic(v)
		}
		if r.err != nil {
			values, err = nil, r.err
		}
	}()
	return f.build(r, row), nil
}

// Share is the error of a value over the row's own tolerance for it, half of its last digit printed
// included; one just passes.
func Share(row known.Row, i int, x float64) float64 {
	want := row.Values[i]
	return math.Abs(x-want) / (row.TolAbs[i] + row.TolRel[i]*math.Abs(want) + known.Printed*math.Abs(want))
}

// recorder is a known.T outside tests; Fatal panics with it.
type recorder struct{ err error }

func (r *recorder) Helper() {}

func (r *recorder) Errorf(format string, args ...any) {
	if r.err == nil {
		r.err = fmt.Errorf(format, args...)
	}
}

func (r *recorder) Fatal(args ...any) {
	r.Errorf("%s", fmt.Sprint(args...))
	panic(r)
}

func (r *recorder) Fatalf(format string, args ...any) {
	r.Errorf(format, args...)
	panic(r)
}

const (
	beams   = "A_beams.json"
	plates  = "B_plates.json"
	shells  = "C_shells.json"
	forcing = "D_harmonic.json"
)

// Families lists all of them, by file.
func Families() []Family {
	return []Family{
		{"uniform bars", "40 beams", beams, []string{"A-EB-CF", "A-EB-FF", "A-EB-SS", "A-EB-CS"}, []string{"A-EB-FF-NODES-1", "A-EB-FF-NODES-2", "A-EB-FF-NODES-3"}, 0.2, bars},
		{"nodal points of a free bar", "40 beams", beams, []string{"A-EB-FF-NODES-"}, nil, 0.3, barNodes},
		{"bars by two theories", "80 beams", beams, []string{"A-BEAM-"}, nil, 0.6, sections},
		{"stocky cantilevers", "80 beams", beams, []string{"A-TIM-"}, nil, 0.3, timoshenko},
		{"cantilever with tip body", "20 beams", beams, []string{"A-TIPMASS-"}, nil, 0.1, tipBodies},
		{"arm with motor body", "20 beams", beams, []string{"A-ARM-"}, nil, 0.1, arms},
		{"bars with end springs and bodies", "20 beams", beams, []string{"A-TIPSPRING-", "A-FF-"}, nil, 0.1, endSprings},
		{"rods with end inertia", "40 beams", beams, []string{"A-ROD-TIP-"}, nil, 0.2, rods},
		{"body on mounts", "springs only", beams, []string{"A-MOUNTS-"}, nil, 0.1, mounts},
		{"cantilever with off-centre masses", "20 beams", beams, []string{"A-OFFCENTRE-"}, nil, 0.1, offCentreMasses},
		{"deep beam", "40 beams", beams, []string{"A-DEEP-"}, nil, 0.6, deepBeam},
		{"double cross", "10 beams per arm", beams, []string{"A-DOUBLE-CROSS"}, nil, 0.3, doubleCross},
		{"free airframes of beams", "10 beams per arm", beams, []string{"A-AIRFRAME-"}, nil, 0.1, airframesOfBeams},
		{"free ring frame", "14 beams per side", beams, []string{"A-RING-FRAME"}, nil, 0.2, ringFrame},
		{"portal frame", "20 beams per member", beams, []string{"A-PORTAL"}, nil, 0.8, portal},

		{"torsion constants of rectangles", "4 beams", beams, []string{"A-TORSION-J"}, nil, 0.1, torsionConstants},
		{"torsion stresses of rectangles", "4 beams", beams, []string{"A-TORSION-TAU"}, nil, 0.1, torsionStresses},
		{"orthotropic bars in torsion", "4 beams", beams, []string{"A-ORTHO-TORSION-"}, nil, 0.1, orthotropicBars},
		{"narrow strips in torsion", "shells on the default mesh", beams, []string{"A-FSDT-STRIP-"}, nil, 1, narrowStrips},

		{"rectangular plates, bending", "12 cells along", plates, []string{"B-THIN-", "B-THICK-", "B-SQ-"}, nil, 0.6, rectangles},
		{"turned plies", "no mesh", plates, []string{"B-QBAR-"}, nil, 1, turnedPlies},
		{"stiffness of laminates", "no mesh", plates, []string{"B-CLT-"}, nil, 1, stacks},
		{"transverse shear of laminates", "no mesh", plates, []string{"B-SHEARCYL-"}, nil, 1, shearByEquilibrium},
		{"plates in their plane", "16 or 20 cells along", plates, []string{"B-INPLANE-", "B-TAPER-MEMBRANE"}, nil, 0.2, membranes},
		{"clamped rhombic plates", "16 × 16 cells", plates, []string{"B-RHOMB-"}, nil, 0.2, rhombs},
		{"discs and rings", "7 × 32 cells", plates, []string{"B-CIRC-", "B-ANNULUS-", "B-DISC-"}, nil, 0.35, rounds},
		{"orthotropic plates and laminates", "14 cells along", plates, []string{"B-ORTHO-", "B-LAM-"}, nil, 0.85, laminates},
		{"simply supported laminates", "12 × 12 cells", plates, []string{"B-NAVIER-"}, nil, 0.1, navierFrequencies},
		{"laminates under pressure", "12 × 12 cells", plates, []string{"B-STATIC-"}, nil, 0.1, sinusoidalPressure},
		{"plates with a point mass", "16 × 16 cells", plates, []string{"B-POINTMASS-"}, nil, 0.2, pointMasses},

		{"straight cantilever strip", "48 × 4 cells", shells, []string{"C-STRAIGHT-CANT"}, nil, 0.6, straightCantilever},
		{"curved cantilever strip", "36 × 2 cells", shells, []string{"C-CURVED-CANT"}, nil, 0.5, curvedCantilever},
		{"twisted cantilever strip", "48 × 8 cells of flat facets", shells, []string{"C-TWISTED-"}, nil, 0.4, twistedCantilever},
		{"roof under its weight", "16 × 16 cells of flat facets on the quarter", shells, []string{"C-ROOF"}, nil, 0.4, roof},
		{"hemisphere under two pairs of forces", "32 × 32 cells of flat facets on the quarter; on the 24 × 24 of the table they are 2.5 % too stiff", shells, []string{"C-HEMISPHERE"}, nil, 1, hemisphere},
		{"pinched cylinder", "32 × 32 cells of flat facets on the eighth", shells, []string{"C-PINCHED-CYL"}, nil, 0.5, pinchedCylinder},
		{"cylinder on diaphragms", "48 × 14 cells of flat facets", shells, []string{"C-CYL-SD-1"}, nil, 0.2, cylinder},
		{"curved fan blade", "16 × 16 cells of flat facets", shells, []string{"C-FAN-BLADE"}, nil, 0.2, fanBlade},
		{"plates under pressure and force", "12 cells across the quarter", shells, []string{"C-PLATE-STATIC-"}, nil, 0.3, platesUnderLoad},
		{"plate with a body on its edge", "20 × 6 cells", shells, []string{"C-PLATE-TIPBODY"}, nil, 0.4, plateWithTipBody},
		{"folded plates", "16 cells along, 9 across 50 mm", shells, []string{"C-FOLD-90-CANT", "C-CHANNEL-FREE"}, nil, 0.8, foldedPlates},
		{"free plus-shaped frames", "4 cells across an arm", shells, []string{"C-PLUS-"}, nil, 0.5, plusFrames},
		{"plates on standoffs", "20 × 16 cells", shells, []string{"C-STACK-ALU"}, nil, 0.5, stackOnStandoffs},
		{"board on mounts", "20 × 18 cells", shells, []string{"C-BOARD-MOUNTS"}, nil, 0.5, boardOnMounts},

		{"two masses on springs", "springs only", forcing, []string{"D-TWODOF-A-MODES"}, nil, 0.4, twoMasses},
		{"two masses with dampers", "springs only", forcing, []string{"D-TWODOF-A-PROPZETA", "D-TWODOF-A-NONPROP-EIG"}, nil, 0.5, dampedMasses},
		{"deep beam under a harmonic load", "20 beams", forcing, []string{"D-FORCED-DEEP-BEAM"}, nil, 0.5, forcedBeam},
		{"plates under a harmonic pressure", "12 cells across the quarter", forcing, []string{"D-FORCED-THIN-PLATE", "D-FORCED-THICK-PLATE"}, nil, 0.1, forcedPlate},
		{"free beam with losses", "60 beams, 40 modes", forcing, []string{"D-FFBEAM-FRF", "D-FFBEAM-ROT"}, nil, 0.9, freeBeam},
		{"gyro on a supported plate", "20 × 20 cells, 60 modes", forcing, []string{"D-SSPLATE-GYRO-"}, nil, 0.7, gyroPlate},
	}
}

// Select returns the rows of the family in the text of its file.
func (f *Family) Select(text []byte) ([]known.Row, error) {
	rows, err := known.Select(text, f.Rows...)
	if err != nil {
		return nil, err
	}
	var kept []known.Row
	for _, row := range rows {
		skip := false
		for _, id := range f.Except {
			skip = skip || row.ID == id
		}
		if !skip {
			kept = append(kept, row)
		}
	}
	return kept, nil
}
