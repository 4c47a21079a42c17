plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
}

plate "top" {
  outline   = "../frame/cut/top.dxf"
  thickness = "1 mm"
  material  = "glass"
  at        = ["0 mm", "0 mm", "1.5 mm"]
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  size = ["20 mm", "20 mm", "6 mm"]
}
