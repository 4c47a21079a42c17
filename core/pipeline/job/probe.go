package job

import (
	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"
)

// probe finds mistakes inside for expressions over lists that are not known
// yet: HCL does not look into their bodies until there are elements. Each body is
// evaluated once with an unknown element of the declared type.
func probe(expr hclsyntax.Expression, ctx *hcl.EvalContext) hcl.Diagnostics {
	p := &prober{contexts: []*hcl.EvalContext{ctx}}
	_ = hclsyntax.Walk(expr, p)
	return p.diags
}

type prober struct {
	contexts []*hcl.EvalContext // innermost last
	loops    []loop             // open for expressions, innermost last
	caught   int                // depth of try and can, which take mistakes
	diags    hcl.Diagnostics
}

// loop is one for expression: the context of its body, nil when nothing is
// known of its elements, and whether HCL has left the body out.
type loop struct {
	body    *hcl.EvalContext
	skipped bool
}

func (p *prober) Enter(n hclsyntax.Node) hcl.Diagnostics {
	switch x := n.(type) {
	case *hclsyntax.FunctionCallExpr:
		if x.Name == "try" || x.Name == "can" {
			p.caught++
		}
	case *hclsyntax.ForExpr:
		p.loops = append(p.loops, p.open(x))
	case hclsyntax.ChildScope:
		l := p.loops[len(p.loops)-1]
		p.contexts = append(p.contexts, l.body)
		if l.body != nil && l.skipped && p.caught == 0 {
			_, diags := x.Expr.Value(l.body)
			p.diags = append(p.diags, Explain(diags)...)
		}
	}
	return nil
}

func (p *prober) Exit(n hclsyntax.Node) hcl.Diagnostics {
	switch x := n.(type) {
	case *hclsyntax.FunctionCallExpr:
		if x.Name == "try" || x.Name == "can" {
			p.caught--
		}
	case *hclsyntax.ForExpr:
		p.loops = p.loops[:len(p.loops)-1]
	case hclsyntax.ChildScope:
		p.contexts = p.contexts[:len(p.contexts)-1]
	}
	return nil
}

func (p *prober) open(x *hclsyntax.ForExpr) loop {
	ctx := p.contexts[len(p.contexts)-1]
	if ctx == nil {
		return loop{}
	}
	v, diags := x.CollExpr.Value(ctx)
	t := v.Type()
	if diags.HasErrors() || v.IsNull() || t == cty.DynamicPseudoType {
		return loop{}
	}
	key := cty.UnknownVal(cty.String)
	var element cty.Value
	if t.IsListType() || t.IsTupleType() {
		key = cty.UnknownVal(cty.Number)
	}
	switch {
	case t.IsListType() || t.IsSetType() || t.IsMapType():
		element = cty.UnknownVal(t.ElementType())
	case v.IsKnown() && v.CanIterateElements() && v.LengthInt() > 0:
		it := v.ElementIterator()
		it.Next()
		key, element = it.Element()
	default:
		return loop{}
	}
	body := ctx.NewChild()
	body.Variables = map[string]cty.Value{x.ValVar: element}
	if x.KeyVar != "" {
		body.Variables[x.KeyVar] = key
	}
	return loop{body, !v.IsKnown()}
}
