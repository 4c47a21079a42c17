package eigen_test

import (
	"bytes"
	"encoding/json"
	"math"
	"os/exec"
	"testing"

	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

// pythonWith is a Python that can import something, or nothing.
func pythonWith(module string) string {
	for _, p := range []string{"python3", "/usr/bin/python3"} {
		if exec.Command(p, "-c", "import "+module).Run() == nil {
			return p
		}
	}
	return ""
}

// An independent sparse solver, when there is one on the machine: scipy.sparse.linalg.eigsh in shift-invert mode.
func TestSheetAgreesWithSciPy(t *testing.T) {
	const script = `
import json, sys
import numpy as np, scipy.sparse as sp
from scipy.sparse.linalg import eigsh
d = json.load(sys.stdin)
def full(m):
    low = sp.coo_matrix((m["v"], (m["i"], m["j"])), shape=(d["n"], d["n"])).tocsc()
    return low + sp.tril(low, -1).T
print(json.dumps(sorted(eigsh(full(d["k"]), k=d["modes"], M=full(d["m"]), sigma=d["sigma"], which="LM")[0].tolist())))
`
	python := pythonWith("scipy")
	if python == "" {
		t.Skip("python3 with scipy is not installed: no comparison with it")
	}
	const modes = 20
	l := trial.Sheet{Nx: 10, Ny: 7, Cell: 5e-3, Thick: 2e-3}.Lattice()
	type triplets struct {
		I []int32   `json:"i"`
		J []int     `json:"j"`
		V []float64 `json:"v"`
	}
	list := func(s *sparse.Symmetric) (out triplets) {
		for j := range s.N {
			for p := s.Ptr[j]; p < s.Ptr[j+1]; p++ {
				out.I, out.J, out.V = append(out.I, s.Row[p]), append(out.J, j), append(out.V, s.Val[p])
			}
		}
		return out
	}
	in, err := json.Marshal(map[string]any{"n": l.K.N, "k": list(l.K), "m": list(l.M), "modes": modes, "sigma": -1e7})
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(python, "-c", script)
	cmd.Stdin = bytes.NewReader(in)
	text, err := cmd.Output()
	if err != nil {
		t.Fatal(err)
	}
	var want []float64
	if err := json.Unmarshal(text, &want); err != nil {
		t.Fatal(err)
	}
	res := lowest(t, l.K, l.M, eigen.Options{Modes: modes})
	for i, v := range res.Values {
		// Rigid values are rounding in both.
		if math.Abs(v-want[i]) > 1e-7*max(math.Abs(want[i]), want[6]*1e-2) {
			t.Errorf("value %d is %g, by SciPy %g", i, v, want[i])
		}
	}
}
