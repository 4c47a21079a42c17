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
  at        = ["0 mm", "0 mm", "5 mm"]
}

pressed "faces" {
  plates = [plate.base, plate.lid]
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  size = ["20 mm", "20 mm", "6 mm"]
}
