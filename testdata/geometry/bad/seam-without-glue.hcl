plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
}

plate "lid" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
  at        = ["0 mm", "0 mm", "2 mm"]
}

seam "bead" {
  between = [plate.base, plate.lid]
  from    = ["0 mm", "5 mm", "2 mm"]
  to      = ["20 mm", "5 mm", "2 mm"]
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  size = ["20 mm", "20 mm", "6 mm"]
}
