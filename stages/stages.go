// Package stages lists the stages that come with Hushframe.
package stages

import (
	"hushframe/core/pipeline/stage"
	"hushframe/stages/compare"
	"hushframe/stages/contrast"
	"hushframe/stages/filter"
	"hushframe/stages/identify"
	"hushframe/stages/importgeom"
	"hushframe/stages/meshgen"
	"hushframe/stages/record"
	"hushframe/stages/report"
	"hushframe/stages/solve"
	"hushframe/stages/sweep"
	"hushframe/stages/transfer"
	"hushframe/stages/verify"
)

// Builtin lists the built-in stages in the order of a job.
func Builtin() []stage.Stage {
	return []stage.Stage{
		importgeom.Stage{},
		meshgen.Stage{},
		solve.Stage{},
		sweep.Stage{},
		record.Stage{},
		identify.Stage{},
		transfer.Stage{},
		compare.Stage{},
		contrast.Stage{},
		filter.Stage{},
		verify.Stage{},
		report.Stage{},
	}
}
