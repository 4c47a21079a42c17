// Package host starts, watches and stops the processes that run stages,
// element types and recording readers, and offers them as plain Go values: a
// stage from here implements stage.Stage and cannot be told from one in
// process.
//
// One process runs per executable and stage kind; it starts with the first
// call and serves several at once. It is killed, with all it started, when it
// does not end a cancelled call within the grace, does not answer at all, or
// outlives the host. Every failure is a fault that names the stage and carries
// the last lines the process printed.
package host
