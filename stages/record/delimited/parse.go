package delimited

import (
	"bufio"
	"bytes"
	"cmp"
	"compress/gzip"
	"context"
	"errors"
	"fmt"
	"io"
	"math"

	"hushframe/core/signal/recording"
)

// parser turns lines into batches.
type parser struct {
	layout layout
	clock  clock
	// slot says, per field, where its value goes: skip, the clock, or a place in the batch.
	slot  []int
	last  int // last field that is wanted
	timed bool

	batch recording.Batch
	line  int64 // of the file, from 1
	row   int64 // from 1
	at    int64 // byte of the text at the beginning of the line

	hurt      int64 // rows of which something cannot be read
	firstHurt *recording.Error
}

const (
	skip    = -1
	forTime = -2
)

func newParser(l layout, request recording.Request) (*parser, error) {
	p := &parser{layout: l, clock: clock{unit: request.TimeUnit, point: l.point}, slot: make([]int, l.fields), last: -1}
	for j := range p.slot {
		p.slot[j] = skip
	}
	names := l.header().Names()
	for k, name := range request.Columns {
		j, err := find(names, name)
		if err != nil {
			return nil, err
		}
		if p.slot[j] != skip {
			return nil, &recording.Error{Column: name, Text: "the column is asked for twice", Remedy: "use a column once"}
		}
		p.slot[j] = k
		p.last = max(p.last, j)
	}
	if request.Time != "" {
		j, err := find(names, request.Time)
		if err != nil {
			return nil, err
		}
		if p.slot[j] != skip {
			return nil, &recording.Error{Column: request.Time, Text: "the column is both time and sample", Remedy: "use a column once"}
		}
		p.slot[j] = forTime
		if l.stamp[j] {
			p.clock.stamps = &stampClock{}
		}
		p.last = max(p.last, j)
		p.timed = true
		p.batch.Time = make([]float64, 0, batchRows)
	}
	p.batch.First = 1
	p.batch.Values = make([][]float64, len(request.Columns))
	for k := range p.batch.Values {
		p.batch.Values[k] = make([]float64, 0, batchRows)
	}
	return p, nil
}

// run reads all lines of the text.
func (p *parser) run(ctx context.Context, text *bufio.Reader, sink func(recording.Batch) error) error {
	for {
		line, err := text.ReadSlice('\n')
		if errors.Is(err, bufio.ErrBufferFull) {
			return &recording.Error{Line: p.line + 1, Text: fmt.Sprintf("the line is longer than %d bytes", len(line)),
				Remedy: "give a recording with one row per line"}
		}
		if errors.Is(err, io.ErrUnexpectedEOF) && p.row > 0 {
			p.batch.Findings = append(p.batch.Findings, recording.Finding{What: "cut off", Consequence: "what came after is lost",
				Extent: fmt.Sprintf("the compressed file ends in its middle, after row %d, byte %d of the text", p.row, p.at+int64(len(line)))})
			return nil
		}
		if errors.Is(err, gzip.ErrHeader) && p.row > 0 {
			p.batch.Findings = append(p.batch.Findings, recording.Finding{What: "bytes after the end", Consequence: "what they were meant to be is lost",
				Extent: fmt.Sprintf("the compressed text ends after byte %d, and bytes follow that are none", p.at+int64(len(line)))})
			err = io.EOF
		}
		if err != nil && !errors.Is(err, io.EOF) {
			return readError(err, p.at+int64(len(line)))
		}
		ended := err == nil
		if len(line) > 0 {
			p.line++
			if ended {
				line = line[:len(line)-1]
			}
			if p.line > int64(p.layout.first) && !skipped(line) {
				if failed := p.take(line, ended); failed != nil {
					return failed
				}
			}
			p.at += int64(len(line)) + 1
		}
		if !ended {
			return nil
		}
		if p.rows() == batchRows {
			if err := ctx.Err(); err != nil {
				return err
			}
			if err := p.flush(sink); err != nil {
				return err
			}
		}
	}
}

// rows returns the number of rows in the batch under way.
func (p *parser) rows() int { return int(p.row - p.batch.First + 1) }

// mendable is the share of rows of which something may be unreadable and is left out; with more, the file is not what it seems.
const mendable = 0.01

// take adds one line. A last line without its end that lacks fields was being written when the recorder stopped. What cannot be
// read of a row is left out, as a value that is no number, as long as that is rare.
func (p *parser) take(line []byte, ended bool) error {
	p.row++
	rest, more := trimEnd(line), true
	var wrong error
	for j := 0; j <= p.last; j++ {
		slot := p.slot[j]
		if !more {
			if !ended {
				p.drop()
				return nil
			}
			if wrong == nil {
				wrong = p.fault(j, "the row ends after field %d of %d", "complete or remove the row", j, p.layout.fields)
			}
			p.leaveOut(slot)
			continue
		}
		if slot >= 0 {
			if v, used, follows := quick(rest, p.layout.separator, p.layout.point); used > 0 {
				p.batch.Values[slot] = append(p.batch.Values[slot], v)
				rest, more = rest[used:], follows
				continue
			}
		}
		var field []byte
		field, rest, more = next(rest, p.layout.separator)
		if slot == skip {
			continue
		}
		if slot == forTime {
			if err := p.takeTime(j, field); err != nil {
				p.leaveOut(slot)
				wrong = cmp.Or(wrong, err)
			}
			continue
		}
		v, ok := parseFloat(field, p.layout.point)
		if !ok {
			if !missing(field) {
				wrong = cmp.Or(wrong, p.fault(j, "%s is not a number", "mend or remove the row; leave a field empty where there is no sample", show(field)))
			}
			v = math.NaN()
		}
		p.batch.Values[slot] = append(p.batch.Values[slot], v)
	}
	if wrong != nil {
		return p.note(wrong)
	}
	return nil
}

// leaveOut gives a row no value in that place.
func (p *parser) leaveOut(slot int) {
	switch slot {
	case skip:
	case forTime:
		p.batch.Time = append(p.batch.Time, math.NaN())
	default:
		p.batch.Values[slot] = append(p.batch.Values[slot], math.NaN())
	}
}

// note counts a row that is hurt; too many, and the first is the error.
func (p *parser) note(wrong error) error {
	const patience = 1000 // rows, before the share tells
	p.hurt++
	if p.firstHurt == nil {
		errors.As(wrong, &p.firstHurt)
	}
	if p.hurt > patience && float64(p.hurt) > mendable*float64(p.row) {
		return p.firstHurt
	}
	return nil
}

func (p *parser) takeTime(j int, field []byte) error {
	t, ok := p.clock.read(field)
	switch {
	case !ok && missing(field): // a row of another clock
		p.leaveOut(forTime)
		return nil
	case !ok:
		return p.fault(j, "the time %s is not a number", "mend or remove the row", show(field))
	}
	p.batch.Time = append(p.batch.Time, t)
	return nil
}

// drop takes the row under way back.
func (p *parser) drop() {
	p.row--
	n := p.rows()
	if len(p.batch.Time) > n {
		p.batch.Time = p.batch.Time[:n]
	}
	for k, v := range p.batch.Values {
		if len(v) > n {
			p.batch.Values[k] = v[:n]
		}
	}
	p.batch.Notes = append(p.batch.Notes, fmt.Sprintf("the last line (%d) ends in its middle and was left out", p.line))
}

func (p *parser) fault(field int, format, remedy string, args ...any) error {
	e := &recording.Error{Row: p.row, Line: p.line, Text: fmt.Sprintf(format, args...), Remedy: remedy}
	if field < len(p.layout.names) {
		e.Column = p.layout.names[field]
	}
	return e
}

// show quotes a field, the first characters of a long one.
func show(field []byte) string {
	const most = 40
	if len(field) > most {
		return fmt.Sprintf("%q…", bytes.ToValidUTF8(field[:most], []byte("?")))
	}
	return fmt.Sprintf("%q", bytes.ToValidUTF8(field, []byte("?")))
}

// flush hands the batch on and begins the next.
func (p *parser) flush(sink func(recording.Batch) error) error {
	p.batch.Origin = p.clock.origin * p.clock.unit
	if err := sink(p.batch); err != nil {
		return err
	}
	p.batch.First, p.batch.Notes, p.batch.Findings = p.row+1, nil, nil
	if p.timed {
		p.batch.Time = p.batch.Time[:0]
	}
	for k := range p.batch.Values {
		p.batch.Values[k] = p.batch.Values[k][:0]
	}
	return nil
}

// finish hands on what is left.
func (p *parser) finish(sink func(recording.Batch) error) error {
	if p.row == 0 {
		return &recording.Error{Text: "the recording has no rows of samples", Remedy: "give a recording with at least two rows"}
	}
	if float64(p.hurt) > mendable*float64(p.row) {
		return p.firstHurt
	}
	if p.hurt > 0 {
		p.batch.Findings = append(p.batch.Findings, recording.Finding{What: "rows", Where: p.firstHurt.Column, Consequence: "each is as if it had not been logged",
			Extent: fmt.Sprintf("something cannot be read in %d of %d rows and was left out, first in line %d: %s", p.hurt, p.row, p.firstHurt.Line, p.firstHurt.Text)})
	}
	if p.rows() > 0 || len(p.batch.Notes) > 0 || len(p.batch.Findings) > 0 {
		return p.flush(sink)
	}
	return nil
}
