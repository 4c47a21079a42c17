// Command bad is an extension that does wrong what an argument says, to see what the host makes of it.
package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"time"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
	"hushframe/plugins/serve"
)

func main() {
	switch strings.TrimSuffix(filepath.Base(os.Args[0]), ".exe") {
	case "bad-crash":
		fmt.Fprintln(os.Stderr, "no licence to run")
		os.Exit(4)
	case "bad-print":
		fmt.Println("hello, host")
	case "bad-twice":
		serve.Main(serve.Offer{Elements: []extension.Element{brick{}, brick{}}})
	}
	serve.Main(serve.Offer{Version: "0.0.1", Stages: []stage.Stage{bad{}}, Elements: []extension.Element{brick{}}, Readers: []extension.Reader{tape{}}})
}

var how = stage.Argument{Name: "how", About: "what goes wrong", Type: stage.Type{Kind: stage.Text}, Default: ""}

// misbehave does what every kind can do wrong, or nothing.
func misbehave(how string) {
	switch how {
	case "crash":
		fmt.Fprintln(os.Stderr, "about to fall")
		os.Exit(9)
	case "panic":
		panic("lost count")
	case "print":
		fmt.Println(`{"@level": "error", "@message": 7}`)
		fmt.Fprintln(os.Stderr, "and a word to standard error")
	case "deaf":
		time.Sleep(time.Hour)
	case "leak":
		var all [][]byte
		for {
			b := make([]byte, 16<<20)
			for i := 0; i < len(b); i += 4096 {
				b[i] = 1
			}
			all = append(all, b)
			time.Sleep(10 * time.Millisecond)
			_ = all
		}
	}
}

var (
	beads = artifact.Kind{Name: "beads", Version: 1, Tables: []artifact.TableSpec{
		{Name: "beads", Columns: []artifact.Column{{Name: "mass", Type: artifact.Float, Unit: "kg"}}}}}
	pearls = artifact.Kind{Name: "pearls", Version: 1}
	texts  = artifact.Kind{Name: "beads", Version: 1, Tables: []artifact.TableSpec{
		{Name: "beads", Columns: []artifact.Column{{Name: "mass", Type: artifact.Text}}}}}
)

type bad struct{}

func (bad) Describe() stage.Description {
	return stage.Description{Name: "bad", About: "does what it is told, or worse", Arguments: []stage.Argument{how},
		Outputs: []stage.Output{{Name: "beads", Kind: "beads", About: "beads"}},
		Figures: []stage.Figure{{Name: "count", About: "beads", Type: stage.Type{Kind: stage.Whole}}}}
}

func (bad) Run(_ context.Context, c *stage.Call) (*stage.Outcome, error) {
	how := c.Arguments.Text("how")
	c.Report.Progress("working", 0.5)
	misbehave(how)
	out := c.Outputs["beads"]
	a := artifact.New(beads)
	a.Table("beads").Set("mass", []float64{1, 2})
	o := &stage.Outcome{Figures: map[string]any{"count": 2.0}}
	switch how {
	case "other-kind":
		a = artifact.New(pearls)
	case "ill-typed":
		a = artifact.New(texts)
		a.Table("beads").Set("mass", []string{"heavy"})
	case "nothing":
		return o, nil
	case "lost-figure":
		o.Figures = map[string]any{"weight": 3.0}
	case "large-answer":
		o.Notes = []string{strings.Repeat("x", 40<<20)}
	case "plain-error":
		return nil, fmt.Errorf("it did not work")
	}
	if _, err := artifact.Write(out, a); err != nil {
		return nil, err
	}
	switch how {
	case "stray-file":
		return o, os.WriteFile(filepath.Join(out, "diary.txt"), []byte("dear host"), 0o644)
	case "oversized":
		return o, os.Truncate(filepath.Join(out, "beads.arrow"), 1<<40)
	case "cut":
		return o, os.Truncate(filepath.Join(out, "beads.arrow"), 100)
	}
	return o, nil
}

// brick is an element type that does wrong in its matrices.
type brick struct{}

func (brick) Describe() stage.Extension {
	return stage.Extension{Kind: extension.ElementKind, Name: "brick", About: "a bad element", Arguments: []stage.Argument{how}}
}

func (brick) Shape(context.Context, stage.Arguments) (element.Description, error) {
	return element.Description{Nodes: 3}, nil
}

func (brick) Matrices(_ context.Context, o stage.Arguments, _ *element.Batch, _ *element.Matrices) error {
	misbehave(o.Text("how"))
	return nil
}

func (brick) Energies(context.Context, stage.Arguments, *element.Batch, []float64, []float64) error {
	return nil
}

// tape is a reader that does wrong in Read.
type tape struct{}

func (tape) Describe() stage.Extension {
	return stage.Extension{Kind: extension.ReaderKind, Name: "tape", About: "a bad reader", Arguments: []stage.Argument{how}}
}

func (tape) Inspect(context.Context, io.Reader, stage.Arguments) (recording.Header, error) {
	return recording.Header{Columns: []recording.Column{{Name: "gx"}}}, nil
}

func (tape) Read(_ context.Context, _ io.Reader, o stage.Arguments, _ recording.Request, _ func(recording.Batch) error) error {
	misbehave(o.Text("how"))
	return nil
}
