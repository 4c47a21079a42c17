package main

import (
	"encoding/json"
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

func (a *app) stagesCommand() *cobra.Command {
	var asJSON bool
	var of string
	c := &cobra.Command{
		Use:   "stages [STAGE]",
		Short: "List the stages that are installed, or explain one",
		Long: `Lists the stages a job may use. With the name of one, explains its arguments, outputs and figures.
With --job also those of the extensions pinned for that job, and what its element types and readers take.`,
		Args: wants(0, 1, "one stage at most is wanted"),
		ValidArgsFunction: func(c *cobra.Command, args []string, _ string) ([]string, cobra.ShellCompDirective) {
			var names []string
			if len(args) == 0 {
				for _, s := range a.builtin {
					names = append(names, s.Describe().Name)
				}
			}
			return names, cobra.ShellCompDirectiveNoFileComp
		},
	}
	c.Flags().BoolVar(&asJSON, "json", false, "write the descriptions as JSON")
	c.Flags().StringVar(&of, "job", "", "with the extensions that this job may use")
	c.RunE = func(c *cobra.Command, args []string) error {
		folder := ""
		if of != "" {
			var err error
			if folder, err = jobFolder(of); err != nil {
				return err
			}
		}
		h, err := a.openHost(c.Context(), folder)
		if err != nil {
			return err
		}
		defer h.Close()
		list := h.Descriptions()
		if len(args) == 1 {
			for _, x := range h.Extensions() {
				if x.Name == args[0] {
					a.explainTool(x)
					return nil
				}
			}
			s, ok := h.Stage(args[0])
			if !ok {
				return fault.New(fault.Missing, "there is no stage %q%s", args[0], suggest(args[0], a.stageNames(h)))
			}
			list = []stage.Description{s.Describe()}
		}
		if asJSON {
			e := json.NewEncoder(a.out)
			e.SetIndent("", "  ")
			return e.Encode(list)
		}
		if len(args) == 1 {
			a.explain(list[0])
			return nil
		}
		section := stage.Section{Title: "Stages", Columns: []stage.Column{{Name: "stage"}, {Name: "what it does"}}}
		for _, d := range list {
			section.Rows = append(section.Rows, []string{d.Name, d.About})
		}
		writeSection(a.out, section)
		if tools := h.Extensions(); len(tools) > 0 {
			section = stage.Section{Title: "Extensions", Columns: []stage.Column{{Name: "kind"}, {Name: "name"}, {Name: "what it does"}}}
			for _, x := range tools {
				section.Rows = append(section.Rows, []string{x.Kind, x.Name, x.About})
			}
			writeSection(a.out, section)
		}
		fmt.Fprintf(a.out, "\nhushframe stages STAGE explains one.\n")
		return nil
	}
	return c
}

// explain writes all that a stage says about itself.
func (a *app) explain(d stage.Description) {
	fmt.Fprintf(a.out, "\n%s: %s\n", d.Name, harmless(d.About))
	if d.Doc != "" {
		fmt.Fprintf(a.out, "\n%s\n", harmless(strings.TrimSpace(d.Doc)))
	}
	arguments := stage.Section{Title: "Arguments", Columns: []stage.Column{{Name: "argument"}, {Name: "takes"}, {Name: "default"}, {Name: ""}}}
	addArguments(&arguments, "", d.Arguments)
	writeSection(a.out, arguments)
	if len(d.Outputs) > 0 {
		outputs := stage.Section{Title: "Outputs", Columns: []stage.Column{{Name: "output"}, {Name: "artifact"}, {Name: ""}}}
		for _, o := range d.Outputs {
			outputs.Rows = append(outputs.Rows, []string{o.Name, o.Kind, o.About})
		}
		writeSection(a.out, outputs)
	}
	if len(d.Figures) > 0 {
		figures := stage.Section{Title: "Figures", Columns: []stage.Column{{Name: "figure"}, {Name: "is"}, {Name: ""}}}
		for _, f := range d.Figures {
			figures.Rows = append(figures.Rows, []string{f.Name, typeText(f.Type), f.About})
		}
		writeSection(a.out, figures)
	}
}

// explainTool writes all that an element type or reader says about itself.
func (a *app) explainTool(x stage.Extension) {
	fmt.Fprintf(a.out, "\n%s: %s (%s from outside)\n", x.Name, harmless(x.About), x.Kind)
	if len(x.Arguments) == 0 {
		fmt.Fprintf(a.out, "\nIt has no options.\n")
		return
	}
	options := stage.Section{Title: "Options", Columns: []stage.Column{{Name: "option"}, {Name: "takes"}, {Name: "default"}, {Name: ""}}}
	addArguments(&options, "", x.Arguments)
	writeSection(a.out, options)
}

func addArguments(s *stage.Section, prefix string, list []stage.Argument) {
	for _, x := range list {
		s.Rows = append(s.Rows, []string{prefix + x.Name, takes(x), defaultText(x), x.About})
		if x.Type.Kind == stage.Object {
			addArguments(s, prefix+x.Name+".", x.Type.Fields)
		}
		if x.Type.Element != nil && x.Type.Element.Kind == stage.Object {
			addArguments(s, prefix+x.Name+"[].", x.Type.Element.Fields)
		}
		for _, choice := range slices.Sorted(maps.Keys(x.Variants)) {
			for _, o := range x.Variants[choice] {
				s.Rows = append(s.Rows, []string{prefix + x.Name + "." + o.Name, takes(o), defaultText(o), "of " + choice + ": " + o.About})
			}
		}
	}
}

// takes says what an argument accepts: type, choices, range.
func takes(x stage.Argument) string {
	words := typeText(x.Type)
	if len(x.Choices) > 0 {
		words = strings.Join(x.Choices, ", ")
		if x.Extension != "" {
			words += ", or one from outside"
		}
	}
	show := func(v float64) string {
		if x.Type.Kind == stage.Amount {
			return quantity.Format(v, x.Type.Dimension, x.Type.Unit)
		}
		return fmt.Sprint(v)
	}
	if x.Above != nil {
		words += ", above " + show(*x.Above)
	}
	if x.Min != nil {
		words += ", from " + show(*x.Min)
	}
	if x.Max != nil {
		words += ", up to " + show(*x.Max)
	}
	return words
}

// defaultText says what an argument is when it is left out, or else what it
// may look like.
func defaultText(x stage.Argument) string {
	if !x.Required && x.Default != nil {
		return jobText(x.Default, x.Type)
	}
	var parts []string
	if x.Required {
		parts = append(parts, "required")
	}
	if x.Example != "" {
		parts = append(parts, "such as "+x.Example)
	}
	return strings.Join(parts, ", ")
}

// jobText writes a value of a type as a job file would.
func jobText(v any, t stage.Type) string {
	element := stage.Type{}
	if t.Element != nil {
		element = *t.Element
	}
	switch v := v.(type) {
	case stage.Quantity:
		return strconv.Quote(quantity.Format(v.SI, v.Dimension, t.Unit))
	case string:
		return strconv.Quote(v)
	case []any:
		parts := make([]string, len(v))
		for i, x := range v {
			parts[i] = jobText(x, element)
		}
		return "[" + strings.Join(parts, ", ") + "]"
	case map[string]any:
		if len(v) == 0 {
			return "{}"
		}
		var parts []string
		for _, name := range slices.Sorted(maps.Keys(v)) {
			of := element
			for _, f := range t.Fields {
				if f.Name == name {
					of = f.Type
				}
			}
			parts = append(parts, name+" = "+jobText(v[name], of))
		}
		return "{ " + strings.Join(parts, ", ") + " }"
	}
	return fmt.Sprint(v)
}

// typeText says in a word or two what a type is.
func typeText(t stage.Type) string {
	switch t.Kind {
	case stage.Amount:
		return t.Dimension
	case stage.Whole:
		return "whole number"
	case stage.Truth:
		return "true or false"
	case stage.File:
		return "file"
	case stage.Target:
		return "path to write"
	case stage.Artifact:
		return "artifact " + strings.Join(t.Kinds, " or ")
	case stage.List:
		if t.Element != nil {
			return "list of " + typeText(*t.Element)
		}
	case stage.Map:
		if t.Element != nil {
			return "map to " + typeText(*t.Element)
		}
	case stage.Any:
		return "any value"
	}
	return string(t.Kind)
}
