# The Sandpiper as it was "really" built: the hidden truth behind the flight
# recording. The nominal description (../airframe.hcl) does not know that the
# carbon is softer and not the same along and across, that the arms are 0.05 mm
# thin and cut 2 degrees off the weave, that the sandwich holds less
# well, that grommets, strap and camera mount are softer, that a cable runs along each arm, or that the
# rotors' gyroscopic moments couple roll and pitch of the arm tips (the last is
# added by the simulation).

airframe "sandpiper" {
  about       = "revision A as built"
  loss_floor  = 0.006
}

input "arm_thickness" {
  value = "4.95 mm"
  about = "carbon plate the arms are cut from"
}

input "plate_thickness" {
  value = "2 mm"
  about = "carbon plate of bottom, clamp and top"
}

input "carbon_modulus" {
  value = "53 GPa"
  about = "in-plane modulus of the carbon plate along and across"
}

input "carbon_density" {
  value = "1530 kg/m^3"
  about = "density of the carbon plate"
}

input "carbon_loss_factor" {
  value = 0.014
  about = "hysteretic loss factor of the carbon plate"
}

input "battery_mass" {
  value = "194 g"
  about = "battery with its lead"
}

material "plate-carbon" {
  like        = "carbon-0-90"
  E1          = input.carbon_modulus
  E2          = "50 GPa"
  G12         = "4.0 GPa"
  G13         = "2.8 GPa"
  G23         = "2.8 GPa"
  density     = input.carbon_density
  loss_factor = input.carbon_loss_factor
  origin      = "the truth of this invented frame"
}

# --- the sandwich: bottom plate, four arms, clamp plate ---

plate "bottom" {
  outline   = "../cut/bottom.dxf"
  layer     = "cut"
  thickness = input.plate_thickness
  material  = "plate-carbon"
}

plate "arm_fl" {
  outline   = "../cut/arm.dxf"
  layer     = "cut"
  thickness = input.arm_thickness
  material  = "plate-carbon"
  at        = ["0 mm", "0 mm", input.plate_thickness]
  turn      = "47.070031 deg"
  fibre     = "2 deg"
}

copy "arm_fr" {
  of     = plate.arm_fl
  mirror = "y"
}

copy "arm_rl" {
  of     = plate.arm_fl
  mirror = "x"
}

copy "arm_rr" {
  of     = plate.arm_fr
  mirror = "x"
}

plate "clamp" {
  outline   = "../cut/clamp.dxf"
  layer     = "cut"
  thickness = input.plate_thickness
  material  = "plate-carbon"
  at        = ["0 mm", "0 mm", quantity(number_in(input.plate_thickness, "mm") + number_in(input.arm_thickness, "mm"), "mm")]
}

plate "top" {
  outline   = "../cut/top.dxf"
  layer     = "cut"
  thickness = input.plate_thickness
  material  = "plate-carbon"
  at        = ["0 mm", "0 mm", quantity(number_in(input.plate_thickness, "mm") + 28, "mm")]
}

joint "sandwich" {
  x           = "24 kN/mm"
  y           = "24 kN/mm"
  z           = "150 kN/mm"
  rx          = "400 N*m/rad"
  ry          = "400 N*m/rad"
  rz          = "260 N*m/rad"
  loss_factor = 0.03
}

bolts {
  clamp = "6.5 mm"
  mass  = "1.4 g"
  joint = joint.sandwich
}

pressed "faces" {
  plates      = [plate.bottom, plate.arm_fl, plate.arm_fr, plate.arm_rl, plate.arm_rr, plate.clamp]
  normal      = "18 N/mm3"
  shear       = "6 N/mm3"
  loss_factor = 0.05
}

standoff "nose" {
  between    = [plate.bottom, plate.top]
  places     = [["74 mm", "17 mm"], ["74 mm", "-17 mm"]]
  outer      = "5 mm"
  inner      = "2.6 mm"
  material   = "aluminium"
  clamp      = "6 mm"
  screw_mass = "0.7 g"
}

standoff "tail" {
  between    = [plate.bottom, plate.top]
  places     = [["-64 mm", "15 mm"], ["-64 mm", "-15 mm"]]
  outer      = "5 mm"
  inner      = "2.6 mm"
  material   = "aluminium"
  clamp      = "6 mm"
  screw_mass = "0.7 g"
}

standoff "waist" {
  between    = [plate.clamp, plate.top]
  places     = [["0 mm", "25 mm"], ["0 mm", "-25 mm"]]
  outer      = "5 mm"
  inner      = "2.6 mm"
  material   = "aluminium"
  clamp      = "6 mm"
  screw_mass = "0.7 g"
}

# --- rotors: motor on its full base, three-bladed propeller ---

rotor "fl" {
  on                 = plate.arm_fl
  at                 = ["80 mm", "86 mm"]
  base               = "24 mm"
  stator {
    mass     = "15 g"
    height   = "7.5 mm"
    diameter = "23 mm"
    length   = "10 mm"
  }
  bell {
    mass     = "18 g"
    height   = "15.75 mm"
    diameter = "28 mm"
    inner    = "23 mm"
    length   = "13 mm"
  }
  hub_height         = "25 mm"
  propeller_mass     = "4.2 g"
  propeller_diameter = "127 mm"
  blades             = 3
  spin               = "clockwise"
  hover_speed        = "16000 rpm"
  max_speed          = "33000 rpm"
  balance_grade      = "6.3 mm/s"
}

rotor "fr" {
  on                 = plate.arm_fr
  at                 = ["80 mm", "-86 mm"]
  base               = "24 mm"
  stator {
    mass     = "15 g"
    height   = "7.5 mm"
    diameter = "23 mm"
    length   = "10 mm"
  }
  bell {
    mass     = "18 g"
    height   = "15.75 mm"
    diameter = "28 mm"
    inner    = "23 mm"
    length   = "13 mm"
  }
  hub_height         = "25 mm"
  propeller_mass     = "4.2 g"
  propeller_diameter = "127 mm"
  blades             = 3
  spin               = "counterclockwise"
  hover_speed        = "16000 rpm"
  max_speed          = "33000 rpm"
  balance_grade      = "6.3 mm/s"
}

rotor "rl" {
  on                 = plate.arm_rl
  at                 = ["-80 mm", "86 mm"]
  base               = "24 mm"
  stator {
    mass     = "15 g"
    height   = "7.5 mm"
    diameter = "23 mm"
    length   = "10 mm"
  }
  bell {
    mass     = "18 g"
    height   = "15.75 mm"
    diameter = "28 mm"
    inner    = "23 mm"
    length   = "13 mm"
  }
  hub_height         = "25 mm"
  propeller_mass     = "4.2 g"
  propeller_diameter = "127 mm"
  blades             = 3
  spin               = "counterclockwise"
  hover_speed        = "16000 rpm"
  max_speed          = "33000 rpm"
  balance_grade      = "6.3 mm/s"
}

rotor "rr" {
  on                 = plate.arm_rr
  at                 = ["-80 mm", "-86 mm"]
  base               = "24 mm"
  stator {
    mass     = "15 g"
    height   = "7.5 mm"
    diameter = "23 mm"
    length   = "10 mm"
  }
  bell {
    mass     = "18 g"
    height   = "15.75 mm"
    diameter = "28 mm"
    inner    = "23 mm"
    length   = "13 mm"
  }
  hub_height         = "25 mm"
  propeller_mass     = "4.2 g"
  propeller_diameter = "127 mm"
  blades             = 3
  spin               = "clockwise"
  hover_speed        = "16000 rpm"
  max_speed          = "33000 rpm"
  balance_grade      = "6.3 mm/s"
}

# --- what the frame carries ---

lump "battery" {
  on   = plate.top
  at   = ["-8 mm", "0 mm"]
  mass = input.battery_mass
  size = ["75 mm", "36 mm", "32 mm"]
  mount {
    like        = "strap-over-foam"
    places      = [["20 mm", "11 mm"], ["20 mm", "-11 mm"], ["-36 mm", "11 mm"], ["-36 mm", "-11 mm"]]
    stiffness   = ["10.5 N/mm", "10.5 N/mm", "22 N/mm"]
    loss_factor = [0.34, 0.34, 0.28]
    pad         = "8 mm"
  }
}

lump "camera" {
  on   = plate.bottom
  at   = ["83 mm", "0 mm"]
  mass = "26 g"
  size = ["14 mm", "19 mm", "24 mm"]
  mount {
    kind        = "printed cheeks"
    places      = [["88 mm", "8 mm"], ["88 mm", "-8 mm"], ["78 mm", "8 mm"], ["78 mm", "-8 mm"]]
    height      = "6 mm"
    stiffness   = ["52 N/mm", "52 N/mm", "80 N/mm"]
    pad         = "5 mm"
    solid {
      at      = "150 Hz"
      rise    = 2.3
      peak_at = "180 Hz"
    }
  }
}

lump "receiver" {
  on   = plate.bottom
  side = "upper"
  at   = ["-32 mm", "0 mm"]
  mass = "14 g"
  size = ["12 mm", "22 mm", "8 mm"]
}

# A motor cable and its tie on each arm.
lump "cable_fl" {
  on   = plate.arm_fl
  at   = ["42 mm", "45.1 mm"]
  mass = "1.6 g"
  size = ["8 mm", "8 mm", "3 mm"]
  pad  = ["7 mm", "7 mm"]
}

lump "cable_fr" {
  on   = plate.arm_fr
  at   = ["42 mm", "-45.1 mm"]
  mass = "1.6 g"
  size = ["8 mm", "8 mm", "3 mm"]
  pad  = ["7 mm", "7 mm"]
}

lump "cable_rl" {
  on   = plate.arm_rl
  at   = ["-42 mm", "45.1 mm"]
  mass = "1.6 g"
  size = ["8 mm", "8 mm", "3 mm"]
  pad  = ["7 mm", "7 mm"]
}

lump "cable_rr" {
  on   = plate.arm_rr
  at   = ["-42 mm", "-45.1 mm"]
  mass = "1.6 g"
  size = ["8 mm", "8 mm", "3 mm"]
  pad  = ["7 mm", "7 mm"]
}

gyro "stack" {
  on   = plate.bottom
  at   = ["52 mm", "0 mm"]
  mass = "26 g"
  size = ["36 mm", "32 mm", "14 mm"]
  lift = "4 mm"
  grommets {
    places      = [["62 mm", "10 mm"], ["62 mm", "-10 mm"], ["42 mm", "10 mm"], ["42 mm", "-10 mm"]]
    height      = "6 mm"
    stiffness   = ["31 N/mm", "31 N/mm", "45 N/mm"]
    loss_factor = 0.20
    fractional {
      at    = "200 Hz"
      order = 0.25
    }
    pad         = "6.5 mm"
  }
}
