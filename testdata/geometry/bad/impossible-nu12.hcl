material "odd" {
  E1      = "120 GPa"
  E2      = "8 GPa"
  G12     = "4 GPa"
  nu12    = 4.5
  density = "1550 kg/m^3"
}

plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "odd"
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  size = ["20 mm", "20 mm", "6 mm"]
}
