package main

import (
	"testing"

	"hushframe/core/pipeline/stage"
	"hushframe/plugins/plugintest"
)

func TestElement(t *testing.T) {
	plugintest.Element(t, Wedge{}, nil, stage.Arguments{"layers": 1.0}, stage.Arguments{"layers": 3.0})
}

func TestElementProcess(t *testing.T) {
	plugintest.Element(t, plugintest.ElementProcess(t, ".", "solid-wedge"), nil, stage.Arguments{"layers": 1.0})
}
