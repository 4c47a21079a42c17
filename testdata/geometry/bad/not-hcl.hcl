plate "base" {
  outline = "base.dxf
