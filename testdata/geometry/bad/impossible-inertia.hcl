plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  inertia = ["100 g*mm2", "100 g*mm2", "900 g*mm2"]
  size = ["20 mm", "20 mm", "6 mm"]
}
