package extension

import (
	"context"
	"io"

	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// Reader reads one kind of recording.
//
// It keeps no state between calls and is safe for concurrent use. A caller inspects a recording first, chooses
// columns from what it finds, then reads them; each call has the source from its beginning and the options of the
// job, checked against Describe, defaults filled in. Errors about the recording are *recording.Error; one that
// blames an option is a fault that names it as argument.
type Reader interface {
	// Describe states kind ("reader"), name, a line of help, and the options. Constant and cheap.
	Describe() stage.Extension
	// Inspect states the columns with their units and, if the recording says it, the sample rate. It need not
	// read further than that takes.
	Inspect(ctx context.Context, source io.Reader, options stage.Arguments) (recording.Header, error)
	// Read delivers the requested columns to sink in batches of neighbouring rows, in order. A gap is a step in
	// the times; a value that is not there is NaN. The slices of a batch may be used again after sink returns. An
	// error of sink ends the reading and is returned as it is. A recording cut short is read up to its last whole
	// row, with a note in the last batch; one without any row is an error.
	Read(ctx context.Context, source io.Reader, options stage.Arguments, request recording.Request, sink func(recording.Batch) error) error
}

// FromReader offers a reader whose options are texts as a Reader.
func FromReader(r recording.Reader) Reader { return textual{r} }

type textual struct{ r recording.Reader }

func (t textual) Describe() stage.Extension {
	d := t.r.Describe()
	x := stage.Extension{Kind: ReaderKind, Name: d.Name, About: d.About}
	for _, o := range d.Options {
		x.Arguments = append(x.Arguments, stage.Argument{Name: o.Name, About: o.About, Type: stage.Type{Kind: stage.Text}, Choices: o.Choices})
	}
	return x
}

func (t textual) Inspect(ctx context.Context, source io.Reader, options stage.Arguments) (recording.Header, error) {
	return t.r.Inspect(ctx, source, texts(options))
}

func (t textual) Read(ctx context.Context, source io.Reader, options stage.Arguments, request recording.Request, sink func(recording.Batch) error) error {
	request.Options = texts(options)
	return t.r.Read(ctx, source, request, sink)
}

func texts(options stage.Arguments) map[string]string {
	out := map[string]string{}
	for _, name := range options.Names() {
		out[name] = options.Text(name)
	}
	return out
}
