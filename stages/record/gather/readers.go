package gather

import (
	"context"
	"io"
	"os"
	"slices"

	"hushframe/core/extension"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/record/columnar"
	"hushframe/stages/record/delimited"
	"hushframe/stages/record/flat"
	"hushframe/stages/record/wave"
)

// builtin are the readers in this executable.
var builtin = []extension.Reader{extension.FromReader(delimited.Reader{}), extension.FromReader(wave.Reader{}),
	extension.FromReader(columnar.Reader{}), extension.FromReader(columnar.Parquet{}), extension.FromReader(flat.Reader{})}

// auto stands for the reader that the first bytes call for.
const auto = "auto"

// readerNames lists what the argument reader may be without an extension.
func readerNames() []string {
	names := []string{auto}
	for _, r := range builtin {
		names = append(names, r.Describe().Name)
	}
	return names
}

func readerOptions() map[string][]stage.Argument {
	out := map[string][]stage.Argument{}
	for _, r := range builtin {
		d := r.Describe()
		out[d.Name] = d.Arguments
	}
	return out
}

// choose returns the reader of that name; for auto, the one whose mark the file begins with, or the reader of text.
func choose(ctx context.Context, call *stage.Call, name string, head []byte) (extension.Reader, error) {
	if name == auto {
		name = "delimited"
		switch {
		case wave.Mark(head):
			name = "wave"
		case columnar.Mark(head):
			name = "arrow"
		case columnar.MarkParquet(head):
			name = "parquet"
		}
	}
	r, err := extension.FindReader(ctx, name, builtin, call)
	if err != nil {
		return nil, fault.From(err).Of("reader")
	}
	return r, nil
}

// isBuiltin tells a reader in this process from one outside, which opens the file by itself.
func isBuiltin(r extension.Reader) bool {
	return slices.ContainsFunc(builtin, func(b extension.Reader) bool { return b.Describe().Name == r.Describe().Name })
}

// watched is a file that tells how much of it has been read.
type watched struct {
	*os.File
	size, at, told int64
	report         stage.Reporter
}

// steps is the number of times that progress is told.
const steps = 100

func (w *watched) Read(p []byte) (int, error) {
	n, err := w.File.Read(p)
	w.passed(w.at + int64(n))
	return n, err
}

func (w *watched) ReadAt(p []byte, at int64) (int, error) {
	n, err := w.File.ReadAt(p, at)
	w.passed(max(w.at, at+int64(n)))
	return n, err
}

func (w *watched) passed(at int64) {
	w.at = at
	if w.size > 0 && w.at-w.told >= w.size/steps {
		w.told = w.at
		w.report.Progress("read", min(1, float64(w.at)/float64(w.size)))
	}
}

// again gives the file from its beginning each time it is called; with progress for readers that read it here.
func again(file *os.File, report stage.Reporter, here bool) source {
	size := int64(0)
	if info, err := file.Stat(); err == nil {
		size = info.Size()
	}
	return func() (io.Reader, error) {
		if _, err := file.Seek(0, io.SeekStart); err != nil {
			return nil, fault.New(fault.Input, "%v", err)
		}
		if !here {
			return file, nil
		}
		return &watched{File: file, size: size, report: report}, nil
	}
}
