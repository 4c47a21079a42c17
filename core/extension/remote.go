package extension

import (
	"context"
	"errors"
	"io"
	"io/fs"
	"math"
	"os"
	"path/filepath"

	"hushframe/core/mechanics/element"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// Caller reaches one extension: stage.Services does, with the name settled.
type Caller func(ctx context.Context, request stage.ExtensionRequest) error

// link is an extension in another process. Each call has a folder of its own below scratch.
type link struct {
	about   stage.Extension
	call    Caller
	scratch string
}

// ask makes one call: fill writes what the method reads, nil for nothing, and the answer must be of a kind and no
// larger than limit bytes.
func (l *link) ask(ctx context.Context, r stage.ExtensionRequest, in *artifact.Artifact, kind string, limit int64) (*artifact.Artifact, error) {
	folder, err := os.MkdirTemp(l.scratch, "call-")
	if err != nil {
		return nil, fault.New(fault.Limit, "%v", err)
	}
	defer os.RemoveAll(folder)
	r.Out = filepath.Join(folder, "out")
	if err := os.Mkdir(r.Out, 0o755); err != nil {
		return nil, fault.New(fault.Limit, "%v", err)
	}
	if in != nil {
		r.In = filepath.Join(folder, "in")
		if err := os.Mkdir(r.In, 0o755); err != nil {
			return nil, fault.New(fault.Limit, "%v", err)
		}
		if err := artifact.WriteUnsealed(r.In, in); err != nil {
			return nil, err
		}
	}
	if err := l.call(ctx, r); err != nil {
		return nil, err
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	if n := sizeOf(r.Out); n > limit {
		return nil, l.broken(r.Method, "it wrote %d MiB, where %d MiB are the most", n>>20, limit>>20)
	}
	a, err := artifact.Open(r.Out, Kinds())
	if err != nil {
		cause := *fault.From(err) // the folder it names means nothing to anyone
		return nil, l.broken(r.Method, "its answer cannot be read: %s", cause.Text)
	}
	if a.Kind.Name != kind {
		return nil, l.broken(r.Method, "its answer is of kind %q, not %q", a.Kind.Name, kind)
	}
	return a, nil
}

// broken says that an extension does not keep to its contract.
func (l *link) broken(method, format string, args ...any) error {
	return fault.New(fault.Protocol, format, args...).In(l.about.Kind+" "+l.about.Name, method).
		Do("this is a mistake of the extension; its author can find it with plugins/plugintest")
}

// small bounds answers that hold a description, in bytes.
const small = 16 << 20

func sizeOf(folder string) int64 {
	var n int64
	_ = filepath.WalkDir(folder, func(_ string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return nil
		}
		if info, err := d.Info(); err == nil {
			n += info.Size()
		}
		return nil
	})
	return n
}

// RemoteElement is an element type in another process. Calls go through call; bulk lies below scratch.
func RemoteElement(about stage.Extension, call Caller, scratch string) Element {
	return &remoteElement{link{about, call, scratch}}
}

type remoteElement struct{ link }

func (x *remoteElement) Describe() stage.Extension { return x.about }

func (x *remoteElement) Shape(ctx context.Context, options stage.Arguments) (element.Description, error) {
	a, err := x.ask(ctx, stage.ExtensionRequest{Method: "shape", Arguments: options}, nil, shapeKind.Name, small)
	if err != nil {
		return element.Description{}, err
	}
	d := decodeShape(a)
	d.Name, d.About = x.about.Name, x.about.About
	if err := checkShape(d); err != nil {
		return d, x.broken("shape", "%v", err)
	}
	return d, nil
}

// callBytes is about how much one call may answer with: batches are cut so that memory stays bounded and a call
// can be cancelled.
const callBytes = 64 << 20

// cut gives the part of a batch from element lo to hi.
func cut(in *element.Batch, lo, hi int) *element.Batch {
	per := len(in.Nodes) / in.Count()
	out := *in
	out.Nodes, out.Section = in.Nodes[lo*per:hi*per], in.Section[lo:hi]
	return &out
}

// slack is what an answer may hold besides its numbers: manifest, schema, padding.
const slack = 1 << 20

func (x *remoteElement) Matrices(ctx context.Context, options stage.Arguments, in *element.Batch, out *element.Matrices) error {
	if in.Count() == 0 {
		return ctx.Err()
	}
	packed := len(out.Stiffness) / in.Count()
	most := max(1, callBytes/(16*packed))
	for lo := 0; lo < in.Count(); lo += most {
		hi := min(lo+most, in.Count())
		part := cut(in, lo, hi)
		a, err := x.ask(ctx, stage.ExtensionRequest{Method: "matrices", Arguments: options}, encodeBatch(batchKind, part), matricesKind.Name, int64(20*packed*(hi-lo)+slack))
		if err != nil {
			return decodeElementError(err, lo)
		}
		t := a.Table("matrices")
		if err := x.take(out.Stiffness[lo*packed:hi*packed], t, "stiffness", hi-lo, packed); err != nil {
			return err
		}
		if err := x.take(out.Mass[lo*packed:hi*packed], t, "mass", hi-lo, packed); err != nil {
			return err
		}
	}
	return nil
}

// take copies a column of lists and refuses what is no number.
func (x *remoteElement) take(dst []float64, t *artifact.Table, name string, count, length int) error {
	if t.Rows() != count {
		return x.broken(t.Spec.Name, "%d elements were asked for, it gave %d", count, t.Rows())
	}
	if err := flatten(dst, t.FloatLists(name), length, name); err != nil {
		return x.broken(t.Spec.Name, "%v", err)
	}
	for i, v := range dst {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return x.broken(t.Spec.Name, "the %s of element %d is not finite", name, i/length)
		}
	}
	return nil
}

func (x *remoteElement) Energies(ctx context.Context, options stage.Arguments, in *element.Batch, motions, out []float64) error {
	n := in.Count()
	if n == 0 {
		return ctx.Err()
	}
	each, per := len(motions)/n, len(out)/n
	most := max(1, callBytes/(8*max(each, 1)))
	for lo := 0; lo < n; lo += most {
		hi := min(lo+most, n)
		q := encodeBatch(motionsKind, cut(in, lo, hi))
		q.Table("motions").Set("unknowns", rows(motions[lo*each:], hi-lo, each))
		a, err := x.ask(ctx, stage.ExtensionRequest{Method: "energies", Arguments: options}, q, energiesKind.Name, int64(20*per*(hi-lo)+slack))
		if err != nil {
			return decodeElementError(err, lo)
		}
		if err := x.take(out[lo*per:hi*per], a.Table("energies"), "energies", hi-lo, per); err != nil {
			return err
		}
	}
	return nil
}

// RemoteReader is a reader in another process. It reads files by their path: a source must be an *os.File.
func RemoteReader(about stage.Extension, call Caller, scratch string) Reader {
	return &remoteReader{link{about, call, scratch}}
}

type remoteReader struct{ link }

func (x *remoteReader) Describe() stage.Extension { return x.about }

func (x *remoteReader) Inspect(ctx context.Context, source io.Reader, options stage.Arguments) (recording.Header, error) {
	path, err := x.path(source)
	if err != nil {
		return recording.Header{}, err
	}
	a, err := x.ask(ctx, stage.ExtensionRequest{Method: "inspect", Arguments: options, In: path}, nil, headerKind.Name, small)
	if err != nil {
		return recording.Header{}, err
	}
	h, err := decodeHeader(a)
	if err != nil {
		return h, x.broken("inspect", "%v", err)
	}
	return h, nil
}

// recordingBytes bounds the samples of one recording.
const recordingBytes = 8 << 30

func (x *remoteReader) Read(ctx context.Context, source io.Reader, options stage.Arguments, request recording.Request, sink func(recording.Batch) error) error {
	path, err := x.path(source)
	if err != nil {
		return err
	}
	columns := make([]any, len(request.Columns))
	for i, c := range request.Columns {
		columns[i] = c
	}
	a, err := x.ask(ctx, stage.ExtensionRequest{Method: "read", Arguments: options, In: path,
		Request: map[string]any{"columns": columns, "time": request.Time, "time_unit": request.TimeUnit}}, nil, samplesKind.Name, recordingBytes)
	if err != nil {
		return err
	}
	err = deliver(a, request, sink)
	var own sinkError
	if errors.As(err, &own) {
		return own.error
	}
	if err != nil {
		return x.broken("read", "%v", err)
	}
	return nil
}

func (x *remoteReader) path(source io.Reader) (string, error) {
	f, ok := source.(*os.File)
	if !ok {
		return "", fault.New(fault.Internal, "a reader in another process reads files, not %T", source).In(ReaderKind, x.about.Name)
	}
	path, err := filepath.Abs(f.Name())
	if err != nil {
		return "", fault.New(fault.Internal, "%v", err)
	}
	return path, nil
}

// ReadsFiles reports whether a reader opens the recording by its path, as one in another process does.
func ReadsFiles(r Reader) bool {
	_, ok := r.(*remoteReader)
	return ok
}
