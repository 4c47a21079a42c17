package plugintest

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strconv"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// trial is a job with one step of what an author describes. By it the suite asks what users would be told of a value.
type trial struct {
	folder string // the job's, empty or not there yet
	d      stage.Description
	word   string            // what an argument is called: "argument" or "option"
	given  map[string]string // the step as a job writes it, by argument
}

// producer is the stage of a trial whose outputs stand for artifacts.
const (
	producer = "suite-artifacts"
	other    = "suite-other" // a kind that nobody takes
)

// kinds lists the artifact kinds that the step may be given, and one that it must not.
func (x *trial) kinds() []string {
	list := []string{other}
	for _, a := range x.d.Arguments {
		t := a.Type
		if t.Kind == stage.List && t.Element != nil {
			t = *t.Element
		}
		for _, k := range t.Kinds {
			if !slices.Contains(list, k) {
				list = append(list, k)
			}
		}
	}
	return list
}

// reference is an artifact of a kind, as a job writes it.
func (x *trial) reference(kind string) string {
	i := max(slices.Index(x.kinds(), kind), 0)
	return fmt.Sprintf("stage.given.output_%d", i)
}

// leave, in the place of a text, leaves an argument out.
const leave = ""

// ask loads the job with some arguments changed. It gives the values that the step would be called with and what the
// user is told if the job is refused, "" if not.
func (x *trial) ask(change map[string]string) (stage.Arguments, string) {
	arguments, told, _ := x.load(change)
	return arguments, told
}

// load does the same and gives the lines of the job that the user is shown.
func (x *trial) load(change map[string]string) (arguments stage.Arguments, told, lines string) {
	text := "job \"trial\" {}\n"
	text += fmt.Sprintf("stage %q \"given\" {}\n", producer)
	text += fmt.Sprintf("stage %q \"step\" {\n", x.d.Name)
	step := map[string]string{}
	for n, v := range x.given {
		step[n] = v
	}
	for n, v := range change {
		step[n] = v
	}
	for _, n := range sortedKeys(step) {
		if step[n] != leave {
			text += "  " + n + " = " + step[n] + "\n"
		}
	}
	text += "}\n"
	path := filepath.Join(x.folder, "trial.hcl")
	err := os.MkdirAll(x.folder, 0o755)
	if err == nil {
		err = os.WriteFile(path, []byte(text), 0o644)
	}
	if err != nil {
		return nil, err.Error(), ""
	}
	describe := func(_ context.Context, name string) (stage.Description, error) {
		switch name {
		case x.d.Name:
			return x.d, nil
		case producer:
			d := stage.Description{Name: producer}
			for i, k := range x.kinds() {
				d.Outputs = append(d.Outputs, stage.Output{Name: fmt.Sprintf("output_%d", i), Kind: k})
			}
			return d, nil
		}
		return stage.Description{}, fault.New(fault.Missing, "there is no stage %q", name)
	}
	j, diags := job.Load(context.Background(), path, job.Options{Describe: describe})
	if !diags.HasErrors() {
		arguments, _, diags = j.Stages[1].Evaluate(nil)
	}
	if !diags.HasErrors() {
		return arguments, "", ""
	}
	var details []string
	for _, d := range diags {
		details = append(details, d.Detail)
		if d.Subject != nil {
			lines += strings.Split(text, "\n")[d.Subject.Start.Line-1] + "\n"
		}
	}
	return nil, strings.Join(details, "; "), lines
}

// attempt is a value that a job must not get away with.
type attempt struct {
	text string // as a job writes it
	why  string // what is wrong with it
}

// checkDescribed holds the described arguments to what a job makes of them, around a step that must be right: what is
// wrong is refused before anything runs, under the name of the argument; what is left out is as if its default were given.
func (x *trial) checkDescribed() (problems []string) {
	bad := func(format string, args ...any) { problems = append(problems, fmt.Sprintf(format, args...)) }
	if _, told := x.ask(nil); told != "" {
		bad("no job can have this step: %s", told)
		return problems
	}
	refused := func(a, why, text string, change map[string]string) {
		switch _, told, lines := x.load(change); {
		case told == "":
			bad("%s %s: a job that gives %s (%s) is not refused; describe its type, range or choices so that it is before anything runs", x.word, a, text, why)
		case !strings.Contains(told, a) && !strings.HasPrefix(lines, "  "+a+" = "):
			bad("%s %s: a job that gives %s (%s) is refused without naming it: %s", x.word, a, text, why, told)
		}
	}
	const unknown = "suite_unknown"
	if _, told := x.ask(map[string]string{unknown: "1"}); !strings.Contains(told, unknown) {
		bad("an unknown %s is not refused by name: %q", x.word, told)
	}
	for _, a := range x.d.Arguments {
		x.checkDeclaration(a, bad)
		if a.Type.Kind == stage.Any && a.OptionsOf == "" {
			continue // the stage checks it
		}
		for _, w := range x.wrong(a, a.Type, x.given[a.Name]) {
			refused(a.Name, w.why, w.text, map[string]string{a.Name: w.text})
		}
		if takesFiles(a.Type) {
			text := inJob("suite/no-such-file")
			if a.Type.Kind == stage.List {
				text = "[" + text + "]"
			}
			refused(a.Name, "a file that is not there", text, map[string]string{a.Name: text})
		}
		if a.Required {
			refused(a.Name, "and it is required", "no value", map[string]string{a.Name: leave})
		}
		x.checkDefault(a, bad)
	}
	return problems
}

// checkDeclaration finds what an argument declares and no one would look at.
func (x *trial) checkDeclaration(a stage.Argument, bad func(string, ...any)) {
	t := a.Type
	for t.Kind == stage.List || t.Kind == stage.Map {
		if t.Element == nil {
			break
		}
		t = *t.Element
	}
	switch t.Kind {
	case stage.Number, stage.Whole, stage.Amount:
	default:
		if a.Min != nil || a.Max != nil || a.Above != nil {
			bad("%s %s has bounds, which hold for numbers and quantities alone: no %s is checked against them", x.word, a.Name, t.Kind)
		}
	}
	if t.Kind != stage.Text && len(a.Choices) > 0 {
		bad("%s %s has choices, which hold for texts alone: no %s is checked against them", x.word, a.Name, t.Kind)
	}
	if a.Required && a.Default != nil {
		bad("%s %s is required and has a default, which no job can reach", x.word, a.Name)
	}
	if t.Kind == stage.Object {
		x.checkMembers(a, t, bad)
	}
	if a.Example != "" && t.Kind != stage.File && t.Kind != stage.Artifact {
		if _, told := x.ask(map[string]string{a.Name: a.Example}); told != "" {
			bad("%s %s: its own example %s is refused: %s", x.word, a.Name, a.Example, told)
		}
	}
}

// checkMembers tries the example of each member of an object, or of an object in a list or map, beside those that no
// object can leave out.
func (x *trial) checkMembers(a stage.Argument, t stage.Type, bad func(string, ...any)) {
	members := map[string]string{}
	for _, f := range t.Fields {
		if f.Required && f.Example == "" {
			return // nothing to go by
		}
		if f.Required {
			members[f.Name] = f.Example
		}
	}
	for _, f := range t.Fields {
		if f.Example == "" {
			continue
		}
		text, all := "", with(members, f.Name, f.Example)
		for _, n := range sortedKeys(all) {
			text += n + " = " + all[n] + ", "
		}
		text = "{ " + strings.TrimSuffix(text, ", ") + " }"
		for of := a.Type; of.Kind != stage.Object; of = *of.Element {
			if of.Kind == stage.List {
				text = "[" + text + "]"
			} else {
				text = "{ key = " + text + " }"
			}
		}
		if _, told := x.ask(map[string]string{a.Name: text}); told != "" {
			bad("%s %s: the example %s of its member %s is refused: %s", x.word, a.Name, f.Example, f.Name, told)
		}
	}
}

// checkDefault wants an argument that is left out, or has the value null, to be as if its default were written.
func (x *trial) checkDefault(a stage.Argument, bad func(string, ...any)) {
	if a.Required || a.OptionsOf != "" || takesArtifacts(a.Type) || takesFiles(a.Type) {
		return
	}
	without, told := x.ask(map[string]string{a.Name: leave})
	if told != "" {
		bad("%s %s is optional, and a job without it is refused: %s", x.word, a.Name, told)
		return
	}
	ways := []string{"null"}
	if a.Default != nil {
		ways = append(ways, inJob(a.Default))
	}
	for _, text := range ways {
		with, told := x.ask(map[string]string{a.Name: text})
		if told != "" {
			bad("%s %s: its own default, %s, is refused: %s", x.word, a.Name, text, told)
		} else if !reflect.DeepEqual(with, without) {
			bad("%s %s: left out it is %v, and given as %s it is %v; leaving out must be the same as giving the default", x.word, a.Name, without[a.Name], text, with[a.Name])
		}
	}
}

// wrong lists values that an argument of a type must not have. usual is one that it may have, as a job writes it, or "".
func (x *trial) wrong(a stage.Argument, t stage.Type, usual string) (list []attempt) {
	add := func(why, text string) { list = append(list, attempt{text, why}) }
	beyond := func(show func(float64) string) {
		if a.Min != nil {
			add("below its least value", show(*a.Min-max(1, math.Abs(*a.Min))))
		}
		if a.Above != nil {
			add("not above its lower bound", show(*a.Above))
		}
		if a.Max != nil {
			add("above its largest value", show(*a.Max+max(1, math.Abs(*a.Max))))
		}
	}
	number := func(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }
	switch t.Kind {
	case stage.Text:
		add("a number", "1")
		add("a truth value", "true")
		if len(a.Choices) > 0 {
			add("a text that is none of its choices", inJob(strings.Join(a.Choices, "-")+"-suite"))
		}
	case stage.Number, stage.Whole:
		add("a text", inJob("many"))
		add("a truth value", "true")
		if t.Kind == stage.Whole {
			add("no whole number", "1.5")
		}
		beyond(number)
	case stage.Truth:
		add("a text", inJob("yes"))
		add("a number", "1")
	case stage.Amount:
		if !quantity.Same(t.Dimension, "number") {
			add("a number without a unit", "1")
		}
		unit := "1 kg"
		if quantity.Same(t.Dimension, "mass") {
			unit = "1 m"
		}
		add("a quantity of another dimension", inJob(unit))
		add("a truth value", "true")
		beyond(func(v float64) string { return inJob(stage.Quantity{SI: v, Dimension: t.Dimension}) })
	case stage.List:
		if t.Element == nil {
			add("no list", inJob("none"))
			break
		}
		add("no list", "true")
		for _, w := range x.wrong(a, *t.Element, "") {
			add("in a list, "+w.why, "["+w.text+"]")
		}
	case stage.Map:
		add("no map", inJob("none"))
		if t.Element != nil {
			for _, w := range x.wrong(a, *t.Element, "") {
				add("in a map, "+w.why, "{ key = "+w.text+" }")
			}
		}
	case stage.Object:
		add("no object", inJob("none"))
		add("an object with an unknown member", "{ suite_unknown = 1 }")
		for _, f := range t.Fields {
			for _, w := range x.wrong(f, f.Type, "") {
				add("its member "+f.Name+" "+w.why, "{ "+f.Name+" = "+w.text+" }")
			}
		}
	case stage.File, stage.Target:
		add("a number", "1")
		add("an empty path", `""`)
	case stage.Artifact:
		add("a text", inJob("mesh"))
		if len(t.Kinds) > 0 {
			add("an artifact of another kind", x.reference(other))
		}
	}
	return slices.DeleteFunc(list, func(w attempt) bool { return usual != "" && w.text == usual })
}

// inJob writes a value as a job does.
func inJob(v any) string {
	switch v := v.(type) {
	case nil:
		return "null"
	case bool:
		return strconv.FormatBool(v)
	case int:
		return strconv.Itoa(v)
	case float64:
		return strconv.FormatFloat(v, 'g', -1, 64)
	case stage.Quantity:
		return strconv.Quote(quantity.Exact(v))
	case string:
		data, _ := json.Marshal(v)
		return strings.NewReplacer("${", "$${", "%{", "%%{").Replace(string(data))
	case []string:
		var items []string
		for _, e := range v {
			items = append(items, inJob(e))
		}
		return "[" + strings.Join(items, ", ") + "]"
	case []any:
		var items []string
		for _, e := range v {
			items = append(items, inJob(e))
		}
		return "[" + strings.Join(items, ", ") + "]"
	case map[string]any:
		var items []string
		for _, k := range sortedKeys(v) {
			items = append(items, inJob(k)+" = "+inJob(v[k]))
		}
		if len(items) == 0 {
			return "{}"
		}
		return "{ " + strings.Join(items, ", ") + " }"
	}
	return fmt.Sprintf("(a value of type %T)", v)
}

func takesArtifacts(t stage.Type) bool { return t.Kind == stage.Artifact || listOf(t, stage.Artifact) }
func takesFiles(t stage.Type) bool     { return t.Kind == stage.File || listOf(t, stage.File) }

func listOf(t stage.Type, kind stage.TypeKind) bool {
	return t.Kind == stage.List && t.Element != nil && t.Element.Kind == kind
}
