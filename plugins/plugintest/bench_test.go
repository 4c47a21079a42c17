package plugintest

import (
	"context"
	"os/exec"
	"path/filepath"
	"testing"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/numeric/sparse"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/host"
)

// plate is a rectangle of 20,000 six-node triangles.
func plate(b *testing.B) (*subject, *sheet) {
	b.Helper()
	s, err := newSubject(extension.FromType(shell.QuadraticTriangle()), nil, carbon, 0)
	if err != nil {
		b.Fatal(err)
	}
	h, err := s.newSheet(0.1, 0.1, 100, 100, 0.2)
	if err != nil {
		b.Fatal(err)
	}
	return s, h
}

// BenchmarkMatrices computes 20,000 element matrices here, and in another process with all that takes.
func BenchmarkMatrices(b *testing.B) {
	ctx := context.Background()
	s, _ := plate(b)
	in := s.batch(triangle, 20000, 0)
	in.Threads = 2
	out := element.NewMatrices(in.Count(), s.shape.Unknowns())
	b.Run("here", func(b *testing.B) {
		for b.Loop() {
			if err := s.kind.Matrices(ctx, in, out); err != nil {
				b.Fatal(err)
			}
		}
	})
	path := filepath.Join(b.TempDir(), "triangle.exe")
	if out, err := exec.Command("go", "build", "-o", path, "./testdata/triangle").CombinedOutput(); err != nil {
		b.Fatalf("%v\n%s", err, out)
	}
	e, err := host.Find(path)
	if err != nil {
		b.Fatal(err)
	}
	h, err := host.Open(ctx, host.Options{Extensions: []host.Executable{e}})
	if err != nil {
		b.Fatal(err)
	}
	defer h.Close()
	call := func(ctx context.Context, r stage.ExtensionRequest) error {
		r.Threads = 2
		return h.Call(ctx, extension.ElementKind, "outside-triangle", r)
	}
	far, err := extension.Bind(ctx, extension.RemoteElement(h.Extensions()[0], call, b.TempDir()), nil)
	if err != nil {
		b.Fatal(err)
	}
	b.Run("outside", func(b *testing.B) {
		for b.Loop() {
			if err := far.Matrices(ctx, in, out); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkFactorisation factorises the plate of 20,000 triangles, shifted as an eigen-solver does.
func BenchmarkFactorisation(b *testing.B) {
	_, h := plate(b)
	shifted := *h.system.K
	shifted.Val = append([]float64(nil), h.system.K.Val...)
	for i, m := range h.system.M.Val {
		shifted.Val[i] += 1e6 * m
	}
	order := h.system.Ordering()
	for b.Loop() {
		if _, err := sparse.Factorise(&shifted, order, 2); err != nil {
			b.Fatal(err)
		}
	}
}
