package modal

import (
	"context"
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/dense"
	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
)

// Place is a site to be: a point fixed to a body of the problem.
type Place struct {
	Name  string
	Kind  string // "rotor", "gyro" or "body"
	Body  int
	Point airframe.Vec
}

// Options says what to compute.
type Options struct {
	// UpTo asks for every mode below it, Hz.
	UpTo float64
	// Most, when positive, is the greatest number of elastic modes to search for: when more are counted below
	// UpTo the error is an *eigen.TooManyError, whose numbers hold the rigid-body motions too.
	Most    int
	Threads int
	// Bare leaves out residual vectors, shapes and the stiffness of groups: what a comparison of meshes needs.
	Bare bool
	// Solve finds eigenpairs; nil is eigen.Lowest.
	Solve Solver
	// Progress, when not nil, is told the phase and the fraction of it that is done.
	Progress func(phase string, fraction float64)
}

// Solver finds the lowest eigenpairs of a pencil as eigen.Lowest does, and keeps what that promises.
type Solver func(ctx context.Context, k, m *sparse.Symmetric, order sparse.Ordering, opt eigen.Options) (*eigen.Result, error)

// Structure is all that does not depend on loss factors or rotor speeds.
type Structure struct {
	Basis *Basis // loss factors zero
	// Strain[m][g][k] and Kinetic[m][c] are the shares of the energies of elastic mode m, by group of the
	// problem and kind (assembly.EnergyKinds), and by group then body of the problem.
	Strain [][][6]float64
	// Plates[m][e] is the share of plate element e in the strain energy of elastic mode m, in the order of the
	// plates of the problem and of their elements.
	Plates  [][]float64
	Kinetic [][]float64
	// Proved says that a count of eigenvalues agrees that no mode below UpTo is missing.
	Proved bool
	// RigidRatio is the highest computed rigid-body frequency over the first elastic one.
	RigidRatio float64
	// Notes are sentences about what the eigensolver did beyond the ordinary.
	Notes []string
}

// RigidBodies is the number of rigid-body motions of a free structure.
const RigidBodies = 6

// rigidBelow is the share of the first elastic frequency below which rigid-body ones must lie.
const rigidBelow = 1e-3

// Build computes the modes of a free structure up to opt.UpTo (and two elastic ones at least), its
// residual vectors, and the energies.
//
// Errors: *RigidError; *MissingError; those of package eigen; an eigensolver that did not converge.
func Build(ctx context.Context, s *assembly.System, places []Place, opt Options) (*Structure, error) {
	progress := opt.Progress
	if progress == nil {
		progress = func(string, float64) {}
	}
	order := s.Ordering()
	limit := 2 * math.Pi * opt.UpTo
	most := 0
	if opt.Most > 0 {
		most = opt.Most + RigidBodies
	}
	lowest := opt.Solve
	if lowest == nil {
		lowest = eigen.Lowest
	}
	res, err := lowest(ctx, s.K, s.M, order, eigen.Options{
		Limit: limit * limit, Modes: RigidBodies + 2, Most: most, Static: !opt.Bare, Threads: opt.Threads,
		Progress: func(f float64) { progress("modes", f) },
	})
	if err != nil {
		return nil, err
	}
	if st := res.Status; !st.Converged {
		if st.Trusted && st.Counted > st.Found {
			return nil, &MissingError{Below: hertz(st.CountShift), Counted: st.Counted, Found: st.Found, Searches: st.Attempts}
		}
		return nil, fmt.Errorf("the eigensolver did not converge after %d steps and %d restarts", res.Status.Steps, res.Status.Restarts)
	}
	st := &Structure{Basis: &Basis{}, Proved: res.Status.Proved, Notes: res.Status.Notes}
	if !st.Proved {
		st.Notes = append(st.Notes, unproved(&res.Status))
	}
	if st.RigidRatio, err = rigidRatio(ctx, s, res, opt.Threads); err != nil {
		return nil, err
	}
	b := &span{system: s, threads: opt.Threads, n: s.N}
	var rigid, elastic, frequency []float64
	for _, y := range s.Rigid() {
		rigid = append(rigid, y...)
	}
	if err := b.extend(RigidBody, make([]float64, RigidBodies), rigid); err != nil {
		return nil, err
	}
	for i := RigidBodies; i < len(res.Values); i++ {
		elastic = append(elastic, res.Vectors[i]...)
		frequency = append(frequency, hertz(res.Values[i]))
	}
	if err := b.extend(Elastic, frequency, elastic); err != nil {
		return nil, err
	}
	modes := b.list(RigidBodies)

	if !opt.Bare {
		progress("static answers", 0)
		if err := b.residuals(ctx, places, res); err != nil {
			return nil, err
		}
	}
	progress("energies", 0)
	e, err := s.Energies(ctx, modes, opt.Threads)
	if err != nil {
		return nil, err
	}
	st.shares(s, e)
	progress("damping groups", 0)
	if err := b.finish(ctx, st.Basis, places, opt.Bare); err != nil {
		return nil, err
	}
	return st, nil
}

// finish fills the basis.
func (b *span) finish(ctx context.Context, out *Basis, places []Place, bare bool) error {
	s, n := b.system, b.count()
	out.Kinds, out.Frequency = b.kinds, b.frequency
	out.Shapes = make([][]float64, n)
	dense.Parallel(b.threads, n, func(v int) {
		if bare {
			return
		}
		full := make([]float64, 6*len(s.Problem().Nodes))
		s.Expand(full, b.vector(v))
		shown := len(s.Problem().Nodes) - s.Problem().Own
		shape := make([]float64, 0, 3*shown)
		for i := range shown {
			shape = append(shape, full[6*i:6*i+3]...)
		}
		out.Shapes[v] = shape
	})
	for _, p := range places {
		site := Site{Name: p.Name, Kind: p.Kind, Point: p.Point}
		for v := range n {
			site.Motion = append(site.Motion, s.Motion(p.Body, p.Point, b.vector(v)))
		}
		out.Sites = append(out.Sites, site)
	}
	// Rigid motions strain nothing.
	var stiffness [][]float64
	if !bare {
		var err error
		if stiffness, err = s.GroupStiffness(ctx, b.list(RigidBodies), b.threads); err != nil {
			return err
		}
	}
	for g, group := range s.Problem().Groups {
		k, some := make([]float64, n*n), n-RigidBodies
		if !bare {
			for i := range some {
				copy(k[(RigidBodies+i)*n+RigidBodies:], stiffness[g][i*some:(i+1)*some])
			}
		}
		out.Groups = append(out.Groups, LossGroup{Name: group.Name, Kind: group.Kind, Stiffness: k})
	}
	return nil
}

// shares normalises the energies of each mode.
func (st *Structure) shares(s *assembly.System, e *assembly.Energies) {
	for m := range e.Strain {
		total := 0.0
		for _, g := range e.Strain[m] {
			for _, v := range g {
				total += v
			}
		}
		for g := range e.Strain[m] {
			for k := range e.Strain[m][g] {
				e.Strain[m][g][k] /= total
			}
		}
		for k := range e.Plates[m] {
			e.Plates[m][k] /= total
		}
		kinetic := append(append([]float64(nil), e.Kinetic[m]...), e.Body[m]...)
		total = 0
		for _, v := range kinetic {
			total += v
		}
		for i := range kinetic {
			kinetic[i] /= total
		}
		st.Kinetic = append(st.Kinetic, kinetic)
	}
	st.Strain, st.Plates = e.Strain, e.Plates
}
