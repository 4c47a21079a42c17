# One arm of the Sandpiper, free in space: nothing but its carbon and a gyro of next to no mass, which every
# airframe has.

airframe "sandpiper-arm" {
  about = "an arm alone"
}

input "thickness" {
  value = "5 mm"
  about = "of the carbon plate"
}

plate "arm" {
  outline   = "../sandpiper/cut/arm.dxf"
  layer     = "cut"
  thickness = input.thickness
  material  = "carbon-0-90"
}

gyro "chip" {
  on   = plate.arm
  at   = ["60 mm", "0 mm"]
  mass = "0.1 g"
  size = ["3 mm", "3 mm", "1 mm"]
}
