package artifact

import (
	"bytes"
	"fmt"
	"math"
	"unicode/utf8"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"
)

// unitKey is the key of the unit in the metadata of an Arrow field.
const unitKey = "unit"

// EncodeTable gives the Arrow IPC file of a table: one record batch, columns
// in the order of the spec, units in the field metadata, no nulls, no
// compression. Equal tables give equal bytes. It fails when a text or list
// column is too long for 32-bit offsets.
func EncodeTable(t *Table) ([]byte, error) {
	fields := make([]arrow.Field, len(t.Spec.Columns))
	columns := make([]arrow.Array, len(t.Spec.Columns))
	for i, c := range t.Spec.Columns {
		fields[i] = arrow.Field{Name: c.Name, Type: arrowType(c.Type)}
		if c.Unit != "" {
			fields[i].Metadata = arrow.NewMetadata([]string{unitKey}, []string{c.Unit})
		}
		col, err := encodeColumn(c.Type, t.columns[c.Name])
		if err != nil {
			return nil, fmt.Errorf("column %s.%s: %w", t.Spec.Name, c.Name, err)
		}
		columns[i] = col
	}
	schema := arrow.NewSchema(fields, nil)
	batch := array.NewRecordBatch(schema, columns, int64(t.Rows()))
	var out bytes.Buffer
	w, err := ipc.NewFileWriter(&out, ipc.WithSchema(schema))
	if err != nil {
		return nil, err
	}
	if err := w.Write(batch); err != nil {
		return nil, err
	}
	if err := w.Close(); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}

// DecodeTable reads an Arrow IPC file against a spec. The data may come from
// anywhere: wrong types, missing columns, nulls, other units, invalid UTF-8
// and damaged bytes are errors. The table shares memory with data.
func DecodeTable(spec TableSpec, data []byte) (*Table, error) {
	t, _, err := decodeTable(spec, data, true)
	return t, err
}

// decodeTable leaves out columns that the spec does not know, unless exact; more tells that there are some.
func decodeTable(spec TableSpec, data []byte, exact bool) (t *Table, more bool, err error) {
	// Damaged metadata makes the flatbuffer and array code panic on bounds.
	defer func() {
		if r := recover(); r != nil {
			t, err = nil, fmt.Errorf("damaged Arrow data (%v)", r)
		}
	}()
	if err := guard(data); err != nil {
		return nil, false, err
	}
	r, err := ipc.NewMappedFileReader(data)
	if err != nil {
		return nil, false, fmt.Errorf("no readable Arrow file (%v)", err)
	}
	defer r.Close()
	if err := matchSchema(spec, r.Schema(), exact); err != nil {
		return nil, false, err
	}
	t = &Table{Spec: spec, columns: map[string]any{}}
	for _, c := range spec.Columns {
		t.columns[c.Name] = emptyColumn(c.Type)
	}
	for i := range r.NumRecords() {
		batch, err := r.RecordBatchAt(i)
		if err != nil {
			return nil, false, fmt.Errorf("damaged Arrow data (%v)", err)
		}
		for j, f := range r.Schema().Fields() {
			c, known := spec.Column(f.Name)
			if !known {
				more = true
				continue
			}
			if err := decodeColumn(t, c, batch.Column(j)); err != nil {
				return nil, false, fmt.Errorf("column %s.%s: %w", spec.Name, c.Name, err)
			}
		}
	}
	return t, more, nil
}

func matchSchema(spec TableSpec, schema *arrow.Schema, exact bool) error {
	for _, f := range schema.Fields() {
		c, ok := spec.Column(f.Name)
		if !ok && !exact {
			continue
		}
		if !ok {
			return fmt.Errorf("column %s.%s is not part of the kind", spec.Name, f.Name)
		}
		// Compared by shape, since writers name and flag list items differently.
		if !sameType(f.Type, arrowType(c.Type)) {
			return fmt.Errorf("column %s.%s is %s in the file, where the kind wants %s", spec.Name, c.Name, f.Type, c.Type)
		}
		unit, _ := f.Metadata.GetValue(unitKey)
		if unit != c.Unit {
			return fmt.Errorf("column %s.%s has the unit %q in the file, where the kind wants %q", spec.Name, c.Name, unit, c.Unit)
		}
	}
	for _, c := range spec.Columns {
		switch len(schema.FieldIndices(c.Name)) {
		case 0:
			return fmt.Errorf("column %s.%s is missing", spec.Name, c.Name)
		case 1:
		default:
			return fmt.Errorf("column %s.%s is there twice", spec.Name, c.Name)
		}
	}
	return nil
}

func sameType(a, b arrow.DataType) bool {
	if a.ID() != b.ID() {
		return false
	}
	la, ok := a.(*arrow.ListType)
	if !ok {
		return true
	}
	return la.Elem().ID() == b.(*arrow.ListType).Elem().ID()
}

func arrowType(t ColumnType) arrow.DataType {
	switch t {
	case Float:
		return arrow.PrimitiveTypes.Float64
	case Int:
		return arrow.PrimitiveTypes.Int64
	case Text:
		return arrow.BinaryTypes.String
	case Truth:
		return arrow.FixedWidthTypes.Boolean
	case FloatList:
		return arrow.ListOfNonNullable(arrow.PrimitiveTypes.Float64)
	case IntList:
		return arrow.ListOfNonNullable(arrow.PrimitiveTypes.Int64)
	case TextList:
		return arrow.ListOfNonNullable(arrow.BinaryTypes.String)
	}
	panic(fmt.Sprintf("artifact: %q is no column type", t))
}

func emptyColumn(t ColumnType) any {
	switch t {
	case Float:
		return []float64(nil)
	case Int:
		return []int64(nil)
	case Text:
		return []string(nil)
	case Truth:
		return []bool(nil)
	case FloatList:
		return [][]float64(nil)
	case IntList:
		return [][]int64(nil)
	case TextList:
		return [][]string(nil)
	}
	panic(fmt.Sprintf("artifact: %q is no column type", t))
}

func encodeColumn(t ColumnType, slice any) (arrow.Array, error) {
	if slice == nil {
		slice = emptyColumn(t)
	}
	switch s := slice.(type) {
	case []float64:
		return floatArray(s), nil
	case []int64:
		return intArray(s), nil
	case []string:
		return textArray(s)
	case []bool:
		b := array.NewBooleanBuilder(memory.DefaultAllocator)
		b.AppendValues(s, nil)
		return b.NewArray(), nil
	case [][]float64:
		return listArray(s, func(flat []float64) (arrow.Array, error) { return floatArray(flat), nil })
	case [][]int64:
		return listArray(s, func(flat []int64) (arrow.Array, error) { return intArray(flat), nil })
	case [][]string:
		return listArray(s, textArray)
	}
	panic(fmt.Sprintf("artifact: %T is no column", slice))
}

func floatArray(s []float64) arrow.Array {
	return fixedArray(arrow.PrimitiveTypes.Float64, len(s), arrow.Float64Traits.CastToBytes(s))
}

func intArray(s []int64) arrow.Array {
	return fixedArray(arrow.PrimitiveTypes.Int64, len(s), arrow.Int64Traits.CastToBytes(s))
}

func fixedArray(t arrow.DataType, rows int, values []byte) arrow.Array {
	data := array.NewData(t, rows, []*memory.Buffer{nil, memory.NewBufferBytes(values)}, nil, 0, 0)
	return array.MakeFromData(data)
}

func textArray(s []string) (arrow.Array, error) {
	size := 0
	for i, x := range s {
		if !utf8.ValidString(x) {
			return nil, fmt.Errorf("row %d is not UTF-8 text", i)
		}
		size += len(x)
	}
	if size > math.MaxInt32 {
		return nil, fmt.Errorf("%d bytes of text are more than a column can hold", size)
	}
	b := array.NewStringBuilder(memory.DefaultAllocator)
	b.Reserve(len(s))
	b.ReserveData(size)
	b.AppendValues(s, nil)
	return b.NewArray(), nil
}

func listArray[T any](rows [][]T, values func([]T) (arrow.Array, error)) (arrow.Array, error) {
	offsets := make([]int32, len(rows)+1)
	total := 0
	for i, r := range rows {
		total += len(r)
		if total > math.MaxInt32 {
			return nil, fmt.Errorf("%d list entries are more than a column can hold", total)
		}
		offsets[i+1] = int32(total)
	}
	flat := make([]T, 0, total)
	for _, r := range rows {
		flat = append(flat, r...)
	}
	child, err := values(flat)
	if err != nil {
		return nil, err
	}
	data := array.NewData(arrow.ListOfNonNullable(child.DataType()), len(rows),
		[]*memory.Buffer{nil, memory.NewBufferBytes(arrow.Int32Traits.CastToBytes(offsets))},
		[]arrow.ArrayData{child.Data()}, 0, 0)
	return array.MakeFromData(data), nil
}

// decodeColumn appends the values of one batch; the usual single batch is
// shared, not copied.
func decodeColumn(t *Table, c Column, a arrow.Array) error {
	if a.NullN() != 0 {
		return fmt.Errorf("%d rows are null; a value that is not available is NaN or an empty text", a.NullN())
	}
	switch x := a.(type) {
	case *array.Float64:
		extend(t, c.Name, x.Float64Values())
	case *array.Int64:
		extend(t, c.Name, x.Int64Values())
	case *array.String:
		s, err := texts(x)
		if err != nil {
			return err
		}
		extend(t, c.Name, s)
	case *array.Boolean:
		if x.Len() > 0 && x.Len() > 8*x.Data().Buffers()[1].Len() {
			return fmt.Errorf("there are fewer values than rows")
		}
		s := make([]bool, x.Len())
		for i := range s {
			s[i] = x.Value(i)
		}
		extend(t, c.Name, s)
	case *array.List:
		inner := x.ListValues()
		if inner.NullN() != 0 {
			return fmt.Errorf("%d list entries are null", inner.NullN())
		}
		switch v := inner.(type) {
		case *array.Float64:
			extend(t, c.Name, cut(x, v.Float64Values()))
		case *array.Int64:
			extend(t, c.Name, cut(x, v.Int64Values()))
		case *array.String:
			s, err := texts(v)
			if err != nil {
				return err
			}
			extend(t, c.Name, cut(x, s))
		}
	}
	return nil
}

func extend[T any](t *Table, name string, s []T) {
	if old := t.columns[name].([]T); len(old) > 0 {
		s = append(old[:len(old):len(old)], s...)
	}
	t.columns[name] = s
}

func texts(a *array.String) ([]string, error) {
	s := make([]string, a.Len())
	for i := range s {
		s[i] = a.Value(i)
		if !utf8.ValidString(s[i]) {
			return nil, fmt.Errorf("row %d is not UTF-8 text", i)
		}
	}
	return s, nil
}

// cut slices the flat values into rows; offsets out of order or range panic,
// which DecodeTable turns into an error.
func cut[T any](a *array.List, flat []T) [][]T {
	if a.Len() >= len(a.Offsets()) && a.Len() > 0 {
		panic("there are fewer lists than rows")
	}
	rows := make([][]T, a.Len())
	for i := range rows {
		from, to := a.ValueOffsets(i)
		rows[i] = flat[from:to:to]
	}
	return rows
}
