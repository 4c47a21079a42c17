package plugintest

import (
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"
	"time"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// spoiledElement is the built-in triangle with something wrong.
type spoiledElement struct {
	describe func(*stage.Extension)
	matrices func(in *element.Batch, out *element.Matrices)
	energies func(out []float64)
	deaf     bool
	blind    bool  // to bad shapes
	refuse   error // a factor of 2
}

func (s spoiledElement) Describe() stage.Extension {
	x := stage.Extension{Kind: extension.ElementKind, Name: "spoiled", About: "a spoiled triangle"}
	if s.describe != nil {
		s.describe(&x)
	}
	return x
}

func (s spoiledElement) Shape(_ context.Context, o stage.Arguments) (element.Description, error) {
	if s.refuse != nil && o.Number("factor") == 2 {
		return element.Description{}, s.refuse
	}
	return element.Description{Nodes: 6}, nil
}

func (s spoiledElement) Matrices(ctx context.Context, _ stage.Arguments, in *element.Batch, out *element.Matrices) error {
	if s.deaf {
		ctx = context.WithoutCancel(ctx)
		if in.Count() == 3000 {
			time.Sleep(1100 * time.Millisecond)
			return context.Canceled
		}
	}
	err := shell.QuadraticTriangle().Matrices(ctx, in, out)
	var shape *element.ShapeError
	if s.blind && errors.As(err, &shape) {
		return nil
	}
	if err == nil && s.matrices != nil {
		s.matrices(in, out)
	}
	return err
}

func (s spoiledElement) Energies(ctx context.Context, _ stage.Arguments, in *element.Batch, motions, out []float64) error {
	err := shell.QuadraticTriangle().Energies(ctx, in, motions, out)
	if s.energies != nil {
		s.energies(out)
	}
	return err
}

func scale(v []float64, by float64) {
	for i := range v {
		v[i] *= by
	}
}

// Each mistake of an element type is found, and the message says what it is.
func TestSpoiledElements(t *testing.T) {
	calls := 0
	factor := func(x *stage.Extension) {
		x.Arguments = []stage.Argument{{Name: "factor", About: "nothing", Type: stage.Type{Kind: stage.Number}, Default: 1.0}}
	}
	for want, s := range map[string]spoiledElement{
		`option factor = 2 is refused without naming it (too much); add .Of("options.factor")`:                      {describe: factor, refuse: fault.New(fault.Input, "too much").Of("factor")},
		`option factor = 2 is allowed by the description, and gives no such factor; narrow its range or`:            {describe: factor, refuse: fault.New(fault.Numeric, "no such factor")},
		`description: its kind is "reader", not "element"`:                                                          {describe: func(x *stage.Extension) { x.Kind = "reader" }},
		"description: the element has no about":                                                                     {describe: func(x *stage.Extension) { x.About = "" }},
		"description: a second one differs":                                                                         {describe: func(x *stage.Extension) { calls++; x.About = fmt.Sprint(calls) }},
		"option factor changes nothing: with 2, 0.5, 0, -1 the matrices are the same to the last byte; is it read?": {describe: factor},
		"option t has no unit to be shown in": {describe: func(x *stage.Extension) {
			x.Arguments = []stage.Argument{{Name: "t", About: "nothing", Type: stage.Type{Kind: stage.Amount, Dimension: "length"}}}
		}},
		"energies: the four kinds add up to": {energies: func(out []float64) { out[element.Twist] = 0 }},
		"rigid motion: a displacement along x costs energy": {matrices: func(in *element.Batch, out *element.Matrices) {
			for e := range in.Count() {
				out.Stiffness[e*element.Packed(36)] *= 1.001
			}
		}},
		"mass: under displacement along z the element has a mass of": {matrices: func(_ *element.Batch, out *element.Matrices) { scale(out.Mass, 1.01) }},
		"patch: under constant strain along x the element stores":    {matrices: func(_ *element.Batch, out *element.Matrices) { scale(out.Stiffness, 1.01) }, energies: func(out []float64) { scale(out, 1.01) }},
		"matrices: with three threads other bytes come out":          {matrices: func(in *element.Batch, out *element.Matrices) { out.Mass[1] += 1e-300 * float64(in.Threads) }},
		"matrices: element 3 of a batch of equal ones differs": {matrices: func(in *element.Batch, out *element.Matrices) {
			if in.Count() > 100 {
				out.Mass[3*element.Packed(36)+1] += 1e-30
			}
		}},
		"with a context that has ended it gives <nil>": {deaf: true},
		"a cancelled call went on for":                 {deaf: true},
		"it must end with an *element.ShapeError":      {blind: true},
		"axes: in axes turned by 0.7 rad the stiffness": {matrices: func(in *element.Batch, out *element.Matrices) {
			// Stiffer along x, whatever the axes are.
			for e := range in.Count() {
				out.Stiffness[e*element.Packed(36)+element.Packed(6)+0] *= 1.0001
			}
		}},
	} {
		problems := strings.Join(CheckElement(s), "\n")
		if !strings.Contains(problems, want) {
			t.Errorf("want %q among\n%s", want, problems)
		}
	}
}

// beat is a reader of two-byte counts at 100 Hz, with something wrong.
type beat struct {
	unit     string
	rate     float64
	portion  bool // takes what one Read gives for all
	first    int64
	ignores  bool // the error of the caller
	deaf     bool
	plain    bool // gives plain errors
	panics   bool
	doubles  bool // gives a cut row
	anything bool // takes any column
	lost     bool // closes gaps
	options  []stage.Argument
	heeds    bool // its option
}

func (b beat) Describe() stage.Extension {
	return stage.Extension{Kind: extension.ReaderKind, Name: "beat", About: "counts", Arguments: b.options}
}

func (b beat) Inspect(context.Context, io.Reader, stage.Arguments) (recording.Header, error) {
	return recording.Header{Timed: true, Columns: []recording.Column{{Name: "gx", Unit: b.unit}, {Name: "gy", Unit: b.unit}}}, nil
}

// Read reads rows of a count of time and two of rate.
func (b beat) Read(ctx context.Context, source io.Reader, o stage.Arguments, q recording.Request, sink func(recording.Batch) error) error {
	var data []byte
	if b.portion {
		data = make([]byte, 1<<16)
		n, _ := source.Read(data)
		data = data[:n]
	} else {
		var err error
		if data, err = io.ReadAll(source); err != nil {
			return err
		}
	}
	fail := func(text string) error {
		if b.plain {
			return errors.New(text)
		}
		return &recording.Error{Text: text, Remedy: "mend it"}
	}
	if !b.deaf && ctx.Err() != nil {
		return ctx.Err()
	}
	rows := len(data) / 6
	if b.doubles && len(data)%6 > 0 {
		data = append(data, make([]byte, 6)...)
		rows++
	}
	if rows == 0 {
		if b.panics {
			_ = data[6]
		}
		return fail("there is no row")
	}
	out := recording.Batch{First: 1 + b.first, Values: make([][]float64, len(q.Columns))}
	for r := range rows {
		row := data[6*r:]
		at := float64(binary.LittleEndian.Uint16(row)) - float64(binary.LittleEndian.Uint16(data))
		if b.lost {
			at = float64(r)
		}
		out.Time = append(out.Time, at/b.rate)
		for i, name := range q.Columns {
			k := map[string]int{"gx": 2, "gy": 4}[name]
			if k == 0 && !b.anything {
				return fail("there is no column " + name)
			}
			out.Values[i] = append(out.Values[i], float64(int16(binary.LittleEndian.Uint16(row[k:]))))
		}
	}
	if b.heeds && o.Truth("loud") {
		out.Notes = []string{"loud"}
	}
	if len(data)%6 > 0 {
		out.Notes = []string{"the last row is cut"}
	}
	if err := sink(out); err != nil && !b.ignores {
		return err
	}
	return nil
}

func TestSpoiledReaders(t *testing.T) {
	var data []byte
	for r := range 300 {
		at := r
		if r > 200 {
			at += 5 // a gap
		}
		data = binary.LittleEndian.AppendUint16(data, uint16(at))
		data = binary.LittleEndian.AppendUint16(data, uint16(int16(50*math.Sin(float64(r)))))
		data = binary.LittleEndian.AppendUint16(data, uint16(r%7+1))
	}
	// The damage of the suite makes times fall; a recording of this format has nothing to tell it by.
	c := Recording{Data: data, Units: map[string]string{"gx": "deg/s"}, Rate: 100, Rows: 300, Gaps: 1, Mean: map[string]float64{"gy": 3.99}}
	good := beat{unit: "deg/s", rate: 100}
	with := func(f func(*beat)) beat { b := good; f(&b); return b }
	if p := CheckReader(t.TempDir(), good, c); len(p) != 0 {
		t.Fatalf("without fault: %q", p)
	}
	for want, r := range map[string]beat{
		`column "gx" is stated in "rad/s", where the recording has "deg/s"`: with(func(b *beat) { b.unit = "rad/s" }),
		"the rate between gaps is 1000 Hz, where the recording has 100 Hz":  with(func(b *beat) { b.rate = 1000 }),
		"it shows 0 gaps, where the recording has 1":                        with(func(b *beat) { b.lost = true }),
		"a source that gives one byte at a time leads to other samples":     with(func(b *beat) { b.portion = true }),
		"a source that fails half-way is read as if it had ended":           with(func(b *beat) { b.portion = true }),
		"a batch begins at row 2, where row 1 is due":                       with(func(b *beat) { b.first = 1 }),
		"with an error of its own, and got back <nil>":                      with(func(b *beat) { b.ignores = true }),
		"with a context that has ended it gives <nil>":                      with(func(b *beat) { b.deaf = true }),
		"an error about the recording must be a *recording.Error":           with(func(b *beat) { b.plain = true }),
		"a panic: runtime error":                                            with(func(b *beat) { b.panics = true }),
		"leave out a row that is not whole":                                 with(func(b *beat) { b.doubles = true }),
		"a column that is not there is read without an error":               with(func(b *beat) { b.anything = true }),
	} {
		if p := strings.Join(CheckReader(t.TempDir(), r, c), "\n"); !strings.Contains(p, want) {
			t.Errorf("want %q among\n%s", want, p)
		}
	}
	loud := with(func(b *beat) {
		b.options = []stage.Argument{{Name: "loud", About: "whether to say so", Type: stage.Type{Kind: stage.Truth}, Default: false}}
	})
	if p := strings.Join(CheckReader(t.TempDir(), loud, c), "\n"); !strings.HasPrefix(p, "option loud changes nothing: with true the outcome is the same") {
		t.Errorf("an option that is not read: %s", p)
	}
	said := c
	said.Inert = map[string]string{"loud": "nothing is heard"}
	if p := CheckReader(t.TempDir(), loud, said); len(p) != 0 {
		t.Errorf("an option that is said to change nothing: %q", p)
	}
	loud.heeds = true
	if p := CheckReader(t.TempDir(), loud, c); len(p) != 0 {
		t.Errorf("an option that is read: %q", p)
	}
	if p := CheckReader(t.TempDir(), loud, said); len(p) != 1 || !strings.Contains(p[0], "option loud is said to change nothing (nothing is heard), and true changes") {
		t.Errorf("an option that is wrongly said to change nothing: %q", p)
	}
	if p := CheckReader(t.TempDir(), good); len(p) != 1 || !strings.Contains(p[0], "no recording") {
		t.Errorf("without a recording: %q", p)
	}
	short := c
	short.Rows = 299
	short.Mean = map[string]float64{"gy": 5}
	p := strings.Join(CheckReader(t.TempDir(), good, short), "\n")
	if !strings.Contains(p, "it gives 300 rows, where the recording has 299") || !strings.Contains(p, `the mean of column "gy" is 3.99`) {
		t.Error(p)
	}
}
