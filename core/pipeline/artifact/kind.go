// Package artifact holds what stages hand on: typed, immutable folders of
// tables. An artifact is a folder with artifact.json (kind, version, scalars,
// content hashes) and one Apache Arrow IPC file per table, so that any
// language with Arrow can read and write it. Its content hash covers kind,
// version, scalars and every table, and nothing of time, place or host.
//
// A Kind states the tables, columns and units; it is checked on write and on
// read. The package knows no kind by name: those of the product are in
// stages/kinds.
package artifact

import (
	"fmt"
	"sort"
)

// ColumnType is the type of one column.
type ColumnType string

const (
	Float     ColumnType = "float"      // float64; NaN means not available
	Int       ColumnType = "int"        // int64
	Text      ColumnType = "text"       // UTF-8
	Truth     ColumnType = "truth"      // bool
	FloatList ColumnType = "float list" // list of float64, lengths may differ
	IntList   ColumnType = "int list"   // list of int64
	TextList  ColumnType = "text list"  // list of UTF-8
)

// Kind is a kind of artifact: its tables, columns, units.
type Kind struct {
	Name    string
	Version int
	About   string
	Scalars []Column // of type Float, Int, Text or Truth
	Tables  []TableSpec
	// Files says what loose files an artifact of this kind may carry; empty
	// means none.
	Files string
}

// TableSpec describes one table.
type TableSpec struct {
	Name    string
	About   string
	Columns []Column
}

// Column describes one column or scalar. Unit is in SI symbols ("m", "rad",
// "(rad/s)^2/Hz"), "1" for pure numbers, "" for texts and indices.
type Column struct {
	Name  string
	Type  ColumnType
	Unit  string
	About string
}

// Registry finds kinds by name.
type Registry map[string]Kind

// NewRegistry panics on two kinds of one name, a mistake of the program.
func NewRegistry(kinds ...Kind) Registry {
	r := Registry{}
	for _, k := range kinds {
		if _, dup := r[k.Name]; dup {
			panic("artifact: two kinds are called " + k.Name)
		}
		r[k.Name] = k
	}
	return r
}

// Names lists the kinds, sorted.
func (r Registry) Names() []string {
	names := make([]string, 0, len(r))
	for n := range r {
		names = append(names, n)
	}
	sort.Strings(names)
	return names
}

// Table finds the spec of a table; it panics if there is none, since callers
// name tables of a kind they hold.
func (k Kind) Table(name string) TableSpec {
	for _, t := range k.Tables {
		if t.Name == name {
			return t
		}
	}
	panic(fmt.Sprintf("artifact: kind %s has no table %q", k.Name, name))
}

// Column finds the spec of a column.
func (t TableSpec) Column(name string) (Column, bool) {
	for _, c := range t.Columns {
		if c.Name == name {
			return c, true
		}
	}
	return Column{}, false
}
