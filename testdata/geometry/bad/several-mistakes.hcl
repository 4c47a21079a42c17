plate "base" {
  outline   = "../frame/cut/base.dxf"
  layr     = "cut"
  thickness = "2 kg"
  material  = "karbon"
}

gyro "stack" {
  on   = plate.bsae
  at   = ["0 mm", "0 mm"]
  mass = 12
  size = ["20 mm", "20 mm", "6 mm"]
}
