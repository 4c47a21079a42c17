package job

import (
	"hushframe/core/pipeline/stage"
)

// choices lists the texts an argument may be: its own and the names of extensions of its kind. Empty means any.
func (s *scope) choices(a stage.Argument) []string {
	if a.Extension == "" || len(a.Choices) == 0 {
		return a.Choices
	}
	all := append([]string(nil), a.Choices...)
	for _, x := range s.extensions {
		if x.Kind == a.Extension {
			all = append(all, x.Name)
		}
	}
	return all
}

// optionsOf gives an argument that holds the options of another's choice the type of those options, and says
// whether the choice has any that are known.
func (s *Stage) optionsOf(a stage.Argument, arguments stage.Arguments) (stage.Argument, bool) {
	chosen, ok := arguments[a.OptionsOf].(string)
	if !ok {
		return a, false
	}
	if fields, ok := a.Variants[chosen]; ok {
		a.Type = stage.Type{Kind: stage.Object, Fields: fields}
		return a, true
	}
	for _, of := range s.Description.Arguments {
		for _, x := range s.scope.extensions {
			if of.Name == a.OptionsOf && x.Kind == of.Extension && x.Name == chosen {
				a.Type = stage.Type{Kind: stage.Object, Fields: x.Arguments}
				return a, true
			}
		}
	}
	return a, false
}

// CheckExtension finds mistakes in what an element type or reader says about itself.
func CheckExtension(x stage.Extension) error {
	for _, a := range x.Arguments {
		if takesArtifacts(a.Type) || a.OptionsOf != "" || a.Extension != "" {
			return wrongDescription("the option %s of %s is neither text, number, quantity nor a list of them", a.Name, x.Name)
		}
	}
	return checkDescription(stage.Description{Arguments: x.Arguments}, nil)
}
