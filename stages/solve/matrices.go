package solve

import (
	"bytes"
	"context"
	"path"
	"strconv"
	"strings"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/sparse"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// massFile is written beside the stiffness.
const massFile = "mass.mtx"

// writeMatrices writes K and M, if the job says where to, and an empty artifact if not.
func writeMatrices(ctx context.Context, call *stage.Call, f *assembly.Frame) error {
	a := artifact.New(kinds.MatricesKind)
	a.Scalars = map[string]any{"unknowns": int64(0)}
	var names []string
	var places [3][]float64
	if call.Arguments.Has("matrices") {
		target := path.Base(strings.ReplaceAll(call.Arguments.Text("matrices"), `\`, "/"))
		if target == massFile || target == "." || target == "/" {
			return fault.New(fault.Input, "the stiffness cannot be written to %q", target).In("solve", "").Of("matrices").
				Do(`name the file of the stiffness, such as "matrices/stiffness.mtx"; the mass goes to %s beside it`, massFile)
		}
		call.Report.Progress("matrices", -1)
		s, err := assembly.Assemble(ctx, &f.Problem, call.Threads)
		if err != nil {
			return err
		}
		a.Scalars["unknowns"] = int64(s.N)
		for u := range s.N {
			names = append(names, s.Name(u))
			for k, x := range s.Place(u) {
				places[k] = append(places[k], x)
			}
		}
		a.Files = map[string][]byte{
			target:   matrixMarket(s.K, "stiffness: N/m, N, N*m"),
			massFile: matrixMarket(s.M, "mass: kg, kg*m, kg*m^2"),
		}
	}
	t := a.Table("unknowns").Set("unknown", names)
	for k, x := range []string{"x", "y", "z"} {
		t.Set("place_"+x, places[k])
	}
	_, err := artifact.Write(call.Outputs["matrices"], a)
	return err
}

// matrixMarket writes the lower triangle in coordinate form with all digits.
func matrixMarket(a *sparse.Symmetric, comment string) []byte {
	var b bytes.Buffer
	b.WriteString("%%MatrixMarket matrix coordinate real symmetric\n% " + comment + "\n")
	n := strconv.Itoa(a.N)
	b.WriteString(n + " " + n + " " + strconv.Itoa(len(a.Val)) + "\n")
	var line []byte
	for j := range a.N {
		for p := a.Ptr[j]; p < a.Ptr[j+1]; p++ {
			line = strconv.AppendInt(line[:0], int64(a.Row[p])+1, 10)
			line = append(line, ' ')
			line = strconv.AppendInt(line, int64(j)+1, 10)
			line = append(line, ' ')
			line = strconv.AppendFloat(line, a.Val[p], 'g', -1, 64)
			b.Write(append(line, '\n'))
		}
	}
	return b.Bytes()
}
