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
  grommets {
    places    = [["10 mm", "10 mm"], ["-10 mm", "10 mm"], ["10 mm", "-10 mm"], ["-10 mm", "-10 mm"]]
    stiffness   = ["30 N/mm", "30 N/mm", "50 N/mm"]
    loss_factor = 0.5
    fractional {
      at    = "100 Hz"
      order = 0.2
    }
  }
}
