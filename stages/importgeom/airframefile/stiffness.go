package airframefile

// Stiffnesses above these are meant as rigid, and rounding would drown the frame in them: a block of steel 100 mm square and
// 2 mm thick has 1e12 N/m. Faces stiffer than the last, which a film of steel of 0.2 mm has, would hold the meshes of two
// plates together point by point and stiffen both.
const (
	stiffest      = 1e13 // N/m
	stiffestTurn  = 1e9  // N·m/rad
	stiffestFaces = 1e15 // N/m³
)

// yields refuses a stiffness that stands for a rigid connection; instead says what to write.
func (b *block) yields(name string, x, most float64, instead string) {
	if !(x > most) {
		return
	}
	text := "1e7 kN/mm"
	switch most {
	case stiffestTurn:
		text = "1e9 N*m/rad"
	case stiffestFaces:
		text = "1e6 N/mm3"
	}
	b.fail(b.hcl.Body.Attributes[name].Expr.Range(), "%s is above %s, stiffer than anything built; %s", name, text, instead)
}
