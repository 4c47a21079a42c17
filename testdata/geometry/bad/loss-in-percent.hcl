plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
}

joint "sandwich" {
  x           = "80 N/um"
  loss_factor = 5
}

lump "battery" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "100 g"
  size = ["40 mm", "20 mm", "10 mm"]
  mount {
    places      = [["10 mm", "5 mm"], ["-10 mm", "5 mm"], ["0 mm", "-5 mm"]]
    stiffness   = ["20 N/mm", "20 N/mm", "20 N/mm"]
    loss_factor = [15, 15, 12]
  }
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  size = ["20 mm", "20 mm", "6 mm"]
  grommets {
    places      = [["5 mm", "5 mm"], ["-5 mm", "5 mm"], ["0 mm", "-5 mm"]]
    stiffness   = ["20 N/mm", "20 N/mm", "20 N/mm"]
    loss_factor = 20
  }
}
