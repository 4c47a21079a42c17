package extension

import (
	"context"
	"fmt"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
	"hushframe/core/pipeline/stage"
)

// FindReader gives the reader of that name: one of builtin, or one from outside that the step can reach.
func FindReader(ctx context.Context, name string, builtin []Reader, call *stage.Call) (Reader, error) {
	return find(ctx, ReaderKind, name, builtin, call, func(about stage.Extension) Reader {
		return RemoteReader(about, func(ctx context.Context, r stage.ExtensionRequest) error { return call.Services.Reader(ctx, name, r) }, call.Scratch)
	})
}

// FindElement does the same for an element type.
func FindElement(ctx context.Context, name string, builtin []Element, call *stage.Call) (Element, error) {
	return find(ctx, ElementKind, name, builtin, call, func(about stage.Extension) Element {
		return RemoteElement(about, func(ctx context.Context, r stage.ExtensionRequest) error { return call.Services.Element(ctx, name, r) }, call.Scratch)
	})
}

func find[T interface{ Describe() stage.Extension }](ctx context.Context, kind, name string, builtin []T, call *stage.Call, remote func(stage.Extension) T) (T, error) {
	var none T
	var known []string
	for _, x := range builtin {
		if x.Describe().Name == name {
			return x, nil
		}
		known = append(known, x.Describe().Name)
	}
	all, err := call.Services.Extensions(ctx)
	if err != nil {
		return none, err
	}
	for _, x := range all {
		if x.Kind != kind {
			continue
		}
		if x.Name == name {
			return remote(x), nil
		}
		known = append(known, x.Name)
	}
	f := fault.New(fault.Missing, "there is no %s %q", words[kind], name)
	if near := nearest.Name(name, known); near != "" {
		return none, f.Do("did you mean %q?", near)
	}
	for i := range known {
		known[i] = fmt.Sprintf("%q", known[i])
	}
	return none, f.Do("there are %s; one from outside has to be pinned for the job", strings.Join(known, ", "))
}

// words are what messages call the kinds.
var words = map[string]string{ElementKind: "element type", ReaderKind: "reader"}
