package main

import (
	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/job"
)

const unwatchedText = "memory is not watched on this system: a step is told its share and keeps to it as well as it can, but none is ended for using more"

// unwatched warns of limits that a job sets and nobody holds a process to.
func (a *app) unwatched(j *job.Job) (diags hcl.Diagnostics) {
	if a.watchesMemory {
		return nil
	}
	for _, st := range j.Stages {
		if st.MemoryLimit > 0 {
			diags = append(diags, &hcl.Diagnostic{Severity: hcl.DiagWarning, Summary: "Limit not watched",
				Detail: "memory_limit: " + unwatchedText, Subject: st.Range.Ptr()})
		}
	}
	return diags
}
