// Package core is the house of Hushframe, in two wings that never import each
// other.
//
// The pipeline wing (core/pipeline) knows jobs, plans, runs and artifacts, and
// nothing of vibration:
//
//	quantity  text with units to SI and back
//	fault     the error type, which crosses processes whole
//	stage     the contract between the pipeline and one step
//	artifact  typed, content-addressed tables, and the store
//	job       HCL to a checked job
//	plan      the order of steps
//	run       driving a plan through an interface that plugins/host implements
//
// The kernel wing knows numbers and frames, and nothing of HCL, gRPC or files:
//
//	numeric    sparse storage, ordering, factors, block Lanczos
//	mechanics  outline, airframe, laminate, fastener, mesh, element, assembly, modal, forced, direct, rotor, counterpart
//	signal     windows, spectra, orders, recordings, strikes of a hammer
//	match      pairing of predicted and observed, modal assurance, levels in bands
//	known      problems with known answers, for tests
//
// core/extension joins the two: the contracts of element types and recording
// readers from outside, with the tables that cross between processes.
//
// Stages stand between: artifacts in, kernels called, artifacts out. One job,
// followed from file to report, is told in DEVELOPERS.md.
package core
