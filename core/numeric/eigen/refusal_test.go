package eigen_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

func refuse(k, m *sparse.Symmetric, opt eigen.Options) error {
	order := sparse.MinimumDegree(sparse.Combine(1, k, 1, m).Pattern())
	_, err := eigen.Lowest(context.Background(), k, m, order, opt)
	return err
}

func TestIndefiniteMassIsRefused(t *testing.T) {
	k, _ := trial.Chain(30)
	mass := make([]float64, 30)
	for i := range mass {
		mass[i] = 1
	}
	mass[11] = -1e-3
	var indefinite *eigen.IndefiniteError
	if err := refuse(k, trial.Diagonal(mass), eigen.Options{Modes: 3}); !errors.As(err, &indefinite) || indefinite.Matrix != "M" || indefinite.Unknown != 11 {
		t.Errorf("got %v, want M at 11", err)
	}
	// The diagonal is positive, the matrix is not. K-σM is definite, so that only vectors can tell.
	a := sparse.NewAssembler(30, [][]int32{{4, 5}})
	a.Add(0, []float64{0, 3, 0})
	held := sparse.Combine(1, k, 10, trial.Identity(30))
	err := refuse(held, sparse.Combine(1, trial.Identity(30), 1, a.Matrix()), eigen.Options{Modes: 28})
	if !errors.As(err, &indefinite) || indefinite.Matrix != "M" || (indefinite.Unknown != 4 && indefinite.Unknown != 5) {
		t.Errorf("got %v, want M at 4 or 5", err)
	}
}

func TestIndefiniteStiffnessIsRefused(t *testing.T) {
	k, _ := trial.Chain(30)
	a := sparse.NewAssembler(30, [][]int32{{7, 8}})
	a.Add(0, []float64{-1, 1, -1}) // a spring that pushes
	var indefinite *eigen.IndefiniteError
	pushed := sparse.Combine(1, k, 1.5, a.Matrix())
	err := refuse(pushed, trial.Identity(30), eigen.Options{Modes: 3})
	if !errors.As(err, &indefinite) || !strings.Contains(indefinite.Matrix, "K") || indefinite.Unknown < 0 {
		t.Errorf("got %v, want K", err)
	}
	// Even when the shift lies below its eigenvalues.
	err = refuse(pushed, trial.Identity(30), eigen.Options{Modes: 3, Shift: -20})
	if !errors.As(err, &indefinite) || indefinite.Matrix != "K" || (indefinite.Unknown != 7 && indefinite.Unknown != 8) {
		t.Errorf("got %v, want K at 7 or 8", err)
	}
}

// The free chain of n equal masses has n/3 eigenvalues below 1, since they are 4 sin²(πk/2n): with at most as many allowed
// the search is made, with one less it is refused.
func TestTooManyAreRefused(t *testing.T) {
	k, _ := trial.Chain(300)
	m := trial.Identity(300)
	var many *eigen.TooManyError
	if err := refuse(k, m, eigen.Options{Limit: 0.999, Most: 100}); err != nil {
		t.Errorf("as many as allowed: %v", err)
	}
	if err := refuse(k, m, eigen.Options{Limit: 0.999, Most: 99}); !errors.As(err, &many) || many.Counted != 100 || many.Most != 99 {
		t.Errorf("got %v, want 100 refused", err)
	}
}

func TestUnheldUnknownIsNamed(t *testing.T) {
	k, m := trial.Diagonal([]float64{1, 2, 0, 3}), trial.Diagonal([]float64{1, 1, 0, 1})
	var singular *eigen.SingularError
	if err := refuse(k, m, eigen.Options{Modes: 2}); !errors.As(err, &singular) || singular.Unknown != 2 {
		t.Errorf("got %v, want unknown 2", err)
	}
}

func TestWrongRigidVectorIsNamed(t *testing.T) {
	l := trial.Sheet{Nx: 4, Ny: 4, Cell: 5e-3, Thick: 2e-3}.Lattice()
	rigid := l.Rigid()
	rigid[4][6*10+2] *= 1.01
	var wrong *eigen.RigidError
	if err := refuse(l.K, l.M, eigen.Options{Modes: 8, Rigid: rigid}); !errors.As(err, &wrong) || wrong.Vector != 4 {
		t.Errorf("got %v, want vector 4", err)
	}
}

func TestSenselessInputIsRefused(t *testing.T) {
	k, _ := trial.Chain(10)
	m := trial.Identity(10)
	nan := sparse.Combine(1, k, 0, k)
	nan.Val[4] = math.NaN()
	for name, err := range map[string]error{
		"nothing asked":  refuse(k, m, eigen.Options{}),
		"positive shift": refuse(k, m, eigen.Options{Modes: 2, Shift: 1}),
		"absurd shift":   refuse(k, m, eigen.Options{Modes: 2, Shift: -1e12}),
		"NaN shift":      refuse(k, m, eigen.Options{Modes: 2, Shift: math.NaN()}),
		"infinite limit": refuse(k, m, eigen.Options{Limit: math.Inf(1)}),
		"NaN in K":       refuse(nan, m, eigen.Options{Modes: 2}),
		"NaN in M":       refuse(k, nan, eigen.Options{Modes: 2}),
	} {
		if err == nil {
			t.Errorf("%s: not refused", name)
		}
	}
	if _, err := eigen.Lowest(context.Background(), k, m, sparse.Ordering{1, 2}, eigen.Options{Modes: 2}); err == nil {
		t.Error("short ordering: not refused")
	}
}

func TestNoMassNoValues(t *testing.T) {
	k, _ := trial.Chain(10)
	order := sparse.MinimumDegree(k.Pattern())
	res, err := eigen.Lowest(context.Background(), k, trial.Diagonal(make([]float64, 10)), order, eigen.Options{Modes: 2})
	if err != nil || len(res.Values) != 0 || !res.Status.Exhausted {
		t.Errorf("got %v and %+v", err, res)
	}
}
