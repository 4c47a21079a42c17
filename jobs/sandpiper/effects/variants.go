package main

import (
	"context"
	"fmt"
	"math"
	"os"
	"slices"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/jobs/inprocess"
	"hushframe/stages/kinds"
)

// upTo is how far modes are solved, Hz: 1.5 times the sweep.
const upTo = 750

// load imports and meshes the frame.
func load(ctx context.Context, job, size string) (*mesh.Mesh, *airframe.Properties, error) {
	store, err := os.MkdirTemp("", "effects")
	if err != nil {
		return nil, nil, err
	}
	defer os.RemoveAll(store)
	done, err := inprocess.Run(ctx, job, store, map[string]string{"mesh_size": size})
	if err != nil {
		return nil, nil, err
	}
	a, err := done.Artifact("shells", "mesh")
	if err != nil {
		return nil, nil, err
	}
	m, err := kinds.DecodeMesh(a)
	if err != nil {
		return nil, nil, err
	}
	if a, err = done.Artifact("frame", "properties"); err != nil {
		return nil, nil, err
	}
	p, err := kinds.DecodeProperties(a)
	return m, p, err
}

// model is a frame with its modes.
type model struct {
	basis      *modal.Basis
	properties *airframe.Properties
}

// solve finds the modes of a frame.
func solve(ctx context.Context, m *mesh.Mesh, p *airframe.Properties) (*model, error) {
	f, err := assembly.FromAirframe(m, p, func(name string) element.Type {
		for _, t := range shell.Types() {
			if t.Describe().Name == name {
				return t
			}
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	s, err := assembly.Assemble(ctx, &f.Problem, 2)
	if err != nil {
		return nil, err
	}
	body := map[string]int{}
	for i, b := range p.Bodies {
		body[b.Name] = f.BodyOf[i]
	}
	var places []modal.Place
	for _, r := range p.Rotors {
		places = append(places, modal.Place{Name: r.Name, Kind: "rotor", Body: body[r.Body], Point: r.Hub})
	}
	places = append(places, modal.Place{Name: p.Gyro.Body, Kind: "gyro", Body: body[p.Gyro.Body], Point: p.Gyro.At})
	st, err := modal.Build(ctx, s, places, modal.Options{UpTo: upTo, Threads: 2})
	if err != nil {
		return nil, err
	}
	st.Basis.Dampen(f.Loss, f.Laws, p.Floor)
	return &model{st.Basis, p}, nil
}

// variant is a frame without something.
type variant struct {
	name   string
	change func(m *mesh.Mesh, p *airframe.Properties)
}

var structural = []variant{
	{"bolts that give", func(_ *mesh.Mesh, p *airframe.Properties) {
		for i := range p.Bolts {
			p.Bolts[i].Joint, p.Bolts[i].Pairs = "", nil
		}
	}},
	{"pressed faces", func(m *mesh.Mesh, p *airframe.Properties) { m.Contacts, p.Contacts = nil, nil }},
	{"gyro on its grommets", func(_ *mesh.Mesh, p *airframe.Properties) { fix(p, "stack") }},
	{"battery on its strap", func(_ *mesh.Mesh, p *airframe.Properties) { fix(p, "battery") }},
	{"camera on its mount", func(_ *mesh.Mesh, p *airframe.Properties) { fix(p, "camera") }},
}

// fix ties a body rigidly to where its springs stand.
func fix(p *airframe.Properties, body string) {
	for i := range p.Bodies {
		if b := &p.Bodies[i]; b.Name == body {
			for _, q := range b.Mount.Points {
				b.Patches = append(b.Patches, q.Patch)
			}
			b.Mount = nil
		}
	}
}

// apply solves the variant; what it is given stays as it is.
func (v variant) apply(ctx context.Context, m *mesh.Mesh, p *airframe.Properties) (*model, error) {
	other, changed := *m, *p
	changed.Bolts, changed.Bodies = slices.Clone(p.Bolts), slices.Clone(p.Bodies)
	v.change(&other, &changed)
	return solve(ctx, &other, &changed)
}

// shift is the greatest change of a frequency among modes that are alike.
type shift struct {
	from, to float64 // Hz
	found    int
}

func (s shift) String() string {
	if s.found == 0 {
		return "no mode is alike"
	}
	return fmt.Sprintf("%.1f to %.1f Hz (%+.1f %%)", s.from, s.to, 100*(s.to/s.from-1))
}

// alike is the least assurance of two shapes that count as the same mode.
const alike = 0.8

// compare pairs the elastic modes from 80 to 500 Hz by their shapes.
func (m *model) compare(o *model) shift {
	var s shift
	for v, kind := range m.basis.Kinds {
		f := m.basis.Frequency[v]
		if kind != modal.Elastic || f < from || f > to {
			continue
		}
		best, at := alike, -1
		for w, kind := range o.basis.Kinds {
			if kind != modal.Elastic {
				continue
			}
			if a := assurance(m.basis.Shapes[v], o.basis.Shapes[w]); a > best {
				best, at = a, w
			}
		}
		if at < 0 {
			continue
		}
		s.found++
		if g := o.basis.Frequency[at]; s.found == 1 || math.Abs(math.Log(g/f)) > math.Abs(math.Log(s.to/s.from)) {
			s.from, s.to = f, g
		}
	}
	return s
}

// assurance is the modal assurance criterion over the nodes, 1 for equal shapes.
func assurance(x, y []float64) float64 {
	var xy, xx, yy float64
	for i := range x {
		xy += x[i] * y[i]
		xx += x[i] * x[i]
		yy += y[i] * y[i]
	}
	return xy * xy / (xx * yy)
}
