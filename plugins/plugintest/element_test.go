package plugintest

import (
	"testing"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element/shell"
)

// The built-in element types pass the suite that authors run.
func TestBuiltinElements(t *testing.T) {
	for _, kind := range shell.Types() {
		t.Run(kind.Describe().Name, func(t *testing.T) { Element(t, extension.FromType(kind)) })
	}
}
