package run

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"sort"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

// The stages of these tests: string threads beads from a file, polish works on
// them, weigh gives figures, card is a report.

var beadsKind = artifact.Kind{Name: "beads", Version: 1, Tables: []artifact.TableSpec{
	{Name: "beads", Columns: []artifact.Column{{Name: "mass", Type: artifact.Float, Unit: "kg"}}}}}

var cardKind = artifact.Kind{Name: "card", Version: 1, Files: "the card",
	Scalars: []artifact.Column{{Name: "main", Type: artifact.Text}}}

var registry = artifact.NewRegistry(beadsKind, cardKind, account.Kind)

type fake struct {
	description stage.Description
	run         func(ctx context.Context, c *stage.Call) (*stage.Outcome, error)
}

func (f *fake) Describe() stage.Description { return f.description }
func (f *fake) Run(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
	return f.run(ctx, c)
}

func of(kind string) stage.Type { return stage.Type{Kind: stage.Artifact, Kinds: []string{kind}} }

var (
	text   = stage.Type{Kind: stage.Text}
	number = stage.Type{Kind: stage.Number}
	mass   = stage.Type{Kind: stage.Amount, Dimension: "mass", Unit: "g"}
)

// world is a job folder with the stages that run in it.
type world struct {
	t      *testing.T
	dir    string
	source InProcess
	// hold and inside let tests stop polish steps within their work.
	hold   chan struct{}
	inside chan string

	mu      sync.Mutex
	ran     []string
	changes map[string]func(c *stage.Call) error // by first argument of polish
}

func newWorldOfTests(t *testing.T) *world {
	w := &world{t: t, dir: t.TempDir(), inside: make(chan string, 100), changes: map[string]func(*stage.Call) error{}}
	note := func(s string) { w.mu.Lock(); w.ran = append(w.ran, s); w.mu.Unlock() }
	write := func(c *stage.Call, masses []float64) error {
		a := artifact.New(beadsKind)
		a.Table("beads").Set("mass", masses)
		_, err := artifact.Write(c.Outputs["beads"], a)
		return err
	}
	read := func(c *stage.Call) []float64 {
		a, err := artifact.Open(c.Inputs["beads"][0].Folder, registry)
		if err != nil {
			panic(err)
		}
		return a.Table("beads").Floats("mass")
	}
	beads := []stage.Output{{Name: "beads", Kind: "beads", About: "beads"}}
	w.source = InProcess{Sum: "sum-1", Stages: []stage.Stage{
		&fake{stage.Description{Name: "string", About: "threads beads", Outputs: beads,
			Arguments: []stage.Argument{{Name: "file", Type: stage.Type{Kind: stage.File}, Required: true}},
			Figures:   []stage.Figure{{Name: "count", Type: number}, {Name: "total", Type: mass}},
		}, func(_ context.Context, c *stage.Call) (*stage.Outcome, error) {
			note("string")
			data, err := c.Files.Read(c.Arguments.Text("file"))
			if err != nil {
				return nil, fault.From(err).Of("file")
			}
			_, _ = c.Files.Read("override.txt")
			var masses []float64
			total := 0.0
			for _, f := range strings.Fields(string(data)) {
				var x float64
				if _, err := fmt.Sscan(f, &x); err != nil {
					return nil, fault.New(fault.Input, "%q is no number", f).Of("file").In("read beads", c.Arguments.Text("file"))
				}
				masses = append(masses, x)
				total += x
			}
			c.Report.Log(stage.Info, "threaded", "beads", len(masses))
			return &stage.Outcome{Figures: map[string]any{"count": float64(len(masses)), "total": stage.Quantity{SI: total, Dimension: "mass"}},
				Warnings: []stage.Warning{{ID: "string.dull", Text: "beads are dull"}}, Notes: []string{"threaded"}}, write(c, masses)
		}},
		&fake{stage.Description{Name: "polish", About: "polishes", Outputs: beads,
			Arguments: []stage.Argument{{Name: "beads", Type: of("beads"), Required: true}, {Name: "name", Type: text, Default: ""},
				{Name: "factor", Type: number, Default: 1.0}},
			Figures: []stage.Figure{{Name: "lightest", Type: mass}},
		}, func(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
			name := c.Arguments.Text("name")
			note("polish " + name)
			c.Report.Progress("polishing "+name, 0.5)
			w.inside <- fmt.Sprintf("%s %d %d", name, c.Threads, c.Memory>>20)
			if w.hold != nil {
				select {
				case <-w.hold:
				case <-ctx.Done():
					return nil, ctx.Err()
				}
			}
			if change := w.changes[name]; change != nil {
				if err := change(c); err != nil {
					return nil, err
				}
			}
			masses := append([]float64(nil), read(c)...)
			for i := range masses {
				masses[i] *= c.Arguments.Number("factor")
			}
			lightest := append([]float64(nil), masses...)
			sort.Float64s(lightest)
			if _, err := os.Stat(filepath.Join(c.Outputs["beads"], "done")); err == nil {
				return &stage.Outcome{}, os.Remove(filepath.Join(c.Outputs["beads"], "done"))
			}
			return &stage.Outcome{Figures: map[string]any{"lightest": stage.Quantity{SI: lightest[0], Dimension: "mass"}}}, write(c, masses)
		}},
		&fake{stage.Description{Name: "card", About: "writes a card", Last: true,
			Outputs: []stage.Output{{Name: "card", Kind: "card", Publish: "to"}},
			Arguments: []stage.Argument{{Name: "include", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Artifact, Kinds: []string{"beads"}}}},
				{Name: "to", Type: stage.Type{Kind: stage.Target}, Required: true}},
		}, func(_ context.Context, c *stage.Call) (*stage.Outcome, error) {
			note("card")
			r, err := artifact.Open(c.Inputs["run"][0].Folder, registry)
			if err != nil {
				return nil, err
			}
			main := filepath.Base(c.Arguments.Text("to"))
			a := artifact.New(cardKind)
			a.Scalars["main"] = main
			a.Files[main] = fmt.Appendf(nil, "%+v", *account.Decode(r))
			a.Files["parts/list.csv"] = []byte("bead\n")
			_, err = artifact.Write(c.Outputs["card"], a)
			return &stage.Outcome{Summary: []stage.Section{{Title: "Card"}}}, err
		}},
	}}
	w.file("beads.txt", "0.003 0.001 0.002")
	return w
}

func (w *world) file(name, content string) {
	w.t.Helper()
	if err := os.WriteFile(filepath.Join(w.dir, name), []byte(content), 0o644); err != nil {
		w.t.Fatal(err)
	}
}

const base = `job "necklace" {
  about = "a test"
}
setting "factor" {
  value = 2
  about = "how much"
}
stage "string" "thread" {
  file = "beads.txt"
}
stage "polish" "left" {
  beads  = stage.thread.beads
  name   = "left"
  factor = setting.factor
}
stage "polish" "right" {
  beads  = stage.thread.beads
  name   = "right"
  factor = stage.thread.figures.count
}
stage "card" "card" {
  include = [stage.left.beads, stage.right.beads]
  to      = "out/card.txt"
}
requirement "light" {
  figure  = stage.left.figures.lightest
  at_most = "2 g"
  because = "heavy beads pull"
}
requirement "few" {
  figure   = stage.thread.figures.count
  at_least = 5
}
`

func (w *world) plan(text string, set map[string]string) *plan.Plan {
	w.t.Helper()
	w.file("job.hcl", text)
	j, diags := job.Load(context.Background(), filepath.Join(w.dir, "job.hcl"), job.Options{
		Set: set,
		Describe: func(_ context.Context, name string) (stage.Description, error) {
			s, ok := w.source.Stage(name)
			if !ok {
				return stage.Description{}, fault.New(fault.Missing, "no stage %s", name)
			}
			return s.Describe(), nil
		},
	})
	if diags.HasErrors() {
		w.t.Fatal(diags)
	}
	p, diags := plan.Make(j)
	if diags.HasErrors() {
		w.t.Fatal(diags)
	}
	return p
}

// run runs a job and gives the result and the steps that ran, sorted.
func (w *world) run(ctx context.Context, text string, change func(*Options)) (*Result, []string) {
	w.t.Helper()
	o := Options{Plan: w.plan(text, nil), Source: w.source, Name: "job.hcl", Program: "test 1", Threads: 4}
	if change != nil {
		change(&o)
	}
	st, err := store.Open(ctx, w.dir, registry)
	if err != nil {
		w.t.Fatal(err)
	}
	defer st.Close()
	o.Store = st
	w.ran = nil
	r, err := Run(ctx, o)
	if err != nil {
		w.t.Fatal(err)
	}
	sort.Strings(w.ran)
	return r, w.ran
}

func states(r *Result) string {
	var out []string
	for _, s := range r.Steps {
		out = append(out, s.Label+" "+string(s.State))
	}
	return strings.Join(out, ", ")
}

func TestRunTwice(t *testing.T) {
	w := newWorldOfTests(t)
	r, ran := w.run(context.Background(), base, nil)
	if got := states(r); got != "thread ran, left ran, right ran, card ran" || r.Failed() || r.Stopped {
		t.Fatalf("states %s: %v", got, r.Diagnostics)
	}
	if want := []string{"card", "polish left", "polish right", "string"}; !reflect.DeepEqual(ran, want) {
		t.Errorf("ran %v", ran)
	}
	if len(r.Verdicts) != 2 || !r.Verdicts[0].Holds || r.Verdicts[1].Holds || !r.Verdicts[1].Judged || len(r.Broken()) != 1 {
		t.Errorf("verdicts %+v", r.Verdicts)
	}
	if got := r.Steps[2].Outcome.Figures["lightest"]; got != (stage.Quantity{SI: 0.003, Dimension: "mass"}) {
		t.Errorf("a figure as argument: lightest %v, want 3 beads times 1 g", got)
	}
	card, err := os.ReadFile(filepath.Join(w.dir, "out", "card.txt"))
	if err != nil {
		t.Fatal(err)
	}
	for _, part := range []string{"Job:necklace About:a test Program:test 1", "{Name:factor Value:2 About:how much Overridden:false}", "State:finished", "Name:light Because:heavy beads pull", "beads are dull", "Path:override.txt SHA256:}"} {
		if !strings.Contains(string(card), part) {
			t.Errorf("the card lacks %q: %s", part, card)
		}
	}
	if strings.Contains(string(card), w.dir) {
		t.Error("the card names a path of this machine")
	}
	if want := []string{"out/card.txt", "out/parts/list.csv"}; !reflect.DeepEqual(r.Steps[3].Published, want) {
		t.Errorf("published %v", r.Steps[3].Published)
	}

	again, ran := w.run(context.Background(), base, nil)
	if got := states(again); got != "thread reused, left reused, right reused, card reused" || len(ran) != 0 {
		t.Errorf("again: %s, ran %v", got, ran)
	}
	for i := range r.Steps {
		a, b := r.Steps[i], again.Steps[i]
		if !reflect.DeepEqual(a.Outputs, b.Outputs) || fmt.Sprint(a.Outcome) != fmt.Sprint(b.Outcome) {
			t.Errorf("%s: %+v, then %+v", a.Label, a, b)
		}
	}
	if !reflect.DeepEqual(r.Verdicts, again.Verdicts) {
		t.Errorf("verdicts %+v, then %+v", r.Verdicts, again.Verdicts)
	}
	// A published file that is gone or changed is written again.
	w.file("out/card.txt", "scribble")
	os.Remove(filepath.Join(w.dir, "out", "parts", "list.csv"))
	_, ran = w.run(context.Background(), base, nil)
	now, _ := os.ReadFile(filepath.Join(w.dir, "out", "card.txt"))
	_, err = os.Stat(filepath.Join(w.dir, "out", "parts", "list.csv"))
	if len(ran) != 0 || string(now) != string(card) || err != nil {
		t.Errorf("ran %v, card %q, %v", ran, now, err)
	}
	if _, ran = w.run(context.Background(), base, func(o *Options) { o.Force = true }); len(ran) != 4 {
		t.Errorf("forced: ran %v", ran)
	}
}

// Each change runs what depends on it and nothing else.
func TestWhatRunsAgain(t *testing.T) {
	for name, c := range map[string]struct {
		change func(w *world)
		text   string
		ran    string
	}{
		"a file":            {func(w *world) { w.file("beads.txt", "0.004 0.001") }, base, "card, polish left, polish right, string"},
		"a file rewritten":  {func(w *world) { w.file("beads.txt", "0.003 0.001 0.002 ") }, base, "card, string"},
		"a file looked for": {func(w *world) { w.file("override.txt", "") }, base, "card, string"},
		"an argument":       {func(*world) {}, strings.Replace(base, `name   = "right"`, `name = "other"`, 1), "card, polish other"},
		"a setting":         {func(*world) {}, strings.Replace(base, "value = 2", "value = 4", 1), "card, polish left"},
		"a requirement":     {func(*world) {}, strings.Replace(base, `"2 g"`, `"3 g"`, 1), "card"},
		"a label":           {func(*world) {}, strings.ReplaceAll(base, "left", "port"), "card, polish port"},
		"the executable":    {func(w *world) { w.source.Sum = "sum-2" }, base, "card, polish left, polish right, string"},
		"a lost artifact": {func(w *world) {
			last, _ := store.View(w.dir, registry).LastRun("job.hcl")
			os.RemoveAll(store.View(w.dir, registry).Folder(last.Steps[1].Outputs["beads"].Hash))
		}, base, "polish left"},
	} {
		t.Run(name, func(t *testing.T) {
			w := newWorldOfTests(t)
			w.run(context.Background(), base, nil)
			c.change(w)
			r, ran := w.run(context.Background(), c.text, nil)
			if got := strings.Join(ran, ", "); got != c.ran || r.Failed() {
				t.Errorf("ran %s, want %s (%v)", got, c.ran, r.Diagnostics)
			}
		})
	}
}

// A look ahead says what a run then does.
func TestLookAhead(t *testing.T) {
	w := newWorldOfTests(t)
	look := func() string {
		var out []string
		for _, l := range LookAhead(context.Background(), Options{Plan: w.plan(base, nil), Source: w.source,
			Store: store.View(w.dir, registry), Program: "test 1"}) {
			switch {
			case l.Stored:
				out = append(out, l.Label+" stored")
			case l.Key != "":
				out = append(out, l.Label+" to run")
			default:
				out = append(out, l.Label+" open")
			}
		}
		return strings.Join(out, ", ")
	}
	if got := look(); got != "thread to run, left open, right open, card open" {
		t.Errorf("at first: %s", got)
	}
	if _, err := os.Stat(filepath.Join(w.dir, store.FolderName)); err == nil {
		t.Error("looking made a store")
	}
	w.run(context.Background(), base, nil)
	if got := look(); got != "thread stored, left stored, right stored, card stored" {
		t.Errorf("after a run: %s", got)
	}
	w.file("beads.txt", "0.003 0.001 0.002 ")
	if got := look(); got != "thread to run, left open, right open, card open" {
		t.Errorf("after a change: %s", got)
	}
}

func TestFailures(t *testing.T) {
	for name, c := range map[string]struct {
		change     func(c *stage.Call) error
		kind       fault.Kind
		diagnostic string
	}{
		"fault":        {func(*stage.Call) error { return fault.New(fault.Input, "scratched").Of("factor") }, fault.Input, "job.hcl:14,12-26: Stage left failed; scratched"},
		"plain error":  {func(*stage.Call) error { return errors.New("oops") }, fault.Internal, "job.hcl:11,1-22: Stage left failed; oops"},
		"no artifact":  {func(c *stage.Call) error { return os.WriteFile(filepath.Join(c.Outputs["beads"], "done"), nil, 0o644) }, fault.Missing, "take over output: beads: stage polish did not write its output as declared: there is no artifact.json"},
		"wrong kind":   {writeCard, fault.Protocol, `did not write its output as declared: it is an artifact of kind "card", where "beads" was declared`},
		"unknown kind": {writeUnknown, fault.Protocol, `did not write its output as declared: the artifact kind "mystery" is not known`},
	} {
		t.Run(name, func(t *testing.T) {
			w := newWorldOfTests(t)
			w.changes["left"] = c.change
			r, ran := w.run(context.Background(), base, nil)
			if got := states(r); got != "thread ran, left failed, right ran, card skipped" {
				t.Fatalf("states %s", got)
			}
			if f := r.Steps[1].Fault; f == nil || f.Kind != c.kind {
				t.Errorf("fault %v", f)
			}
			if len(r.Diagnostics) != 1 || !strings.Contains(strings.ReplaceAll(r.Diagnostics.Error(), w.dir+string(filepath.Separator), ""), c.diagnostic) {
				t.Errorf("diagnostics %v, want %s", r.Diagnostics, c.diagnostic)
			}
			if r.Steps[3].Because != "left" {
				t.Errorf("skipped because of %q", r.Steps[3].Because)
			}
			v := r.Verdicts[0]
			if v.Holds || v.Judged || v.Shown != "stage left did not finish" {
				t.Errorf("verdict %+v", v)
			}
			_ = ran
			// Nothing of the failure is taken for a result.
			delete(w.changes, "left")
			if r, ran := w.run(context.Background(), base, nil); r.Failed() || strings.Join(ran, ", ") != "card, polish left" {
				t.Errorf("afterwards: %s, ran %v", states(r), ran)
			}
		})
	}
}

func writeCard(c *stage.Call) error {
	a := artifact.New(cardKind)
	a.Scalars["main"] = ""
	if _, err := artifact.Write(c.Outputs["beads"], a); err != nil {
		return err
	}
	return os.WriteFile(filepath.Join(c.Outputs["beads"], "done"), nil, 0o644)
}

func writeUnknown(c *stage.Call) error {
	if _, err := artifact.Write(c.Outputs["beads"], artifact.New(artifact.Kind{Name: "mystery", Version: 1})); err != nil {
		return err
	}
	return os.WriteFile(filepath.Join(c.Outputs["beads"], "done"), nil, 0o644)
}

// A report that does not need the failed step is still written, and says so.
func TestReportAfterFailure(t *testing.T) {
	w := newWorldOfTests(t)
	w.changes["left"] = func(*stage.Call) error { return errors.New("oops") }
	r, _ := w.run(context.Background(), strings.Replace(base, "[stage.left.beads, stage.right.beads]", "[stage.right.beads]", 1), nil)
	if got := states(r); got != "thread ran, left failed, right ran, card ran" {
		t.Fatalf("states %s: %v", got, r.Diagnostics)
	}
	card, _ := os.ReadFile(filepath.Join(w.dir, "out", "card.txt"))
	if !strings.Contains(string(card), "{Label:left Stage:polish About: State:failed Key: Executable:sum-1}") ||
		!strings.Contains(string(card), "stage left did not finish") {
		t.Errorf("card %s", card)
	}
}

func TestFiguresAreChecked(t *testing.T) {
	d := stage.Description{Name: "s", Figures: []stage.Figure{
		{Name: "n", Type: number}, {Name: "m", Type: mass}, {Name: "t", Type: text}, {Name: "b", Type: stage.Type{Kind: stage.Truth}},
		{Name: "l", Type: stage.Type{Kind: stage.List, Element: &mass}}, {Name: "o", Type: stage.Type{Kind: stage.Object, Fields: []stage.Argument{{Name: "x", Type: number}}}},
		{Name: "any", Type: stage.Type{Kind: stage.Any}}, {Name: "map", Type: stage.Type{Kind: stage.Map, Element: &number}},
	}}
	kg := stage.Quantity{SI: 1, Dimension: "mass"}
	good := map[string]any{"n": 1.0, "m": kg, "t": "x", "b": true, "l": []any{kg}, "o": map[string]any{"x": 1.0}, "any": []any{}, "map": map[string]any{"k": 1.0}}
	if err := CheckFigures(d, good); err != nil {
		t.Error(err)
	}
	if err := CheckFigures(d, map[string]any{"n": nil}); err != nil {
		t.Errorf("without a value: %v", err)
	}
	for name, v := range map[string]any{"n": "1", "m": stage.Quantity{SI: 1, Dimension: "length"}, "t": 1.0, "b": 1.0, "l": []any{1.0}, "o": map[string]any{"x": "y"}, "map": []any{}, "other": 1.0} {
		if err := CheckFigures(d, map[string]any{name: v}); fault.KindOf(err) != fault.Protocol || !strings.Contains(err.Error(), fmt.Sprintf("%q", name)) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// Independent steps run at once, with equal shares of the budget.
func TestBudget(t *testing.T) {
	w := newWorldOfTests(t)
	w.hold = make(chan struct{})
	go func() {
		got := []string{<-w.inside, <-w.inside}
		sort.Strings(got)
		if want := []string{"left 2 512", "right 2 512"}; !reflect.DeepEqual(got, want) {
			t.Errorf("shares %v, want %v", got, want)
		}
		close(w.hold)
	}()
	r, _ := w.run(context.Background(), base, func(o *Options) { o.Threads, o.Memory = 4, 1<<30 })
	if r.Failed() {
		t.Fatal(r.Diagnostics)
	}

	// With one thread nothing runs beside another step.
	w = newWorldOfTests(t)
	var at, most atomic.Int32
	busy := func(*stage.Call) error {
		most.Store(max(most.Load(), at.Add(1)))
		time.Sleep(10 * time.Millisecond)
		at.Add(-1)
		return nil
	}
	w.changes["left"], w.changes["right"] = busy, busy
	if r, _ = w.run(context.Background(), base, func(o *Options) { o.Threads = 1 }); r.Failed() || most.Load() != 1 {
		t.Errorf("%d at once: %v", most.Load(), r.Diagnostics)
	}

	// Memory that does not fit beside another step is waited for; that which
	// never fits is an error.
	limit := func(left, right string) string {
		s := strings.Replace(base, `name   = "left"`, `name = "left"`+"\n  memory_limit = \""+left+"\"", 1)
		return strings.Replace(s, `name   = "right"`, `name = "right"`+"\n  memory_limit = \""+right+"\"", 1)
	}
	w = newWorldOfTests(t)
	most.Store(0)
	w.changes["left"], w.changes["right"] = busy, busy
	if r, _ = w.run(context.Background(), limit("600 MiB", "700 MiB"), func(o *Options) { o.Memory = 1 << 30 }); r.Failed() || most.Load() != 1 {
		t.Errorf("%d at once: %v", most.Load(), r.Diagnostics)
	}
	w = newWorldOfTests(t)
	r, _ = w.run(context.Background(), limit("2 GiB", "1 MiB"), func(o *Options) { o.Memory = 1 << 30 })
	if got := states(r); got != "thread ran, left failed, right ran, card skipped" ||
		!strings.Contains(r.Diagnostics.Error(), "it asks for 2048 MiB, and all steps together may use 1024 MiB") {
		t.Errorf("%s: %v", got, r.Diagnostics)
	}
}

func TestTimeLimit(t *testing.T) {
	w := newWorldOfTests(t)
	w.hold = make(chan struct{})
	r, _ := w.run(context.Background(), strings.Replace(base, `name   = "left"`, `name = "left"`+"\n  time_limit = \"20 ms\"\n", 1), func(o *Options) {
		o.Observer = &listener{end: func(s Step) {
			if s.Label == "left" {
				close(w.hold)
			}
		}}
	})
	if got := states(r); got != "thread ran, left failed, right ran, card skipped" || r.Steps[1].Fault.Kind != fault.Limit ||
		!strings.Contains(r.Diagnostics.Error(), "it did not finish within 20ms; raise time_limit") {
		t.Errorf("%s: %v", got, r.Diagnostics)
	}
}

func TestStop(t *testing.T) {
	w := newWorldOfTests(t)
	w.hold = make(chan struct{})
	ctx, cancel := context.WithCancel(context.Background())
	go func() { <-w.inside; cancel() }()
	r, _ := w.run(ctx, base, func(o *Options) { o.Threads = 1 })
	if got := states(r); got != "thread ran, left stopped, right stopped, card stopped" || !r.Stopped || len(r.Diagnostics) != 0 {
		t.Errorf("%s: %v", got, r.Diagnostics)
	}
	w.hold = nil
	r, ran := w.run(context.Background(), base, nil)
	if got := strings.Join(ran, ", "); got != "card, polish left, polish right" || r.Failed() {
		t.Errorf("afterwards ran %s: %v", got, r.Diagnostics)
	}
}

// A result that comes after the end is none: the step did not see all of its
// time, and the next run does it again.
func TestResultAfterStop(t *testing.T) {
	w := newWorldOfTests(t)
	ctx, cancel := context.WithCancel(context.Background())
	w.changes["left"] = func(*stage.Call) error { cancel(); return nil }
	r, _ := w.run(ctx, base, func(o *Options) { o.Threads = 1 })
	if got := states(r); got != "thread ran, left stopped, right stopped, card stopped" {
		t.Errorf("%s: %v", got, r.Diagnostics)
	}
	delete(w.changes, "left")
	if _, ran := w.run(context.Background(), base, nil); strings.Join(ran, ", ") != "card, polish left, polish right" {
		t.Errorf("afterwards ran %v", ran)
	}
}

// listener is an observer that notes what it hears; it would show a race if
// it were called by two goroutines at once.
type listener struct {
	heard []string
	end   func(Step)
}

func (l *listener) Begin(label, kind string, threads int) {
	l.heard = append(l.heard, "begin "+label)
}
func (l *listener) Progress(label, phase string, fraction float64) {
	l.heard = append(l.heard, fmt.Sprint("progress ", label, " ", phase, " ", fraction))
}
func (l *listener) Log(label string, level stage.Level, text string, fields []any) {
	l.heard = append(l.heard, fmt.Sprint("log ", label, " ", level, " ", text, fields))
}
func (l *listener) End(s Step) {
	l.heard = append(l.heard, "end "+s.Label+" "+string(s.State))
	if l.end != nil {
		l.end(s)
	}
}
func (l *listener) Judged(v Verdict) { l.heard = append(l.heard, "judged "+v.Name) }

// Verdicts come as soon as their figures exist.
func TestObserver(t *testing.T) {
	w := newWorldOfTests(t)
	l := &listener{}
	w.run(context.Background(), base, func(o *Options) { o.Observer, o.Threads = l, 1 })
	want := []string{"begin thread", "log thread info threaded[beads 3]", "end thread ran", "judged few",
		"begin left", "progress left polishing left 0.5", "end left ran", "judged light",
		"begin right", "progress right polishing right 0.5", "end right ran", "begin card", "end card ran"}
	if !reflect.DeepEqual(l.heard, want) {
		t.Errorf("heard\n%s\nwant\n%s", strings.Join(l.heard, "\n"), strings.Join(want, "\n"))
	}
}

// A target that cannot be written fails the report with its place.
func TestPublishFails(t *testing.T) {
	w := newWorldOfTests(t)
	w.file("out", "a file where a folder is wanted")
	r, _ := w.run(context.Background(), base, nil)
	if got := states(r); got != "thread ran, left ran, right ran, card failed" || !strings.Contains(r.Diagnostics.Error(), "job.hcl:23,13-27: Stage card failed; write: out/card.txt") {
		t.Errorf("%s: %v", got, r.Diagnostics)
	}
}

// Keep goes to the store and knows the executable.
func TestKeep(t *testing.T) {
	w := newWorldOfTests(t)
	var found []bool
	w.changes["left"] = func(c *stage.Call) error {
		_, ok, err := c.Services.Keep(context.Background(), "factor", func(folder string) error {
			return os.WriteFile(filepath.Join(folder, "x"), nil, 0o644)
		})
		found = append(found, ok)
		return err
	}
	w.run(context.Background(), base, nil)
	w.run(context.Background(), strings.Replace(base, "value = 2", "value = 3", 1), nil)
	w.source.Sum = "sum-2"
	w.run(context.Background(), base, nil)
	if want := []bool{false, true, false}; !reflect.DeepEqual(found, want) {
		t.Errorf("found %v, want %v", found, want)
	}
}
