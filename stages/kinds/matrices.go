package kinds

import "hushframe/core/pipeline/artifact"

// MatricesKind is the stiffness and mass that `solve` assembled, for other solvers.
var MatricesKind = artifact.Kind{
	Name: "matrices", Version: 1,
	About: "stiffness and mass of the free airframe as text; without files when they were not asked for",
	Scalars: []artifact.Column{
		col("unknowns", artifact.Int, "", "order of the matrices"),
	},
	Tables: []artifact.TableSpec{
		{Name: "unknowns", About: "what each row of the matrices is", Columns: columns(
			col("unknown", artifact.Text, "", "part or body, place and component"),
			vecCols("place", "m", "place"),
		)},
	},
	Files: "stiffness (N/m, N, N*m) and mass (kg, kg*m, kg*m^2) in Matrix Market coordinate form, lower triangles",
}
