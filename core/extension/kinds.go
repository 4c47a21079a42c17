package extension

import "hushframe/core/pipeline/artifact"

// Kinds lists the kinds of the folders that calls of element types and readers exchange. They are written and
// checked like artifacts but never kept.
func Kinds() artifact.Registry {
	return artifact.NewRegistry(shapeKind, batchKind, motionsKind, matricesKind, energiesKind, headerKind, samplesKind)
}

func col(name string, t artifact.ColumnType, unit, about string) artifact.Column {
	return artifact.Column{Name: name, Type: t, Unit: unit, About: about}
}

var shapeKind = artifact.Kind{
	Name: "element-shape", Version: 1,
	About:   "where an element type has its unknowns",
	Scalars: []artifact.Column{col("nodes", artifact.Int, "", "nodes of the triangle that the element stands on: 3, or 6 with mid-side nodes 0-1, 1-2, 2-0")},
	Tables: []artifact.TableSpec{{Name: "points", About: "places with u_x, u_y, u_z each; none for an element with six unknowns per node", Columns: []artifact.Column{
		col("node", artifact.Int, "", "node of the triangle"),
		col("height", artifact.Float, "1", "over the mid-surface in half thicknesses, -1 lower face, 1 upper"),
	}}},
}

// batchTables describe elements; element-batch is them alone.
var batchTables = []artifact.TableSpec{
	{Name: "elements", About: "elements in the order of the call", Columns: []artifact.Column{
		col("section", artifact.Int, "", "row of sections"),
		col("nodes", artifact.FloatList, "m", "x, y, z of each node in the element frame, node by node"),
	}},
	{Name: "sections", About: "stiffness and inertia per unit of the mid-surface, in the element frame", Columns: []artifact.Column{
		col("thickness", artifact.Float, "m", "thickness"),
		col("a", artifact.FloatList, "N/m", "membrane stiffness, 3x3 row by row, order x, y, xy"),
		col("b", artifact.FloatList, "N", "coupling stiffness, likewise"),
		col("d", artifact.FloatList, "N*m", "bending stiffness, likewise"),
		col("shear", artifact.FloatList, "N/m", "transverse shear stiffness, 2x2 row by row, order xz, yz"),
		col("mass", artifact.Float, "kg/m^2", "mass"),
		col("coupling", artifact.Float, "kg/m", "first moment of mass about the mid-surface"),
		col("rotary", artifact.Float, "kg", "second moment of mass"),
	}},
	{Name: "plies", About: "what the sections are made of, section by section, from the lower face to the upper", Columns: []artifact.Column{
		col("section", artifact.Int, "", "row of sections"),
		col("thickness", artifact.Float, "m", "thickness"),
		col("angle", artifact.Float, "rad", "direction 1, counterclockwise from x"),
		col("e1", artifact.Float, "Pa", "Young's modulus along 1"), col("e2", artifact.Float, "Pa", "along 2"),
		col("g12", artifact.Float, "Pa", "in-plane shear modulus"), col("nu12", artifact.Float, "1", "Poisson's ratio"),
		col("g13", artifact.Float, "Pa", "transverse shear modulus"), col("g23", artifact.Float, "Pa", "transverse shear modulus"),
		col("density", artifact.Float, "kg/m^3", "density"),
	}},
}

var batchKind = artifact.Kind{Name: "element-batch", Version: 1, About: "elements to compute", Tables: batchTables}

var motionsKind = artifact.Kind{
	Name: "element-motions", Version: 1,
	About: "elements and their motions",
	Tables: append(append([]artifact.TableSpec(nil), batchTables...), artifact.TableSpec{
		Name: "motions", About: "one row per element", Columns: []artifact.Column{
			col("unknowns", artifact.FloatList, "m, rad", "values of the unknowns, motion by motion"),
		}}),
}

var matricesKind = artifact.Kind{
	Name: "element-matrices", Version: 1,
	About: "matrices of a batch",
	Tables: []artifact.TableSpec{{Name: "matrices", About: "one row per element: lower triangles, row by row", Columns: []artifact.Column{
		col("stiffness", artifact.FloatList, "N/m, N, N*m", "stiffness over the unknowns"),
		col("mass", artifact.FloatList, "kg, kg*m, kg*m^2", "consistent mass"),
	}}},
}

var energiesKind = artifact.Kind{
	Name: "element-energies", Version: 1,
	About: "strain energies of a batch",
	Tables: []artifact.TableSpec{{Name: "energies", About: "one row per element", Columns: []artifact.Column{
		col("energies", artifact.FloatList, "J", "in-plane, bending, twist and shear energy, motion by motion"),
	}}},
}

var headerKind = artifact.Kind{
	Name: "recording-header", Version: 1,
	About: "what a recording holds",
	Scalars: []artifact.Column{
		col("rate", artifact.Float, "Hz", "sample rate that the recording states, 0 if none"),
		col("timed", artifact.Truth, "", "the reader delivers times by itself, so that no time column is named"),
	},
	Tables: []artifact.TableSpec{
		{Name: "columns", About: "columns in the order of the recording", Columns: []artifact.Column{
			col("name", artifact.Text, "", "as in the recording"),
			col("unit", artifact.Text, "", "as the recording states it, empty if it does not"),
			col("text", artifact.Truth, "", "holds something else than numbers"),
		}},
		{Name: "notes", About: "facts that the reader guessed or noticed", Columns: []artifact.Column{col("text", artifact.Text, "", "one line, no full stop")}},
	},
}

var samplesKind = artifact.Kind{
	Name: "recording-samples", Version: 1,
	About: "samples of the requested columns",
	Tables: []artifact.TableSpec{
		{Name: "batches", About: "stretches of neighbouring rows, in order", Columns: []artifact.Column{
			col("first", artifact.Int, "", "number of the first row, from 1"),
			col("rows", artifact.Int, "", "number of rows"),
			col("origin", artifact.Float, "s", "value of the time column in the first row of the recording"),
			col("time", artifact.FloatList, "s", "time since the first row of the recording, per row; empty without times"),
		}},
		{Name: "values", About: "samples, batch by batch, and in a batch by requested column", Columns: []artifact.Column{
			col("batch", artifact.Int, "", "row of batches"),
			col("column", artifact.Int, "", "index among the requested columns"),
			col("values", artifact.FloatList, "", "one per row, in the unit of the recording; NaN is no sample"),
		}},
		{Name: "notes", About: "facts met on the way, such as an incomplete last row", Columns: []artifact.Column{col("text", artifact.Text, "", "one line, no full stop")}},
		{Name: "findings", About: "faults of the recording that leave the rest usable", Columns: []artifact.Column{
			col("what", artifact.Text, "", "one or two words"),
			col("where", artifact.Text, "", "column of the recording, empty for the whole of it"),
			col("extent", artifact.Text, "", "how much, and where in time, rows or frequency"),
			col("consequence", artifact.Text, "", "what it does to what is computed"),
		}},
	},
}
