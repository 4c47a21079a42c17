# A small frame for tests: two arms bolted on a base plate, and a top plate on four standoffs.
# Dimensions are round, so that masses can be summed by hand.

airframe "twig" {
  about       = "two-armed test frame"
  all_up_mass = "190 g"
}

input "arm_thickness" {
  value = "4 mm"
  about = "plate the arms are cut from"
}

input "loss_factor" {
  value = 0.008
}

material "sheet" {
  like        = "carbon-0-90"
  E1          = "60 GPa"
  E2          = "56 GPa"
  density     = "1600 kg/m^3"
  loss_factor = input.loss_factor
  origin      = "test"
}

plate "base" {
  outline   = "cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "sheet"
  fibre     = "30 deg"
}

plate "arm_front" {
  outline   = "cut/arm.dxf"
  thickness = input.arm_thickness
  material  = "sheet"
  at        = ["16 mm", "0 mm", "2 mm"]
}

copy "arm_rear" {
  of     = plate.arm_front
  mirror = "x"
}

plate "top" {
  outline = "cut/top.dxf"
  plies = [
    { material = "sheet", thickness = "0.5 mm", angle = "0 deg" },
    { material = "sheet", thickness = "0.5 mm", angle = "45 deg" },
  ]
  at = ["0 mm", "0 mm", "22 mm"]
}

joint "sandwich" {
  x           = "80 N/um"
  y           = "80 N/um"
  rz          = "2000 N*m/rad"
  loss_factor = 0.02
  low         = 0.3
  high        = 3
}

bolts {
  clamp  = "6 mm"
  mass   = "1.5 g"
  joint  = joint.sandwich
  change = { "bolt-4" = { mass = "2 g" } }
}

standoff "post" {
  between    = [plate.base, plate.top]
  places     = [["35 mm", "15 mm"], ["35 mm", "-15 mm"], ["-35 mm", "15 mm"], ["-35 mm", "-15 mm"]]
  outer      = "5 mm"
  inner      = "3 mm"
  material   = "aluminium"
  clamp      = "6 mm"
  screw_mass = "0.5 g"
}

rotor "front" {
  on                 = plate.arm_front
  mass               = "30 g"
  height             = "10 mm"
  diameter           = "26 mm"
  length             = "18 mm"
  hub_height         = "24 mm"
  propeller_mass     = "4 g"
  propeller_diameter = "120 mm"
  blades             = 3
  spin               = "counterclockwise"
  hover_speed        = "15000 rpm"
  max_speed          = "30000 rpm"
}

rotor "rear" {
  on          = plate.arm_rear
  mass        = "34 g"
  height      = "12 mm"
  spin        = "clockwise"
  hover_speed = "15000 rpm"
  max_speed   = "30000 rpm"
}

lump "battery" {
  on   = plate.top
  at   = ["0 mm", "0 mm"]
  mass = "60 g"
  size = ["50 mm", "30 mm", "20 mm"]
  turn = "90 deg"
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  side = "lower"
  mass = "12 g"
  size = ["30 mm", "30 mm", "6 mm"]
  lift = "3 mm"
  grommets {
    places      = [["12 mm", "12 mm"], ["12 mm", "-12 mm"], ["-12 mm", "12 mm"], ["-12 mm", "-12 mm"]]
    stiffness   = ["30 N/mm", "30 N/mm", "50 N/mm"]
    loss_factor = 0.2
  }
}
