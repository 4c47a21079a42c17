package airframefile

import (
	"fmt"
	"sort"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/nearest"
)

// kinds of blocks, and whether they have a name.
var kinds = map[string]bool{
	"airframe": true, "input": true, "material": true, "plate": true, "copy": true, "joint": true, "bolts": false, "pressed": true, "seam": true, "key": true,
	"bolt": true, "standoff": true, "rotor": true, "lump": true, "gyro": true,
}

type parser struct {
	path   string
	source []byte
	scope  scope
	ctx    *hcl.EvalContext
	diags  hcl.Diagnostics
	file   *File
}

// Parse reads an airframe file. with replaces the values of inputs; its values have the Go types of stage.Value. All
// mistakes of the file are reported in one fault of kind Input; one in with blames the argument "with".
func Parse(path string, source []byte, with map[string]any) (*File, error) {
	f, err := parse(path, source, with)
	if err != nil {
		return nil, err
	}
	return f, nil
}

func parse(path string, source []byte, with map[string]any) (*File, *fault.Error) {
	if len(source) == 0 {
		return nil, fault.New(fault.Input, "the file is empty").In("read airframe", path).Of("airframe").
			Do("describe at least one plate, one rotor and the gyro")
	}
	tree, diags := hclsyntax.ParseConfig(source, path, hcl.InitialPos)
	if diags.HasErrors() {
		return nil, asFault(path, source, diags)
	}
	body := tree.Body.(*hclsyntax.Body)
	job.Prepare(body)
	p := &parser{path: path, source: source, file: &File{Path: path}}
	p.scope = scope{inputs: map[string]cty.Value{}, names: map[string][]string{"plate": nil, "joint": nil}}
	blocks := p.sorted(body)
	if err := p.inputs(blocks["input"], with); err != nil {
		return nil, err
	}
	p.ctx = p.scope.context()
	p.read(blocks)
	if p.diags.HasErrors() {
		return nil, asFault(path, source, p.diags)
	}
	return p.file, nil
}

// sorted checks the blocks of the file by kind and name and lists them by kind.
func (p *parser) sorted(body *hclsyntax.Body) map[string][]*block {
	var known []string
	for k := range kinds {
		known = append(known, k)
	}
	sort.Strings(known)
	attributes := make([]string, 0, len(body.Attributes))
	for name := range body.Attributes {
		attributes = append(attributes, name)
	}
	sort.Strings(attributes)
	for _, name := range attributes {
		p.fail(body.Attributes[name].NameRange, "%q stands outside of any block", name)
	}
	blocks := map[string][]*block{}
	first := map[string]*hclsyntax.Block{} // by kind and name; plates and copies share theirs, as do bodies
	for _, h := range body.Blocks {
		named, ok := kinds[h.Type]
		if !ok {
			p.fail(h.TypeRange, "there is no block %q%s", h.Type, suggest(h.Type, known))
			continue
		}
		name := ""
		switch {
		case named && len(h.Labels) != 1:
			p.fail(h.DefRange(), "a %s has one name in quotes: %s \"NAME\" { ... }", h.Type, h.Type)
			continue
		case !named && len(h.Labels) > 0:
			p.fail(h.DefRange(), "the block %s has no name", h.Type)
			continue
		case named:
			if name = h.Labels[0]; name == "" {
				p.fail(h.DefRange(), "the name of a %s is empty", h.Type)
				continue
			}
		}
		key := h.Type + " " + name
		switch h.Type {
		case "copy", "plate":
			key = "plate " + name
			p.scope.names["plate"] = append(p.scope.names["plate"], name)
		case "joint":
			p.scope.names["joint"] = append(p.scope.names["joint"], name)
		case "pressed", "seam", "key":
			key = "joint " + name // each is a joint group of its own
		case "rotor", "lump", "gyro":
			key = "body " + name
		case "airframe":
			key = h.Type
		}
		if other, dup := first[key]; dup {
			line := other.DefRange().Start.Line
			if h.Type == other.Type {
				p.fail(h.DefRange(), "a second %s; the first is in line %d", describe(h), line)
			} else {
				sharing := "plates and copies share their names, and so do rotors, lumps and the gyro"
				if strings.HasPrefix(key, "joint ") {
					sharing = "each joint, pressed contact, seam and key is a joint group with a name of its own"
				}
				p.fail(h.DefRange(), "%s has the name of %s in line %d; %s", describe(h), describe(other), line, sharing)
			}
			continue
		}
		first[key] = h
		blocks[h.Type] = append(blocks[h.Type], p.block(h, h.Type, name))
	}
	return blocks
}

func describe(h *hclsyntax.Block) string {
	if len(h.Labels) == 0 {
		return h.Type
	}
	return fmt.Sprintf("%s %q", h.Type, h.Labels[0])
}

func (p *parser) fail(at hcl.Range, format string, args ...any) {
	p.diags = append(p.diags, mistake(at, "", fmt.Sprintf(format, args...)))
}

func (p *parser) block(h *hclsyntax.Block, kind, name string) *block {
	part := Part{Kind: kind, Name: name, File: p.path, Line: h.DefRange().Start.Line, lines: map[string]int{}}
	for n, a := range h.Body.Attributes {
		part.lines[n] = a.NameRange.Start.Line
	}
	return &block{p: p, hcl: h, part: part}
}

// evaluate gives the value of an expression; what is wrong with it is reported once.
func (p *parser) evaluate(expr hcl.Expression) (cty.Value, bool) {
	if diags := p.scope.check(expr); diags.HasErrors() {
		p.diags = append(p.diags, diags...)
		return cty.NilVal, false
	}
	v, diags := expr.Value(p.ctx)
	p.diags = append(p.diags, diags...)
	// What depends on an input that could not be read is not known, and that has been said.
	return v, !diags.HasErrors() && v.IsWhollyKnown()
}

// inputs evaluates the inputs in order, each of which may refer to those above it, and replaces values.
func (p *parser) inputs(blocks []*block, with map[string]any) *fault.Error {
	var names []string
	for _, b := range blocks {
		names = append(names, b.part.Name)
	}
	for _, b := range blocks {
		p.ctx = p.scope.context()
		b.need("value", `"5 mm"`)
		v, at, ok := b.value("value")
		in := Input{Name: b.part.Name, About: b.text("about")}
		b.finish()
		if !ok {
			v = cty.DynamicVal
		} else if s := sortOf(v); s == v.Type().FriendlyName() && s != "number" && s != "list" {
			b.fail(at, "value: a text, number, truth value or list is due")
		}
		if given, has := with[in.Name]; has {
			w, valid := toCty(given)
			if !valid {
				return fault.New(fault.Input, "the value for input %q cannot be used", in.Name).In("read airframe", p.path).
					Of("with").Do("give a text, number, truth value or list")
			}
			if ok && sortOf(w) != sortOf(v) {
				return fault.New(fault.Input, "input %q is a %s (%s in the airframe file), and %s is a %s", in.Name, sortOf(v), shown(v), shown(w), sortOf(w)).
					In("read airframe", p.path).Of("with").Do("give it a %s", sortOf(v))
			}
			v, in.Overridden = w, true
		}
		if v.IsKnown() {
			in.Value = shown(v)
		}
		p.scope.inputs[in.Name] = v
		p.file.Inputs = append(p.file.Inputs, in)
	}
	var unknown []string
	for n := range with {
		if !contains(names, n) {
			unknown = append(unknown, n)
		}
	}
	if len(unknown) > 0 {
		sort.Strings(unknown)
		n := unknown[0]
		near := nearest.Name(n, names)
		f := fault.New(fault.Input, "the airframe file has no input %q", n).In("read airframe", p.path).Of("with")
		switch {
		case near != "":
			return f.Do("did you mean %q?", near)
		case len(names) > 0:
			return f.Do("it has the inputs%s", suggest(n, names)[len("; there are"):])
		}
		return f.Do(`declare it there: input "%s" { value = ... }`, n)
	}
	return nil
}
