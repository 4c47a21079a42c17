# The Dunlin: an invented one-piece frame with six rotors, for tests.

airframe "dunlin" {
  about = "one plate, six arms, two-bladed propellers, battery slung below"
}

plate "frame" {
  outline   = "cut/frame.dxf"
  layer     = "profile"
  thickness = "4 mm"
  material  = "carbon-quasi-isotropic"
}

rotor "r1" {
  on          = plate.frame
  at          = ["129.904 mm", "75 mm"]
  base        = "22 mm"
  mass        = "52 g"
  height      = "13 mm"
  hub_height  = "27 mm"
  spin        = "counterclockwise"
  hover_speed = "7800 rpm"
  max_speed   = "14000 rpm"
}

rotor "r2" {
  on          = plate.frame
  at          = ["0 mm", "150 mm"]
  base        = "22 mm"
  mass        = "52 g"
  height      = "13 mm"
  hub_height  = "27 mm"
  spin        = "clockwise"
  hover_speed = "7800 rpm"
  max_speed   = "14000 rpm"
}

rotor "r3" {
  on          = plate.frame
  at          = ["-129.904 mm", "75 mm"]
  base        = "22 mm"
  mass        = "52 g"
  height      = "13 mm"
  hub_height  = "27 mm"
  spin        = "counterclockwise"
  hover_speed = "7800 rpm"
  max_speed   = "14000 rpm"
}

rotor "r4" {
  on          = plate.frame
  at          = ["-129.904 mm", "-75 mm"]
  base        = "22 mm"
  mass        = "52 g"
  height      = "13 mm"
  hub_height  = "27 mm"
  spin        = "clockwise"
  hover_speed = "7800 rpm"
  max_speed   = "14000 rpm"
}

rotor "r5" {
  on          = plate.frame
  at          = ["0 mm", "-150 mm"]
  base        = "22 mm"
  mass        = "52 g"
  height      = "13 mm"
  hub_height  = "27 mm"
  spin        = "counterclockwise"
  hover_speed = "7800 rpm"
  max_speed   = "14000 rpm"
}

rotor "r6" {
  on          = plate.frame
  at          = ["129.904 mm", "-75 mm"]
  base        = "22 mm"
  mass        = "52 g"
  height      = "13 mm"
  hub_height  = "27 mm"
  spin        = "clockwise"
  hover_speed = "7800 rpm"
  max_speed   = "14000 rpm"
}

lump "battery" {
  on   = plate.frame
  side = "lower"
  at   = ["0 mm", "0 mm"]
  mass = "410 g"
  size = ["110 mm", "44 mm", "35 mm"]
  pad  = ["60 mm", "30 mm"]
}

gyro "stack" {
  on   = plate.frame
  at   = ["0 mm", "0 mm"]
  mass = "30 g"
  size = ["36 mm", "36 mm", "12 mm"]
  lift = "5 mm"
  grommets {
    places      = [["15.25 mm", "15.25 mm"], ["15.25 mm", "-15.25 mm"], ["-15.25 mm", "15.25 mm"], ["-15.25 mm", "-15.25 mm"]]
    height      = "6 mm"
    stiffness   = ["30 N/mm", "30 N/mm", "45 N/mm"]
    loss_factor = 0.15
    pad         = "6 mm"
  }
}
