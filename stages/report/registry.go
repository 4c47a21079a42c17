package report

import (
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/run/account"
	"hushframe/stages/kinds"
)

// registry knows every kind that a report reads, the account of the run among
// them.
func registry() artifact.Registry {
	r := kinds.Registry()
	r[account.KindName] = account.Kind
	return r
}
