package kinds

import "hushframe/core/pipeline/artifact"

// Registry lists every kind of the product, but for the host's own.
func Registry() artifact.Registry {
	return artifact.NewRegistry(
		GeometryKind, PropertiesKind, MeshKind, ModesKind,
		SpectraKind, TransferKind, IdentifiedKind, FilteredKind,
		ComparisonKind,
		ResponseKind,
		DocumentKind, VerificationKind, MatricesKind,
		DifferenceKind,
	)
}
