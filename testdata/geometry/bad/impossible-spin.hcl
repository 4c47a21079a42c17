plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
}

rotor "tail" {
  on          = plate.base
  at          = ["30 mm", "0 mm"]
  mass        = "20 g"
  height      = "8 mm"
  propeller_mass     = "4 g"
  propeller_diameter = "120 mm"
  diameter    = "22 mm"
  spin        = "clockwise"
  hover_speed = "15000 rpm"
  max_speed   = "30000 rpm"
  polar_inertia = "1 g*m^2"
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  size = ["20 mm", "20 mm", "6 mm"]
}
