// Package fault holds the one error type of the pipeline. It says what went
// wrong, where, and what to do; it crosses the process boundary whole, and
// tests match on its fields rather than on its wording.
package fault

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"strings"
)

// Kind sorts faults by who has to act. The list is append-only, since the
// values cross between processes of different versions.
type Kind string

const (
	// Input: a file or a value from the user is wrong; the user mends it.
	Input Kind = "input"
	// Missing: something named by the user does not exist.
	Missing Kind = "missing"
	// Numeric: the computation could not give a trustworthy answer.
	Numeric Kind = "numeric"
	// Limit: a declared limit of time, memory or size was reached.
	Limit Kind = "limit"
	// Cancelled: the user or the host stopped the work.
	Cancelled Kind = "cancelled"
	// Protocol: a process broke the contract of the boundary.
	Protocol Kind = "protocol"
	// Crash: a process ended without answering.
	Crash Kind = "crash"
	// Internal: a mistake of this program.
	Internal Kind = "internal"
)

// Error is a fault. Every field but Text may be empty.
type Error struct {
	Kind Kind `json:"kind"`
	// Op is the operation that failed, in the words of the user: "read cut file".
	Op string `json:"op,omitempty"`
	// Item is what it failed on: a file, part, column or frequency.
	Item string `json:"item,omitempty"`
	// Place is where within the item: "line 12", "byte 4096", "x 12.5 mm, y 3 mm".
	Place string `json:"place,omitempty"`
	// Argument names the argument of the stage that is to blame, so that the
	// host can add its file and line.
	Argument string `json:"argument,omitempty"`
	// Text says what is wrong, without a full stop.
	Text string `json:"text"`
	// Remedy says what to do about it.
	Remedy string `json:"remedy,omitempty"`
	// Cause is the fault below this one.
	Cause *Error `json:"cause,omitempty"`
	// Lines are the last lines a process printed, or a stack trace; they are
	// not part of the text.
	Lines []string `json:"lines,omitempty"`
}

// Error gives the fault on one line: operation, item, place, text, remedy.
func (e *Error) Error() string {
	var b strings.Builder
	for _, s := range []string{e.Op, e.Item, e.Place} {
		if s != "" {
			b.WriteString(s)
			b.WriteString(": ")
		}
	}
	b.WriteString(e.Text)
	if e.Cause != nil {
		b.WriteString(": ")
		b.WriteString(e.Cause.Error())
	}
	if e.Remedy != "" {
		b.WriteString("; ")
		b.WriteString(e.Remedy)
	}
	return b.String()
}

// Unwrap gives the cause, so that errors.As and errors.Is look below.
func (e *Error) Unwrap() error {
	if e.Cause == nil {
		return nil
	}
	return e.Cause
}

// Is reports a match on kind when the target has only a kind.
func (e *Error) Is(target error) bool {
	t, ok := target.(*Error)
	return ok && t.Kind == e.Kind && t.Text == "" && t.Op == "" && t.Item == ""
}

// New makes a fault of a kind with a formatted text.
func New(kind Kind, format string, args ...any) *Error {
	return &Error{Kind: kind, Text: fmt.Sprintf(format, args...)}
}

// In returns the fault with operation and item set.
func (e *Error) In(op, item string) *Error { c := *e; c.Op, c.Item = op, item; return &c }

// At returns the fault with its place within the item set.
func (e *Error) At(format string, args ...any) *Error {
	c := *e
	c.Place = fmt.Sprintf(format, args...)
	return &c
}

// Of returns the fault with the argument to blame set.
func (e *Error) Of(argument string) *Error { c := *e; c.Argument = argument; return &c }

// Do returns the fault with its remedy set.
func (e *Error) Do(format string, args ...any) *Error {
	c := *e
	c.Remedy = fmt.Sprintf(format, args...)
	return &c
}

// With returns the fault with the lines a process printed last.
func (e *Error) With(lines []string) *Error { c := *e; c.Lines = lines; return &c }

// From turns any error into a fault: a fault is kept whole, cancellation and
// missing files get their kinds, and anything else is Internal.
func From(err error) *Error {
	if err == nil {
		return nil
	}
	var f *Error
	if errors.As(err, &f) {
		return f
	}
	switch {
	case errors.Is(err, context.Canceled):
		return &Error{Kind: Cancelled, Text: "stopped on request"}
	case errors.Is(err, context.DeadlineExceeded):
		return &Error{Kind: Limit, Text: "the time limit was reached"}
	case errors.Is(err, fs.ErrNotExist):
		return &Error{Kind: Missing, Text: err.Error()}
	}
	return &Error{Kind: Internal, Text: err.Error()}
}

// KindOf gives the kind of an error, Internal when it is no fault.
func KindOf(err error) Kind {
	if err == nil {
		return ""
	}
	return From(err).Kind
}
