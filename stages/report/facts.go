package report

// facts is what the run says about itself.
type facts struct {
	Job, About  string
	Program     string // name and version
	Files       []sourceFile
	Settings    []setting
	Verdicts    []verdict
	Executables []executable
	Inputs      []inputFile
	Warnings    []warning
}

type sourceFile struct{ Path, Text string }

type setting struct{ Name, Value, Default, About string }

type verdict struct {
	Name, Because, Shown, Margin string
	Holds                        bool
}

type executable struct{ Name, Version, Hash string }

type inputFile struct{ Path, Hash string }

type warning struct{ Step, ID, Text, Remedy string }
