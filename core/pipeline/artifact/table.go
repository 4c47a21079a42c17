package artifact

import (
	"fmt"
	"sort"
)

// Artifact is the content of one artifact in memory.
type Artifact struct {
	Kind    Kind
	Scalars map[string]any // float64, int64, string or bool
	Tables  map[string]*Table
	// Files are loose files by slash-separated relative path (a report page).
	Files map[string][]byte
}

// New makes an artifact of a kind with every table present and empty.
func New(kind Kind) *Artifact {
	a := &Artifact{Kind: kind, Scalars: map[string]any{}, Tables: map[string]*Table{}, Files: map[string][]byte{}}
	for _, spec := range kind.Tables {
		a.Tables[spec.Name] = &Table{Spec: spec, columns: map[string]any{}}
	}
	return a
}

// Table gives a table of the kind; it panics on an unknown name.
func (a *Artifact) Table(name string) *Table {
	t, ok := a.Tables[name]
	if !ok {
		panic(fmt.Sprintf("artifact: kind %s has no table %q", a.Kind.Name, name))
	}
	return t
}

// Float gives a scalar of type Float; it panics when absent or of another
// type, which Check excludes.
func (a *Artifact) Float(name string) float64 { return a.Scalars[name].(float64) }

// Int gives a scalar of type Int.
func (a *Artifact) Int(name string) int64 { return a.Scalars[name].(int64) }

// Text gives a scalar of type Text.
func (a *Artifact) Text(name string) string { return a.Scalars[name].(string) }

// Truth gives a scalar of type Truth.
func (a *Artifact) Truth(name string) bool { return a.Scalars[name].(bool) }

// Table is a set of columns of equal length, each a Go slice: []float64,
// []int64, []string, []bool, [][]float64, [][]int64 or [][]string. Slices
// given to Set and got from accessors are shared, not copied; an artifact that
// was read must not be changed.
type Table struct {
	Spec    TableSpec
	columns map[string]any
}

// Set stores a column; it panics if the spec has no such column or the slice
// has the wrong type, both mistakes of the program.
func (t *Table) Set(name string, slice any) *Table {
	c, ok := t.Spec.Column(name)
	if !ok {
		panic(fmt.Sprintf("artifact: table %s has no column %q", t.Spec.Name, name))
	}
	if got := typeOf(slice); got != c.Type {
		panic(fmt.Sprintf("artifact: column %s.%s is %s, not %s (%T)", t.Spec.Name, name, c.Type, got, slice))
	}
	t.columns[name] = slice
	return t
}

// Rows is the number of rows (0 when nothing is set).
func (t *Table) Rows() int {
	for _, c := range t.Spec.Columns {
		if s, ok := t.columns[c.Name]; ok {
			return lengthOf(s)
		}
	}
	return 0
}

// Floats gives a Float column.
func (t *Table) Floats(name string) []float64 { return column[[]float64](t, name) }

// Ints gives an Int column.
func (t *Table) Ints(name string) []int64 { return column[[]int64](t, name) }

// Texts gives a Text column.
func (t *Table) Texts(name string) []string { return column[[]string](t, name) }

// Truths gives a Truth column.
func (t *Table) Truths(name string) []bool { return column[[]bool](t, name) }

// FloatLists gives a FloatList column.
func (t *Table) FloatLists(name string) [][]float64 { return column[[][]float64](t, name) }

// IntLists gives an IntList column.
func (t *Table) IntLists(name string) [][]int64 { return column[[][]int64](t, name) }

// TextLists gives a TextList column.
func (t *Table) TextLists(name string) [][]string { return column[[][]string](t, name) }

func column[T any](t *Table, name string) T {
	s, ok := t.columns[name]
	if !ok {
		var none T
		if _, known := t.Spec.Column(name); !known {
			panic(fmt.Sprintf("artifact: table %s has no column %q", t.Spec.Name, name))
		}
		return none
	}
	v, ok := s.(T)
	if !ok {
		panic(fmt.Sprintf("artifact: column %s.%s holds %T", t.Spec.Name, name, s))
	}
	return v
}

// Check compares the content with its kind: every scalar and column present
// and of its type, columns of equal length, nothing unknown. The error names
// table and column.
func (a *Artifact) Check() error {
	seen := map[string]bool{}
	for _, s := range a.Kind.Scalars {
		seen[s.Name] = true
		v, ok := a.Scalars[s.Name]
		if !ok {
			return fmt.Errorf("%s: scalar %s is missing", a.Kind.Name, s.Name)
		}
		if got := scalarType(v); got != s.Type {
			return fmt.Errorf("%s: scalar %s is %T, not %s", a.Kind.Name, s.Name, v, s.Type)
		}
	}
	for _, n := range sortedKeys(a.Scalars) {
		if !seen[n] {
			return fmt.Errorf("%s: scalar %s is not part of the kind", a.Kind.Name, n)
		}
	}
	for _, n := range sortedKeys(a.Tables) {
		known := false
		for _, spec := range a.Kind.Tables {
			known = known || spec.Name == n
		}
		if !known {
			return fmt.Errorf("%s: table %s is not part of the kind", a.Kind.Name, n)
		}
	}
	for _, spec := range a.Kind.Tables {
		t, ok := a.Tables[spec.Name]
		if !ok {
			return fmt.Errorf("%s: table %s is missing", a.Kind.Name, spec.Name)
		}
		rows := t.Rows()
		for _, c := range spec.Columns {
			s, ok := t.columns[c.Name]
			if !ok {
				if rows == 0 {
					continue
				}
				return fmt.Errorf("%s: column %s.%s is missing", a.Kind.Name, spec.Name, c.Name)
			}
			if n := lengthOf(s); n != rows {
				return fmt.Errorf("%s: column %s.%s has %d rows, the table has %d", a.Kind.Name, spec.Name, c.Name, n, rows)
			}
		}
	}
	if a.Kind.Files == "" && len(a.Files) > 0 {
		return fmt.Errorf("%s: this kind carries no loose files", a.Kind.Name)
	}
	return nil
}

func typeOf(s any) ColumnType {
	switch s.(type) {
	case []float64:
		return Float
	case []int64:
		return Int
	case []string:
		return Text
	case []bool:
		return Truth
	case [][]float64:
		return FloatList
	case [][]int64:
		return IntList
	case [][]string:
		return TextList
	}
	return ""
}

func scalarType(v any) ColumnType {
	switch v.(type) {
	case float64:
		return Float
	case int64:
		return Int
	case string:
		return Text
	case bool:
		return Truth
	}
	return ""
}

func lengthOf(s any) int {
	switch x := s.(type) {
	case []float64:
		return len(x)
	case []int64:
		return len(x)
	case []string:
		return len(x)
	case []bool:
		return len(x)
	case [][]float64:
		return len(x)
	case [][]int64:
		return len(x)
	case [][]string:
		return len(x)
	}
	panic(fmt.Sprintf("artifact: %T is no column", s))
}

func sortedKeys[V any](m map[string]V) []string {
	keys := make([]string, 0, len(m))
	for k := range m {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	return keys
}
