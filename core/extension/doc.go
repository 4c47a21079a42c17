// Package extension holds the contracts of what comes from outside besides whole stages: element types and
// recording readers. Stages have theirs in core/pipeline/stage.
//
// An author implements Element or Reader and hands the value to plugins/serve; a stage calls the same
// interface, whether the value lives in its own process (FromType, FromReader) or in another one
// (RemoteElement, RemoteReader). Between processes a call is one stage.ExtensionRequest, and its bulk lies in
// folders with artifact.json and one Apache Arrow file per table, of the kinds in Kinds.
//
//	kind     method    in                 out
//	element  shape     -                  element-shape
//	element  matrices  element-batch      element-matrices
//	element  energies  element-motions    element-energies
//	reader   inspect   the recording      recording-header
//	reader   read      the recording      recording-samples
//
// The package stands between the two wings of core: it joins kernels and pipeline, and neither imports it.
package extension
