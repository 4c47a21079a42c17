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
  size = ["20 mm", "20 mm", "6 mm"]
}

rotor "fl" {
  on          = plate.base
  mass        = "30 g"
  height      = "10 mm"
  spin        = "clockwise"
  hover_speed = "15000 rpm"
  max_speed   = "30000 rpm"
}
