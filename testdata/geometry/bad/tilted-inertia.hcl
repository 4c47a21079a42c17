plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
}

gyro "stack" {
  on      = plate.base
  at      = ["0 mm", "0 mm"]
  mass    = "12 g"
  size    = ["20 mm", "20 mm", "6 mm"]
  inertia = ["500 g*mm2", "500 g*mm2", "800 g*mm2", "480 g*mm2", "0 g*mm2", "0 g*mm2"]
}
