plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
}

joint "sandwich" {
  x = "80 N/um"
  z = "-20 N/um"
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  size = ["20 mm", "20 mm", "6 mm"]
}
