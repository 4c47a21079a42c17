# The Sandpiper: an invented five-inch survey quadrotor, revision A.
# x forward, y left, z up; `at` is a point of a plate's lower face.
# Cut files are drawn by `go run ./jobs/sandpiper/draw`.

airframe "sandpiper" {
  about       = "five-inch survey frame, revision A: four separate arms in a sandwich, battery on top, camera in the nose"
  all_up_mass = "544 g"
  loss_floor  = 0.002
}

input "arm_thickness" {
  value = "5 mm"
  about = "carbon plate the arms are cut from"
}

input "plate_thickness" {
  value = "2 mm"
  about = "carbon plate of bottom, clamp and top"
}

input "carbon_modulus" {
  value = "55 GPa"
  about = "in-plane modulus of the carbon plate along and across"
}

input "carbon_density" {
  value = "1550 kg/m^3"
  about = "density of the carbon plate"
}

input "carbon_loss_factor" {
  value = 0.010
  about = "hysteretic loss factor of the carbon plate"
}

input "pressed_normal" {
  value = "40 N/mm3"
  about = "stiffness of the pressed faces of the sandwich, square to them"
}

input "pressed_shear" {
  value = "15 N/mm3"
  about = "the same along them, before they slip"
}

input "battery_mass" {
  value = "190 g"
  about = "battery with its lead"
}

material "plate-carbon" {
  like        = "carbon-0-90"
  E1          = input.carbon_modulus
  E2          = input.carbon_modulus
  density     = input.carbon_density
  loss_factor = input.carbon_loss_factor
  origin      = "supplier's sheet, not measured"
}

# --- the sandwich: bottom plate, four arms, clamp plate ---

plate "bottom" {
  outline   = "cut/bottom.dxf"
  layer     = "cut"
  thickness = input.plate_thickness
  material  = "plate-carbon"
}

plate "arm_fl" {
  outline   = "cut/arm.dxf"
  layer     = "cut"
  thickness = input.arm_thickness
  material  = "plate-carbon"
  at        = ["0 mm", "0 mm", input.plate_thickness]
  turn      = "47.070031 deg" # towards the motor at 80, 86 mm
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
  outline   = "cut/clamp.dxf"
  layer     = "cut"
  thickness = input.plate_thickness
  material  = "plate-carbon"
  at        = ["0 mm", "0 mm", quantity(number_in(input.plate_thickness, "mm") + number_in(input.arm_thickness, "mm"), "mm")]
}

plate "top" {
  outline   = "cut/top.dxf"
  layer     = "cut"
  thickness = input.plate_thickness
  material  = "plate-carbon"
  at        = ["0 mm", "0 mm", quantity(number_in(input.plate_thickness, "mm") + 28, "mm")]
}

# The eight sandwich bolts pass three plates; they are found from the holes. What they hold with
# follows from plates and screw; it is the first thing to correct from flight data.
joint "sandwich" {
  screw       = "3 mm"
  preload     = "600 N"
  loss_factor = 0.02
  low         = 0.2
  high        = 1.5
}

bolts {
  clamp = "6.5 mm"
  mass  = "1.4 g"
  joint = joint.sandwich
}

# Between the bolts bottom, arms and clamp press on each other, as far as rough carbon does.
pressed "faces" {
  plates      = [plate.bottom, plate.arm_fl, plate.arm_fr, plate.arm_rl, plate.arm_rr, plate.clamp]
  normal      = input.pressed_normal
  shear       = input.pressed_shear
  loss_factor = 0.03
  low         = 0.1
  high        = 5
  origin      = "a guess: bonded faces would have sixty times as much"
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
    stiffness   = ["12 N/mm", "12 N/mm", "25 N/mm"]
    loss_factor = [0.3, 0.3, 0.22]
    preload     = "15 N"
    pad         = "8 mm"
  }
}

lump "camera" {
  on   = plate.bottom
  at   = ["83 mm", "0 mm"]
  mass = "24 g"
  size = ["14 mm", "19 mm", "24 mm"]
  mount {
    kind        = "printed cheeks"
    places      = [["88 mm", "8 mm"], ["88 mm", "-8 mm"], ["78 mm", "8 mm"], ["78 mm", "-8 mm"]]
    height      = "6 mm"
    stiffness   = ["60 N/mm", "60 N/mm", "90 N/mm"]
    pad         = "5 mm"
    solid {
      at      = "150 Hz"
      rise    = 2
      peak_at = "200 Hz"
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

gyro "stack" {
  on   = plate.bottom
  at   = ["52 mm", "0 mm"]
  mass = "26 g"
  size = ["36 mm", "32 mm", "14 mm"]
  lift = "4 mm"
  grommets {
    places      = [["62 mm", "10 mm"], ["62 mm", "-10 mm"], ["42 mm", "10 mm"], ["42 mm", "-10 mm"]]
    height      = "6 mm"
    stiffness   = ["35 N/mm", "35 N/mm", "50 N/mm"]
    loss_factor = 0.15
    preload     = "3 N"
    fractional {
      at    = "200 Hz"
      order = 0.2
    }
    pad         = "6.5 mm"
  }
}
