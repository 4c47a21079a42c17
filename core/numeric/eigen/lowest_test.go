package eigen_test

import (
	"context"
	"math"
	"testing"

	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

func TestGridAgreesWithClosedForm(t *testing.T) {
	k, want, _ := trial.Grid(40, 40)
	res, err := eigen.Lowest(context.Background(), k, trial.Identity(k.N), sparse.MinimumDegree(k.Pattern()), eigen.Options{Modes: 30})
	if err != nil {
		t.Fatal(err)
	}
	if !res.Status.Converged || !res.Status.Proved {
		t.Fatalf("status %+v", res.Status)
	}
	for i, v := range res.Values {
		if math.Abs(v-want[i]) > 1e-12 {
			t.Errorf("value %d is %.15g, want %.15g", i, v, want[i])
		}
	}
}
