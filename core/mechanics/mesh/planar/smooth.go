package planar

func (g *mesher) smooth() {}
