package plugintest

import (
	"context"
	"errors"
	"fmt"
	"slices"

	"hushframe/core/pipeline/fault"
	"hushframe/core/signal/recording"
)

// checkOptions tries other values of each option on the recording, on a part of it and on one with a hurt byte.
func (c *readerCase) checkOptions(heeds map[string]*heeded) {
	n := len(c.Data)
	hurt := slices.Clone(c.Data)
	hurt[n/2] ^= 1
	all := func() (string, error) {
		text := ""
		for _, data := range [][]byte{c.Data, c.Data[:2*n/3], hurt} {
			got, err := c.told(data)
			if err != nil {
				return "", err
			}
			text += got
		}
		return text, nil
	}
	usual, err := all()
	if err != nil {
		return // has been said
	}
	known, given := map[string]bool{}, c.Options
	for _, a := range c.reader.Describe().Arguments {
		known[a.Name] = true
		if heeds[a.Name] == nil {
			heeds[a.Name] = &heeded{}
		}
		var values []any
		for _, v := range c.Vary[a.Name] {
			values = append(values, plain(v))
		}
		values = append(values, others(a, a.Type, given[a.Name])...)
		reason, declared := c.Inert[a.Name]
		heeds[a.Name].heed("option", a, reason, declared, values, func(v any) (string, error) {
			c.Options = with(given, a.Name, v)
			defer func() { c.Options = given }()
			return all()
		}, usual, c.bad)
	}
	for _, n := range append(sortedKeys(c.Vary), sortedKeys(c.Inert)...) {
		if !known[n] {
			c.bad("Vary or Inert names the option %q, which is not there", n)
		}
	}
}

// told is all that the reader says of some bytes, also what is wrong with them.
func (c *readerCase) told(data []byte) (string, error) {
	source, done, err := c.source(data)
	if err != nil {
		return "", err
	}
	h, err := c.inspect(source)
	done()
	if err == nil {
		var s *samples
		var columns []string
		for _, col := range h.Columns {
			if !col.Text && col.Name != c.Time {
				columns = append(columns, col.Name)
			}
		}
		if source, done, err = c.source(data); err != nil {
			return "", err
		}
		s, err = c.read(context.Background(), source, columns)
		done()
		if err == nil {
			return fmt.Sprint(h, s.time, s.values, s.notes, s.told), nil
		}
	}
	var about *recording.Error
	var f *fault.Error
	if errors.As(err, &about) || errors.As(err, &f) && refusal(err) && f.Argument == "" { // about the recording
		return err.Error(), nil
	}
	return "", err
}
